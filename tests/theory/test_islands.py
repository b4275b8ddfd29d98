"""FST of islands and numbers of newcomers. Derived; Takahata 1983, Slatkin 1991, from memory."""

import numpy as np
import pytest
from numpy.testing import assert_allclose

from rescue_planner.theory import flow, identity, islands

TEN = 1e-9  # printed to ten digits


@pytest.mark.parametrize(
    ("d", "total", "rule", "pairwise"),
    [
        (2, 0.05551272166, 0.05882352941, 0.1051862673),
        (5, 0.1334678835, 0.1379310345, 0.1614478293),
        (100, 0.1920009745, 0.196803277, 0.1935649777),
    ],
)
def test_that_equal_islands_differ_so(d, total, rule, pairwise):
    assert_allclose(islands.symmetric_islands(50, 0.02, d), (total, pairwise), rtol=TEN)
    assert_allclose(islands.symmetric_islands_approximate(50, 0.02, d), rule, rtol=TEN)


@pytest.mark.parametrize(("n", "m", "d"), [(8, 0.1, 2), (5, 0.3, 4)])
def test_that_summed_identities_give_the_same_fst(n, m, d):
    """Second way: mean time to a common ancestor as the sum of the chances that none is yet met.

    `populations_after` counts within an island with replacement, hence the division.
    """
    backward = np.full((d, d), m / (d - 1))
    np.fill_diagonal(backward, 1 - m)
    j = np.eye(d) / (2 * n)
    within = between = 0.0
    for _ in range(60 * n * d):  # 30 times the 2N d generations of the mean: e^-30 is left
        within, between = within + (1 - j[0, 0]) / (1 - 1 / (2 * n)), between + 1 - j[0, 1]
        j = identity.populations_after(j, backward, np.full(d, n))
    whole = (within + (d - 1) * between) / d
    expected = 1 - within / whole, 1 - within / between
    assert_allclose(islands.symmetric_islands(n, m, d), expected, rtol=1e-9)


def test_that_many_islands_are_a_large_donor():
    many = islands.symmetric_islands(50, 0.02, 1e7)
    assert_allclose(many.total, many.pairwise, rtol=1e-4)
    # FST of mean times against identity by descent: the large donor's form, to the order of m
    assert_allclose(many.total, flow.fst_equilibrium(50, 0.02), rtol=0.02)


@pytest.mark.parametrize(
    ("adults", "ne", "came", "migrants", "fst"),
    [
        (100, 20, 1, 0.2, 0.551827036766),
        (100, 20, 5, 1.0, 0.187922956793),
        (200, 22, 9, 0.99, 0.190683525249),
    ],
)
def test_that_heads_are_scaled_once(adults, ne, came, migrants, fst):
    """One animal a generation is no migrant rule where Ne is below the count."""
    found = islands.effective_migrants(came, adults, ne)
    assert_allclose(found, migrants, rtol=1e-13)
    assert_allclose(flow.fst_equilibrium(ne, found / ne), fst, rtol=1e-11)
    assert_allclose(islands.newcomers_for(found, adults, ne), came, rtol=1e-13)


def test_that_effective_breeders_are_not_scaled_again():
    assert islands.effective_migrants(1.0, 20.0, 20.0) == 1.0
    assert_allclose(islands.effective_migrants(2.0, 100.0, 50.0, 0.5), 0.5)
    assert_allclose(islands.newcomers_for(1.0, 100.0, 20.0, 0.5), 10.0)


def test_that_fst_turns_round_to_migrants():
    nm = np.array([0.2, 1.0, 10.0])
    assert_allclose(
        islands.migrants_from_fst(flow.fst_equilibrium_approximate(50.0, nm / 50)), nm, rtol=1e-13
    )
