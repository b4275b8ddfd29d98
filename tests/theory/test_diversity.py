"""Gene diversity under drift and flow. Derived values; Wright 1931, Hudson 1992, from memory."""

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st
from numpy.testing import assert_allclose

from rescue_planner.theory import diversity, identity, inbreeding

DIGITS = 1e-11  # the check values are printed to 12 digits
exact = settings(derandomize=True, deadline=None)
unit = st.floats(0.0, 1.0, allow_subnormal=False)


def of_frequencies(p):
    """H between every pair of sources with two alleles: p_i q_j + q_i p_j."""
    p = np.asarray(p, dtype=float)
    return np.add.outer(p, p) - 2.0 * np.multiply.outer(p, p)


@pytest.mark.parametrize(
    ("n", "values"),
    [
        (5, (0.9, 0.59049, 0.3486784401, 0.121576654591)),
        (10, (0.95, 0.7737809375, 0.598736939238, 0.358485922409)),
        (25, (0.98, 0.9039207968, 0.817072806888, 0.667607971755)),
        (50, (0.99, 0.9509900499, 0.904382075009, 0.817906937597)),
        (200, (0.9975, 0.987562343945, 0.975279383179, 0.951169875253)),
    ],
)
def test_that_drift_alone_keeps_the_stated_share(n, values):
    """Derived; Wright 1931, from memory."""
    assert_allclose(diversity.kept(np.full(20, n))[[0, 4, 9, 19]], values, rtol=DIGITS)


def test_that_changing_sizes_multiply():
    assert_allclose(diversity.kept([50, 10, 10, 50])[-1], 0.88454025, rtol=1e-15)


def test_that_what_is_kept_and_inbreeding_are_one_thing():
    """1 - F_t = H_t / H_0 links two code paths."""
    kept = diversity.kept(np.full(12, 7.5))
    assert_allclose(1 - inbreeding.inbreeding_after(7.5, np.arange(1, 13)), kept, rtol=1e-13)
    assert_allclose(inbreeding.inbreeding(0.6 * kept, 0.6), 1 - kept, rtol=1e-13, atol=1e-16)


@pytest.mark.parametrize(
    ("n", "m", "values"),
    [
        (25, 0.04, (0.038416, 0.073112101888, 0.158312051124, 0.253450635411, 0.344983868398)),
        (25, 0.2, (0.1764, 0.28703808, 0.427250568003, 0.468718549601, 0.473133975878)),
        (50, 0.02, (0.019602, 0.038239503192, 0.0888280424287, 0.157849928298, 0.253155402985)),
    ],
)
def test_that_flow_into_a_fixed_recipient_gives_the_worked_course(n, m, values):
    """Derived: recursion and exact one-locus chain agree to 1e-15; donor p = 0.5."""
    h, between, own = 0.0, np.array([0.5]), np.array([[0.5]])
    course = []
    for _ in range(20):
        h = diversity.drifted(diversity.pooled(h, between, own, [m]), n)
        between = diversity.between_after(between, own, [m])
        course.append(h)
    assert_allclose([course[t - 1] for t in (1, 2, 5, 10, 20)], values, rtol=DIGITS)


@pytest.mark.parametrize(
    ("n", "m", "settled"),
    [(25, 0.04, 0.396728354263), (25, 0.2, 0.473175965665), (50, 0.02, 0.398382245346)],
)
def test_that_steady_flow_settles_below_the_donor(n, m, settled):
    """Derived: H = Hd (1 - 1/2N) (1 - fst_equilibrium)."""
    h = 0.0
    for _ in range(3000):
        h = diversity.drifted(diversity.pooled(h, [0.5], [[0.5]], [m]), n)
    assert_allclose(h, settled, rtol=DIGITS)


@pytest.mark.parametrize("row", [(0.85, 0.10, 0.05), (0.7, 0.3)])
def test_that_the_recursion_is_the_identity_matrix_of_all_populations(row):
    """Two routes: H_pool and H_rd against J* = M J M^T with donors too large to drift."""
    sources = len(row)
    h = of_frequencies([0.1, 0.5, 0.8][:sources])
    backward = np.eye(sources)
    backward[0] = row
    sizes = [20.0] + [1e300] * (sources - 1)
    after = 1.0 - identity.populations_after(1.0 - h, backward, sizes)
    shares = np.array(row[1:])
    pool = diversity.pooled(h[0, 0], h[0, 1:], h[1:, 1:], shares)
    between = diversity.between_after(h[0, 1:], h[1:, 1:], shares)
    assert_allclose(diversity.drifted(pool, 20.0), after[0, 0], rtol=1e-14)
    assert_allclose(between, after[0, 1:], rtol=1e-14)


def test_that_a_mixture_of_frequencies_has_the_pooled_diversity():
    """Two alleles: 2 p* (1 - p*) at the mixed frequency; all from enumeration of pairs."""
    p, shares = np.array([0.1, 0.7, 0.4]), np.array([0.7, 0.2, 0.1])
    h = of_frequencies(p)
    mean = p @ shares
    pool = diversity.pooled(h[0, 0], h[0, 1:], h[1:, 1:], shares[1:])
    assert_allclose(pool, 2 * mean * (1 - mean), rtol=1e-14)


def test_that_mixing_gains_what_frequencies_differ():
    """H_mix = (1-m) H_R + m H_D + 2 m (1-m) (p_R - p_D)^2; textbook, computed 0.3432."""
    h = of_frequencies([0.1, 0.7])
    pool = diversity.pooled(h[0, 0], h[0, 1:], h[1:, 1:], [0.2])
    assert_allclose(pool, 0.3432, rtol=1e-14)
    gain = diversity.diversity_from_mixing(pool, h[0, 0], [h[1, 1]], [0.2])
    assert_allclose(gain, 2 * 0.2 * 0.8 * 0.6**2, rtol=1e-13)


def test_that_fst_in_hudsons_form_gives_the_pairs_between():
    h = of_frequencies([0.2, 0.6])
    fst = 1 - 0.5 * (h[0, 0] + h[1, 1]) / h[0, 1]
    assert_allclose(diversity.between_from_fst(h[0, 0], h[1, 1], fst), h[0, 1], rtol=1e-14)


def test_that_neis_form_leads_to_the_same_pairs():
    """Nei 1973: G = 1 - H_S / H_T with H_T the diversity of the equal mixture of two."""
    h = of_frequencies([0.2, 0.6])
    within, whole = 0.5 * (h[0, 0] + h[1, 1]), 2 * 0.4 * 0.6
    fst = diversity.hudson_from_nei(1 - within / whole)
    assert_allclose(diversity.between_from_fst(h[0, 0], h[1, 1], fst), h[0, 1], rtol=1e-14)


def test_that_complete_separation_is_refused():
    with pytest.raises(ValueError, match="below 1"):
        diversity.between_from_fst(0.4, 0.5, 1.0)


def test_that_the_least_fst_makes_the_pairs_as_diverse_as_the_richer():
    one, two = np.array([0.42, 0.66, 0.3, 0.0]), np.array([0.66, 0.42, 0.3, 0.5])
    least = diversity.least_fst(one, two)
    assert_allclose(diversity.between_from_fst(one, two, least), np.maximum(one, two), rtol=1e-14)
    assert diversity.least_fst(0.0, 0.0) == 0.0
    assert diversity.least_fst(0.3, 0.3) == 0.0


@exact
@given(p=st.lists(unit, min_size=3, max_size=3), a=st.floats(0, 0.45), b=st.floats(0, 0.45))
def test_that_pooled_diversity_is_a_probability(p, a, b):
    h = of_frequencies(p)
    pool = diversity.pooled(h[0, 0], h[0, 1:], h[1:, 1:], [a, b])
    assert -1e-15 <= pool <= 0.5 + 1e-15  # two alleles
    within = (1 - a - b) * h[0, 0] + a * h[1, 1] + b * h[2, 2]
    assert pool >= within - 1e-15  # Wahlund: mixing never lowers it below the mean within


@exact
@given(h=unit, ne=st.floats(0.5, 1e6))
def test_that_drift_never_adds(h, ne):
    assert 0.0 <= diversity.drifted(h, ne) <= h


@exact
@given(p=st.lists(unit, min_size=2, max_size=2))
def test_that_no_flow_and_all_flow_are_exact(p):
    h = of_frequencies(p)
    own = h[1:, 1:]
    assert diversity.pooled(h[0, 0], h[0, 1:], own, [0.0]) == h[0, 0]
    assert diversity.pooled(h[0, 0], h[0, 1:], own, [1.0]) == h[1, 1]
    assert diversity.between_after(h[0, 1:], own, [0.0])[0] == h[0, 1]
    assert diversity.between_after(h[0, 1:], own, [1.0])[0] == h[1, 1]


def test_that_draws_broadcast_over_every_input():
    rng = np.random.default_rng(5)
    p = rng.uniform(size=(4, 3))
    h = np.stack([of_frequencies(row) for row in p])
    shares = rng.uniform(0, 0.3, size=(4, 2))
    together = diversity.pooled(h[:, 0, 0], h[:, 0, 1:], h[:, 1:, 1:], shares)
    between = diversity.between_after(h[:, 0, 1:], h[:, 1:, 1:], shares)
    for i in range(4):
        alone = diversity.pooled(h[i, 0, 0], h[i, 0, 1:], h[i, 1:, 1:], shares[i])
        assert_allclose(together[i], alone, rtol=1e-15)
        alone = diversity.between_after(h[i, 0, 1:], h[i, 1:, 1:], shares[i])
        assert_allclose(between[i], alone, rtol=1e-15)


def test_that_one_donor_matrix_serves_many_shares():
    h = of_frequencies([0.1, 0.5, 0.8])
    shares = np.array([[0.0, 0.0], [0.1, 0.2]])
    pool = diversity.pooled(h[0, 0], h[0, 1:], h[1:, 1:], shares)
    assert pool.shape == (2,)
    assert pool[0] == h[0, 0]


def test_that_a_case_without_donors_works():
    none = np.zeros(0)
    assert diversity.pooled(0.4, none, np.zeros((0, 0)), none) == 0.4
    assert diversity.between_after(none, np.zeros((0, 0)), none).shape == (0,)
