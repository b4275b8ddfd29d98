"""Load at equilibrium. Derived by quadrature, five figures printed; Wright 1937, from memory."""

import mpmath
import numpy as np
import pytest
from numpy.testing import assert_allclose

from rescue_planner.theory import chain, diffusion, load_balance, selection

SIX = 1e-5


@pytest.mark.parametrize(
    ("u", "s", "h", "masked", "rough"),
    [
        (1e-5, 0.1, 0.2, 2.99399e-05, 3e-05),
        (1e-5, 1.0, 0.02, 0.000468768, 0.00048),
        (1e-5, 1.0, 0.0, 0.00315228, 0.00316228),
        (1e-6, 0.01, 0.45, 2.22162e-07, 2.22222e-07),
    ],
)
def test_that_the_balance_masks_the_stated_load(u, s, h, masked, rough):
    """Derived: selection, then mutation, none back; beside it the textbook's short form."""
    found = load_balance.load_at_balance([u], [s], [h])
    assert_allclose(found.masked, masked, rtol=SIX)
    assert_allclose(u * (1 / h - 2) if h else np.sqrt(u * s), rough, rtol=SIX)
    assert_allclose(found.masked, rough, rtol=0.03)
    # Haldane 1937: the realised load is 2u, u for a recessive, whatever s
    assert_allclose(found.realised, 2 * u if h else u, rtol=0.05)


def test_that_loci_add_at_the_balance():
    found = load_balance.load_at_balance(1e-5, [0.1, 1.0], [0.2, 0.02])
    assert_allclose(found.masked, 2.99399e-05 + 0.000468768, rtol=SIX)


@pytest.mark.parametrize(
    ("ne", "s", "h", "diffused", "exactly"),
    [
        (25, 0.02, 0.5, 0.0117567, 0.0117013),
        (25, 0.02, 0.1, 0.0132744, 0.013268),
        (25, 0.02, 0.0, 0.0136756, 0.0136811),
        (50, 0.02, 0.1, 0.00399836, 0.00398236),
        (100, 0.02, 0.1, 0.000556758, 0.000548641),
        (25, 0.1, 0.1, 0.0010684, 0.000957233),
    ],
)
def test_that_a_new_harmful_allele_is_fixed_as_stated(ne, s, h, diffused, exactly):
    """Kimura 1962, from memory, beside the exact chain: the diffusion fails as s grows."""
    x = chain.frequencies(2 * ne)
    following = selection.after_selection(x, [1 - s, 1 - h * s, 1.0])
    assert_allclose(diffusion.fixation(0.5 / ne, ne, -s, h), diffused, rtol=SIX)
    assert_allclose(chain.absorption(following).fixation[1], exactly, rtol=SIX)


def test_that_genomic_mutation_gives_the_stated_load():
    assert_allclose(load_balance.load_from_mutation(1.0, [0.05, 0.1, 0.25]), [9, 4, 1], rtol=1e-13)
    loci, u = 1000, 1e-7  # U counts both copies: 2 loci u; the sum over loci is the second route
    summed = load_balance.load_at_balance(np.full(loci, u), 0.5, 0.25).masked
    assert_allclose(load_balance.load_from_mutation(2 * loci * u, 0.25), summed, rtol=1e-5)


@pytest.mark.parametrize(
    ("s", "h", "ne", "q", "realised", "masked"),
    [
        (0.02, 0.2, 25, 0.97355, 19.471, 0.00022144),
        (0.02, 0.2, 100, 0.6484, 12.962, 0.0058115),
        (0.02, 0.2, 500, 0.0021846, 0.01996, 0.023731),
        (0.02, 0.2, 5000, 0.0024279, 0.019835, 0.028724),
        (0.1, 0.1, 100, 0.00061486, 0.017925, 0.043562),
        (0.1, 0.1, 5000, 0.00096186, 0.019667, 0.076519),
        (1.0, 0.02, 25, 0.0001187, 0.013668, 0.10503),
        (1.0, 0.02, 5000, 0.00044757, 0.018974, 0.42859),
    ],
)
def test_that_the_stationary_load_is_as_stated(s, h, ne, q, realised, masked):
    """Per 1000 loci with u = 1e-5, v = 1e-7."""
    found = load_balance.stationary_load(ne, s, h)
    stated = (q, realised / 1000, masked / 1000)
    # the frequency is printed to four or five figures, so its own last digit is the tolerance
    assert_allclose(found, stated, rtol=5e-5)


def stationary_vector(matrix):
    """Grassmann, Taghi & Heyman's elimination: no subtraction, so every share keeps its digits."""
    a, n = matrix.copy(), len(matrix)
    for k in range(n - 1, 0, -1):
        a[:k, k] /= a[k, :k].sum()
        a[:k, :k] += np.outer(a[:k, k], a[k, :k])
    out = np.zeros(n)
    out[0] = 1.0
    for k in range(1, n):
        out[k] = out[:k] @ a[:k, k]
    return out / out.sum()


@pytest.mark.parametrize("ne", [25, 50, 100])
def test_that_the_stationary_load_is_the_exact_chains_where_selection_is_weak(ne):
    """Independent: the Wright-Fisher matrix, the diffusion drops terms of order s = 0.02.

    The masked load is compared over pairs of distinct copies, which takes 1/(2N) out.
    """
    n, s, h = 2 * ne, 0.02, 0.2
    x = chain.frequencies(n)
    selected = selection.after_selection(x, [1 - s, 1 - h * s, 1.0])
    following = selection.after_mutation(selected, 1e-5, 1e-7)
    vector = stationary_vector(chain.transition_matrix(following, n))
    masked = np.sum(vector * s * (1 - 2 * h) * x * (1 - x)) / (1 - 1 / n)
    found = load_balance.stationary_load(ne, s, h)
    assert_allclose(found.frequency, np.sum(vector * x), rtol=s)
    assert_allclose(found.masked, masked, rtol=s)


def test_that_without_selection_the_mean_frequency_is_that_of_mutation_alone():
    found = load_balance.stationary_load([20, 2000], 0.0, 0.3, 3e-4, 1e-4)
    assert_allclose(found.frequency, 0.75, rtol=1e-9)
    assert_allclose(found.realised, 0.0, atol=1e-18)


@pytest.mark.parametrize(("ne", "s", "h"), [(25, 0.02, 0.2), (100, 0.02, 0.2), (5000, 1.0, 0.02)])
def test_that_the_quadrature_is_that_of_arbitrary_precision(ne, s, h):
    """mpmath with 40 digits, the masked load as a ratio of two integrals."""
    with mpmath.workdps(40):
        low, high = 4 * ne * mpmath.mpf("1e-5"), 4 * ne * mpmath.mpf("1e-7")
        s_, h_ = mpmath.mpf(s), mpmath.mpf(h)
        edges = [0, "0.001", "0.02", "0.1", "0.3", "0.6", "0.9", "0.99", 1]
        pieces = [mpmath.mpf(x) for x in edges]

        def g(x):
            return mpmath.exp(-2 * ne * s_ * (2 * h_ * x + (1 - 2 * h_) * x * x))

        def rest(x):
            line = g(mpmath.mpf(0)) * (1 - x) + g(mpmath.mpf(1)) * x
            return x**low * (1 - x) ** high * (g(x) - line) / (x * (1 - x))

        whole = mpmath.quad(rest, pieces) + mpmath.beta(low, high + 1)
        whole += g(mpmath.mpf(1)) * mpmath.beta(low + 1, high)
        mixed = mpmath.quad(lambda x: x**low * (1 - x) ** high * g(x), pieces)
        masked = float(s_ * (1 - 2 * h_) * mixed / whole)
    assert_allclose(load_balance.stationary_load(ne, s, h).masked, masked, rtol=1e-10)


def test_that_no_mutation_has_no_lasting_state():
    with pytest.raises(ValueError, match="above 0"):
        load_balance.stationary_load(50, 0.1, 0.1, 0.0, 1e-7)


def test_that_the_house_of_cards_lies_between_its_two_limits():
    """Buerger & Lynch 1995, from memory: only evaluated, not checked otherwise."""
    stated = [0.0470588, 0.16, 0.571429]
    found = load_balance.house_of_cards_variance(50, 2e-4, 0.05, [25, 100, 1000], 20.0)
    assert_allclose(found, stated, rtol=SIX)
    small = load_balance.house_of_cards_variance(50, 2e-4, 0.05, 1e-3, 20.0)
    assert_allclose(small, 4 * 50 * 2e-4 * 0.05 * 1e-3, rtol=1e-5)
    large = load_balance.house_of_cards_variance(50, 2e-4, 0.05, 1e9, 20.0)
    assert_allclose(large, 4 * 50 * 2e-4 * 20.0, rtol=1e-6)
