"""The exact one-locus chain.

Check values: derived with dense matrices and with 30-digit arithmetic, 12 digits; the model after
Fisher 1930, Wright 1931, Ewens 2004, from memory.
"""

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st
from numpy.testing import assert_allclose

from rescue_planner.theory import chain, diversity, flow, selection

DIGITS = 1e-11  # the check values are printed to 12 digits
exact = settings(derandomize=True, deadline=None)
unit = st.floats(0.0, 1.0, allow_subnormal=False)
NEUTRAL = (1.0, 1.0, 1.0)


def for_allele(s, h):
    """Fitness 1 + s, 1 + hs, 1."""
    return np.array([1.0 + s, 1.0 + h * s, 1.0])


def against_other(s, h):
    """Fitness 1, 1 - hs, 1 - s."""
    return np.array([1.0, 1.0 - h * s, 1.0 - s])


def at_state(state, n):
    mass = np.zeros(n + 1)
    mass[state] = 1.0
    return mass


def run(mass, sizes, fitness, flows=None, donor=0.0):
    """Selection, then flow, then sampling; `sizes` are gene copies entered, one per step."""
    course = []
    for t, n in enumerate(sizes):
        x = selection.after_selection(chain.frequencies(mass.size - 1), fitness)
        m = 0.0 if flows is None else flows[t]
        mass = chain.step(mass, flow.mixed(x, [donor], np.array([m])), n)
        course.append(mass)
    return course


@pytest.mark.parametrize(
    ("ne", "n"), [(8, 16), (8.24, 16), (8.25, 17), (8.3, 17), (1.0, 2), (0.6, 2), (16.1, 32)]
)
def test_that_gene_copies_are_rounded_half_up_and_at_least_two(ne, n):
    assert chain.copies(ne) == n


CHANGING = [  # fitness, E[p], Var(p), E[H], lost, fixed after 50 -> 10 -> 10 -> 25 -> 50
    (NEUTRAL, 0.3, 0.026122845, 0.36775431, 0.0160058899958, 2.52118380766e-6),
    (
        for_allele(0.1, 0.5),
        0.338914271561,
        0.028669810936,
        0.390763154315,
        0.0115571818188,
        5.35790079852e-6,
    ),
    (
        np.array([0.8, 1, 1]),
        0.251958292653,
        0.0194074703466,
        0.338135682139,
        0.0213955454546,
        3.89159485388e-7,
    ),
]


@pytest.mark.parametrize("row", CHANGING)
def test_that_a_bottleneck_gives_the_worked_distribution(row):
    """Derived: breeding adults 50 -> 10 -> 10 -> 25 -> 50, start 30 of 100 copies."""
    fitness, mean, variance, h, lost, fixed = row
    end = run(at_state(30, 100), [20, 20, 50, 100], fitness)[-1]
    assert_allclose(chain.mean(end), mean, rtol=DIGITS)
    assert_allclose(chain.sd(end) ** 2, variance, rtol=DIGITS)
    assert_allclose(chain.heterozygosity(end), h, rtol=DIGITS)
    assert_allclose(1 - chain.share_kept(end), lost, rtol=DIGITS, atol=1e-13)
    assert_allclose(chain.share_fixed(end), fixed, rtol=DIGITS, atol=1e-13)


def test_that_the_first_step_into_a_bottleneck_is_one_binomial():
    """Derived: 0.7^20 and 0.3^20."""
    first = run(at_state(30, 100), [20], NEUTRAL)[0]
    assert_allclose(first[0], 0.000797922662976, rtol=DIGITS)
    assert_allclose(first[-1], 3.486784401e-11, rtol=DIGITS)
    assert_allclose(chain.sd(first) ** 2, 0.0105, rtol=1e-12)


FLOWING = [  # N, m, s, h, t, E[p], E[H], lost; local allele, donor without it
    (10, 0.05, 0.1, 0.5, 20, (0.460200853972, 0.34002614514, 0.100904238674)),
    (10, 0.05, 0.1, 0.5, 50, (0.185502465998, 0.154214462748, 0.585028311324)),
    (25, 0.02, 0.0, 0.5, 50, (0.364169680087, 0.312683015825, 0.151309951063)),
    (25, 0.02, 0.1, 1.0, 50, (0.677351479181, 0.315258436091, 0.0257227005907)),
    (25, 0.1, 0.1, 0.5, 50, (0.0276332890722, 0.0425409496037, 0.811403810721)),
    (50, 0.02, 0.1, 0.5, 50, (0.637552434222, 0.405126551766, 0.000725620665407)),
]


@pytest.mark.parametrize(("n", "m", "s", "h", "t", "stated"), FLOWING)
def test_that_flow_drift_and_selection_give_the_worked_values(n, m, s, h, t, stated):
    """Derived."""
    end = run(at_state(2 * n, 2 * n), [2 * n] * t, against_other(s, h), [m] * t)[-1]
    got = (chain.mean(end), chain.heterozygosity(end), 1 - chain.share_kept(end))
    assert_allclose(got, stated, rtol=DIGITS, atol=1e-13)


PULSED = [  # N, s; E[p] and E[H] at 5, E[p], E[H] and lost at 20
    (10, 0.0, (0.7229503125, 0.325109456711, 0.494512968385, 0.288039918151, 0.138535773)),
    (25, 0.1, (0.754302768693, 0.34303383025, 0.634215985869, 0.384609435574, 0.00218218028)),
    (50, 0.1, (0.754960912937, 0.356003408047, 0.642276844173, 0.419205767216, 6.48583764e-6)),
]


@pytest.mark.parametrize(("n", "s", "stated"), PULSED)
def test_that_a_pulse_then_a_trickle_gives_the_worked_values(n, s, stated):
    """Derived; chances of loss printed to nine digits."""
    course = run(at_state(2 * n, 2 * n), [2 * n] * 20, against_other(s, 0.5), [0.2] + [0.025] * 19)
    at_5, at_20 = course[4], course[19]
    got = [f(mass) for mass in (at_5, at_20) for f in (chain.mean, chain.heterozygosity)]
    assert_allclose(got, stated[:4], rtol=DIGITS)
    assert_allclose(1 - chain.share_kept(at_20), stated[4], rtol=1e-8)


def test_that_a_rescue_allele_can_miss_the_boat():
    """Derived: N = 10, s = 0.2; absent after one release with 0.8^20."""
    w = for_allele(0.25, 0.5)  # 1, 0.9, 0.8 scaled: only ratios count
    course = run(at_state(0, 20), [20] * 20, w, [0.2] + [0.025] * 19, donor=1.0)
    assert_allclose(course[0][0], 0.011529215, rtol=1e-7)
    assert_allclose(chain.mean(course[19]), 0.758274726577, rtol=DIGITS)
    assert_allclose(course[19][0], 0.0130296896, rtol=1e-8)
    assert_allclose(chain.share_fixed(course[19]), 0.391911034, rtol=1e-8)


ABSORBED = [  # N, s, h, start, chance of fixation, time given fixation, time to either end
    (10, 0.0, 0.5, 1, (0.05, 37.2720644904, 7.23121925665)),
    (10, 0.1, 0.5, 10, (0.72209320323453, 24.6669992527, 24.6643186891)),
    (25, 0.1, 0.0, 10, (0.47006890943379, 57.0430665728, 40.173256928)),
    (25, 0.02, 5.0, 5, (0.33523412208651, 166.259851877, 91.914297696)),
    (50, -0.05, 0.5, 50, (0.070916046206364, 96.1946547258, 96.3426886883)),
    (50, 0.1, 1.0, 1, (0.16474141873473, 135.538790178, 26.1534637392)),
    (200, 0.02, 0.25, 20, (0.23779387305608, 451.98748529, 167.864023973)),
]


@pytest.mark.parametrize(("n", "s", "h", "start", "stated"), ABSORBED)
def test_that_fixation_comes_with_the_worked_chance_and_time(n, s, h, start, stated):
    """Derived with 30-digit arithmetic; a solve in doubles keeps about ten digits."""
    x = selection.after_selection(chain.frequencies(2 * n), for_allele(s, h))
    end = chain.absorption(x)
    got = (end.fixation[start], end.time_to_fixation[start], end.time[start])
    assert_allclose(got, stated, rtol=1e-9)


@pytest.mark.parametrize(("n", "spread"), [(10, 20.9112858989), (50, 107.058650126)])
def test_that_the_time_to_fixation_spreads_widely(n, spread):
    """Derived: one neutral copy."""
    end = chain.absorption(chain.frequencies(2 * n))
    assert_allclose(end.sd_to_fixation[1], spread, rtol=1e-9)
    assert_allclose(end.fixation, chain.frequencies(2 * n), atol=1e-12)
    assert np.isnan(end.time_to_fixation[0])
    assert end.time[0] == end.time[-1] == end.time_to_fixation[-1] == 0.0


def test_that_absorption_needs_final_ends():
    with pytest.raises(ValueError, match="both ends final"):
        chain.absorption([0.1, 0.5, 1.0])


def test_that_neutral_eigenvalues_are_fellers():
    """Feller 1951, from memory: products of 1 - r/(2N)."""
    matrix = chain.transition_matrix(chain.frequencies(20), 20)
    values = np.sort(np.abs(np.linalg.eigvals(matrix)))[::-1][:6]
    assert_allclose(values, [1, 1, 0.95, 0.855, 0.72675, 0.5814], rtol=1e-9)


@pytest.mark.parametrize(("n", "sizes"), [(200, [200] * 100), (40, [40, 11, 40, 64] * 10)])
def test_that_mean_heterozygosity_is_the_recursions(n, sizes):
    """Neutral with flow: the chain's mean 2p(1-p) and the gene diversity recursion are one."""
    mass, h = chain.first_step(0.3, n), diversity.drifted(0.42, n / 2)
    between, own = np.array([0.3 * 0.2 + 0.7 * 0.8]), np.array([[0.32]])
    for size in sizes:
        x = flow.mixed(chain.frequencies(mass.size - 1), [0.8], np.array([0.03]))
        mass = chain.step(mass, x, size)
        h = diversity.drifted(diversity.pooled(h, between, own, [0.03]), size / 2)
        between = diversity.between_after(between, own, [0.03])
        assert_allclose(chain.heterozygosity(mass), h, rtol=1e-12)


@pytest.mark.parametrize(
    ("p", "retained"), [(0.05, 0.401263060762), (0.1, 0.6513215599), (0.3, 0.9717524751)]
)
def test_that_founders_catch_an_allele_with_the_stated_chance(p, retained):
    """Marshall & Brown 1975, Allendorf 1986, from memory: 1 - (1-p)^(2n), five founders."""
    assert_allclose(chain.share_kept(chain.first_step(p, 10)), retained, rtol=DIGITS)


@pytest.mark.parametrize(
    ("p", "sizes", "retained"),
    [
        (0.05, [20] * 5, 0.31290414428),
        (0.1, [20] * 10, 0.421857458296),
        (0.3, [50] * 10, 0.946099903678),
    ],
)
def test_that_alleles_are_lost_after_few_founders(p, sizes, retained):
    """Derived: five founders, then N a generation."""
    end = run(chain.first_step(p, 10), [2 * n for n in sizes], NEUTRAL)[-1]
    assert_allclose(chain.share_kept(end), retained, rtol=DIGITS)


def test_that_the_ends_are_exact_unit_rows():
    matrix = chain.transition_matrix([0.0, 1.0, 0.3], 6)
    assert np.array_equal(matrix[0], np.eye(7)[0])
    assert np.array_equal(matrix[1], np.eye(7)[6])
    mass = chain.step([0.25, 0.75], [0.0, 1.0], 6)
    assert np.array_equal(mass, [0.25, 0, 0, 0, 0, 0, 0.75])


def test_that_rounding_above_one_is_taken_off_and_more_is_refused():
    assert chain.step([0.0, 1.0], [0.0, 1.0 + 1e-13], 4)[-1] == 1.0
    for wrong in (1.0 + 1e-9, -1e-9, np.nan):
        with pytest.raises(ValueError, match="outside 0 to 1"):
            chain.step([0.5, 0.5], [0.5, wrong], 4)


def test_that_mass_and_chances_must_match():
    with pytest.raises(ValueError, match="one value for each state"):
        chain.step([0.5, 0.5], [0.1, 0.2, 0.3], 4)


def test_that_extreme_chances_make_no_nan():
    tiny = np.array([1e-320, 1e-305, 1e-290, 1e-17, 1 - 1e-16, 1.0])
    matrix = chain.transition_matrix(tiny, 2000)
    assert np.all(np.isfinite(matrix))
    assert_allclose(matrix.sum(axis=1), 1.0, rtol=1e-12)


def test_that_hundred_generations_lose_no_mass():
    mass = chain.first_step(0.4, 2000)
    for _ in range(100):
        x = chain.frequencies(mass.size - 1)
        mass = chain.step(mass, selection.after_selection(x, [1.0, 0.99, 0.95]), 400)
    assert abs(mass.sum() - 1.0) <= 1e-13


def test_that_quantiles_are_the_smallest_frequency_that_reaches():
    mass = np.array([0.1, 0.2, 0.3, 0.4])
    q = np.array([0.0, 0.05, 0.1, 0.1000001, 0.3, 0.6, 0.61, 1.0])
    assert_allclose(chain.quantile(mass, q), np.array([0, 0, 0, 1, 1, 2, 3, 3]) / 3, rtol=1e-15)
    assert chain.quantile(mass, 0.3) == 1 / 3


def test_that_a_quantile_forgives_rounding_but_no_more():
    mass = np.array([0.5 - 5e-13, 0.5 + 5e-13])
    assert chain.quantile(mass, 0.5) == 0.0
    assert chain.quantile(np.array([0.5 - 5e-12, 0.5 + 5e-12]), 0.5) == 1.0
    assert chain.quantile(np.array([0.5, 0.5 - 1e-11]), 1.0) == 1.0  # lost rounding: the last state


def test_that_summaries_broadcast():
    masses = np.stack([chain.first_step(p, 8) for p in (0.0, 0.3, 1.0)])
    assert_allclose(chain.mean(masses), [0, 0.3, 1], rtol=1e-14)
    assert_allclose(chain.sd(masses), [0, np.sqrt(0.21 / 8), 0], rtol=1e-13, atol=1e-16)
    assert_allclose(chain.share_fixed(masses), [0, 0.3**8, 1], rtol=1e-13)
    assert chain.quantile(masses, [0.25, 0.5]).shape == (3, 2)
    assert chain.quantile(masses, 0.5).shape == (3,)


@exact
@given(x=st.lists(unit, min_size=2, max_size=9), n=st.integers(1, 60))
def test_that_rows_sum_to_one_and_keep_the_mean(x, n):
    matrix = chain.transition_matrix(x, n)
    assert_allclose(matrix.sum(axis=1), 1.0, rtol=1e-12)
    assert_allclose(chain.mean(matrix), x, rtol=1e-12, atol=1e-299)
    assert np.all(matrix >= 0.0)


@exact
@given(p=unit, n=st.integers(1, 300))
def test_that_drift_takes_the_expected_heterozygosity(p, n):
    """E[2p'(1-p')] = 2p(1-p)(1 - 1/n), exact."""
    h = chain.heterozygosity(chain.first_step(p, n))
    assert_allclose(h, 2 * p * (1 - p) * (1 - 1 / n), rtol=1e-12, atol=1e-15)


@exact
@given(p=unit, n=st.integers(1, 200))
def test_that_alleles_can_change_names(p, n):
    swapped = chain.first_step(1.0 - p, n)[::-1]
    rounding = n * 2.3e-16  # of 1 - p, times the steepest slope of a term
    assert_allclose(chain.first_step(p, n), swapped, rtol=1e-12, atol=rounding)
