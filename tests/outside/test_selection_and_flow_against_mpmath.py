"""Equilibria, times, limits of flow, fixation and stationary spread against mpmath.

mpmath (arbitrary precision, general-purpose): roots of the plain recursions, maxima by bisection on
their derivative, and adaptive quadrature of the integrals as the papers print them (Kimura 1962,
Kimura & Ohta 1969, Wright 1937; formulas from memory). Only double rounding may lie between.
"""

import mpmath as mp
import pytest
from numpy.testing import assert_allclose

from rescue_planner.theory import balance, diffusion, equilibria, stationary, swamping, times

DOUBLE = 1e-11  # quadrature panels and conditioning leave a few digits of a double
TRIPLES = [(1.0, 0.97, 0.9), (1.0, 0.75, 0.7), (0.9, 1.0, 0.7), (1.2, 1.0, 1.1)]


@pytest.fixture(autouse=True)
def _thirty_digits():
    with mp.workdps(30):
        yield


def selected(p, w):
    q = 1 - p
    mean = p * p * w[0] + 2 * p * q * w[1] + q * q * w[2]
    return p * (p * w[0] + q * w[1]) / mean


def exact(w):
    return [mp.mpf(x) for x in w]


@pytest.mark.parametrize("w", TRIPLES)
def test_that_selection_is_fastest_where_mpmath_finds_no_slope(w):
    w_ = exact(w)
    at = mp.mpf(float(equilibria.fastest_at(w)))
    slope = mp.diff(lambda p: selected(p, w_) - p, at)
    curve = mp.diff(lambda p: selected(p, w_) - p, at, 2)
    assert abs(slope / curve) < DOUBLE  # a Newton step from there


@pytest.mark.parametrize("w", TRIPLES)
@pytest.mark.parametrize("p", [0.05, 0.4, 0.9])
def test_that_slopes_are_mpmaths_derivative(w, p):
    slope = mp.diff(lambda x: selected(x, exact(w)), mp.mpf(p))
    assert_allclose(equilibria.slope_of_selection(p, w), float(slope), rtol=DOUBLE)


@pytest.mark.parametrize("w", [TRIPLES[0], TRIPLES[1], (1.0, 1.0, 0.8), (1.0, 0.8, 0.8)])
@pytest.mark.parametrize(("m", "donor"), [(0.02, 0.0), (0.05, 0.02), (0.2, 0.6)])
def test_that_equilibria_under_flow_are_mpmaths_roots(w, m, donor):
    w_, m_, d = exact(w), mp.mpf(m), mp.mpf(donor)

    def moved(p):
        return (1 - m_) * selected(p, w_) + m_ * d - p

    # numerator of the rational function from four of its values, then all roots of that cubic
    points = [mp.mpf(k) / 3 for k in range(4)]
    means = [p * p * w_[0] + 2 * p * (1 - p) * w_[1] + (1 - p) ** 2 * w_[2] for p in points]
    system = mp.matrix([[p**k for k in (3, 2, 1, 0)] for p in points])
    right = mp.matrix([moved(p) * mean for p, mean in zip(points, means, strict=True)])
    cubic = [c if abs(c) > mp.mpf(10) ** -25 else mp.mpf(0) for c in mp.lu_solve(system, right)]
    while cubic[0] == 0:
        cubic.pop(0)
    degree = len(cubic) - 1
    companion = mp.zeros(degree)
    for k in range(degree):
        companion[0, k] = -cubic[k + 1] / cubic[0]
        if k:
            companion[k, k - 1] = 1
    roots = mp.eig(companion, left=False, right=False)
    real = sorted(
        float(mp.re(r)) for r in roots if abs(mp.im(r)) < 1e-20 and -1e-20 < mp.re(r) < 1 + 1e-20
    )
    found = swamping.flow_equilibria(w, m, donor).p
    assert_allclose(found[: len(real)], real, rtol=DOUBLE, atol=1e-15)
    assert all(x != x for x in found[len(real) :])


@pytest.mark.parametrize("w", [*TRIPLES[:2], (1.0, 0.72, 0.7), (1.0, 0.98 + 1e-3, 0.98)])
def test_that_the_critical_flow_is_mpmaths_maximum(w):
    w_ = exact(w)

    def borne(p):
        q = 1 - p
        of_a = p * w_[0] + q * w_[1]
        return 1 - (p * of_a + q * (p * w_[1] + q * w_[2])) / of_a

    grid = [mp.mpf(k) / 400 for k in range(401)]
    best = max(grid, key=borne)
    low, high = max(best - mp.mpf(1) / 400, mp.mpf(0)), min(best + mp.mpf(1) / 400, mp.mpf(1))
    for _ in range(120):  # golden-free thirds: the function has one peak between the neighbours
        a, b = low + (high - low) / 3, high - (high - low) / 3
        low, high = (a, high) if borne(a) < borne(b) else (low, b)
    assert_allclose(swamping.critical_flow(w).m, float(borne((low + high) / 2)), rtol=DOUBLE)


@pytest.mark.parametrize(
    ("u", "s", "h", "f"), [(1e-6, 0.2, 0.02, 0.05), (1e-4, 0.01, 0.25, 0.0), (1e-5, 1.0, 0.0, 0.1)]
)
def test_that_the_balance_is_mpmaths_root(u, s, h, f):
    u_, s_, h_, f_ = exact((u, s, h, f))

    def left_over(q):
        p = 1 - q
        both, one = p * p + f_ * p * q, 2 * p * q * (1 - f_)
        mean = both + one * (1 - h_ * s_) + (1 - both - one) * (1 - s_)
        return (1 - u_) * (both + one * (1 - h_ * s_) / 2) / mean - p

    root = mp.findroot(left_over, mp.mpf(float(balance.harmful_frequency(u, s, h, f))) * 1.01)
    assert_allclose(balance.harmful_frequency(u, s, h, f), float(root), rtol=DOUBLE)


@pytest.mark.parametrize(("s", "h"), [(0.1, 0.5), (0.5, 0.0), (0.3, 1.0), (0.02, 0.3)])
def test_that_times_are_mpmaths_integrals(s, h):
    s_, h_ = mp.mpf(s), mp.mpf(h)
    low, high = mp.mpf("0.01"), mp.mpf("0.99")

    def kept(x):  # mean fitness over its slope against 1, 1 - h s, 1 - s
        mean = 1 - 2 * x * (1 - x) * h_ * s_ - (1 - x) ** 2 * s_
        return mean / (x * (1 - x) * s_ * (x * h_ + (1 - x) * (1 - h_)))

    whole = mp.quad(kept, mp.linspace(low, high, 20))
    w = [1.0, float(1 - h_ * s_), float(1 - s_)]
    # fitness as doubles: s carries an error of 1e-16 / s
    assert_allclose(times.generations_by_integral(0.01, 0.99, w), float(whole), rtol=1e-10)
    weak = mp.quad(
        lambda x: 1 / (x * (1 - x) * s_ * (x * h_ + (1 - x) * (1 - h_))),
        mp.linspace(low, high, 20),
    )
    assert_allclose(times.generations_weak(0.01, 0.99, s, h), float(weak), rtol=DOUBLE)


@pytest.mark.parametrize(
    ("p", "ne", "s", "h"),
    [(0.01, 50, 0.1, 1.0), (0.1, 200, -0.02, 0.0), (0.1, 25, 0.02, 5.0), (0.3, 2000, 0.02, 0.25)],
)
def test_that_fixation_is_kimuras_integral(p, ne, s, h):
    scale, h_, p_ = 2 * mp.mpf(ne) * mp.mpf(s), mp.mpf(h), mp.mpf(p)

    def g(x):
        return mp.exp(-scale * ((2 * h_ - 1) * x * (1 - x) + x))

    cuts = mp.linspace(0, 1, 33)
    whole = mp.quad(g, cuts)
    part = mp.quad(g, [p_ * x for x in cuts])
    assert_allclose(diffusion.fixation(p, ne, s, h), float(part / whole), rtol=DOUBLE)


@pytest.mark.parametrize(("p", "ne", "s", "h"), [(0.1, 20, 0.1, 0.0), (0.3, 30, -0.04, 0.8)])
def test_that_the_time_to_fixation_is_kimuras_and_ohtas_integral(p, ne, s, h):
    scale, h_, p_ = 2 * mp.mpf(ne) * mp.mpf(s), mp.mpf(h), mp.mpf(p)
    with mp.workdps(15):  # integrals within integrals

        def g(x):
            return mp.exp(-scale * ((2 * h_ - 1) * x * (1 - x) + x))

        whole = mp.quad(g, [0, 0.5, 1])

        def u(x):
            return mp.quad(g, [0, x]) / whole

        def psi(x):
            return 4 * ne * whole / (x * (1 - x) * g(x))

        above = mp.quad(lambda x: psi(x) * u(x) * mp.quad(g, [x, 1]) / whole, [p_, 1])
        below = mp.quad(lambda x: psi(x) * u(x) ** 2, [0, p_])
        time = above + (1 - u(p_)) / u(p_) * below
    assert_allclose(diffusion.time_to_fixation(p, ne, s, h), float(time), rtol=1e-9)


@pytest.mark.parametrize("powered", [True, False])
@pytest.mark.parametrize(("m", "s", "h"), [(0.04, 0.1, 0.5), (0.01, -0.1, 0.0), (0.2, 0.05, 1.0)])
def test_that_stationary_moments_are_mpmaths(m, s, h, powered):
    n, donor = 25, mp.mpf("0.3")
    a, b = 4 * n * mp.mpf(m) * donor, 4 * n * mp.mpf(m) * (1 - donor)
    s_, h_ = mp.mpf(s), mp.mpf(h)

    def density(odds):  # over the log odds, where nothing is infinite at an end
        x = 1 / (1 + mp.exp(-odds))
        gain = s_ * (2 * h_ * x + (1 - 2 * h_) * x * x)
        power = (1 + gain) ** (2 * n) if powered else mp.exp(2 * n * gain)
        return power * x**a * (1 - x) ** b

    # the tails fade as exp(-a |odds|): beyond these less than 1e-20 is left
    cuts = [*mp.linspace(-50 / a - 5, 50 / b + 5, 60)]

    def moment(k):
        return mp.quad(lambda o: density(o) / (1 + mp.exp(-o)) ** k, cuts)

    with mp.workdps(20):
        whole = moment(0)
        mean = moment(1) / whole
        variance = moment(2) / whole - mean**2
    found = stationary.with_selection(
        stationary.Forces(n, m, 0.3), s, h, fitness_to_the_power=powered
    )
    assert_allclose(found, (float(mean), float(variance)), rtol=1e-10)
