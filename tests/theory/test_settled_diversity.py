"""Long-run rates and levels of diversity. Derived; Wright 1931, 1943, from memory."""

import numpy as np
import pytest
from numpy.testing import assert_allclose

from rescue_planner.theory import diversity, flow, identity, size

DIGITS = 1e-11  # the check values are printed to 12 digits


@pytest.mark.parametrize(
    ("males", "females", "kept"),
    [(5, 20, 0.969725610684), (10, 10, 0.975624609863), (2, 10, 0.930593710404)],
)
def test_that_two_sexes_keep_diversity_at_this_rate(males, females, kept):
    ne = size.from_sexes(males, females)
    assert_allclose(identity.separate_sexes_kept(ne), kept, rtol=DIGITS)
    theta = f = 0.0
    for _ in range(60):  # second way: the ratio of two later values of 1 - theta
        before = theta
        theta, f = identity.separate_sexes_after(theta, f, ne)
    assert_allclose((1 - theta) / (1 - before), kept, rtol=1e-10)
    assert_allclose(kept, 1 - 1 / (2 * ne + 1), atol=0.25 / ne**2)  # what the short form leaves out


@pytest.mark.parametrize(
    ("n", "m", "settled"),
    [(25, 0.04, 0.396728354263), (25, 0.2, 0.473175965665), (50, 0.02, 0.398382245346)],
)
def test_that_flow_holds_diversity_at_this_level(n, m, settled):
    found = diversity.settled_under_flow(0.5, n, m)
    assert_allclose(found, settled, rtol=DIGITS)
    h = 0.0
    for _ in range(3000):  # second way: the recursion, pairs between at the donor's own diversity
        h = diversity.drifted(diversity.pooled(h, [0.5], [[0.5]], [m]), n)
    assert_allclose(found, h, rtol=1e-12)
    # with and without replacement differ by 1 - 1/(2N)
    distinct = 1 - flow.fst_equilibrium(n, m)
    assert_allclose(found, 0.5 * size.retained(n) * distinct, rtol=1e-12)


def test_that_no_flow_settles_at_nothing_and_draws_broadcast():
    assert diversity.settled_under_flow(0.5, 25, 0.0) == 0.0
    assert_allclose(diversity.settled_under_flow(0.5, 25, 1.0), 0.49, rtol=1e-14)
    assert diversity.settled_under_flow(0.5, np.ones((3, 1)), np.full(2, 0.1)).shape == (3, 2)
