"""One worked example through flow, drift, inbreeding cost and growth together.

Derived, six figures: recipient Ne 25, 20 breeding females and males, F 0.35 relative to unrelated
donors; 4 + 4 animals a generation (0.6 live, 0.8 breed); B = 3 per haploid genome on the young.
"""

import numpy as np
import pytest
from numpy.testing import assert_allclose
from scipy.optimize import brentq

from rescue_planner.theory import flow, identity, inbreeding

SIX = 1e-5


def growth(f):
    return 0.75 + 0.8 * 0.6 * inbreeding.survival_factor(f, 6.0)


def share():
    newcomers = flow.effective_newcomers(4, 0.6, 0.8)
    parents = flow.parent_shares([newcomers], 20.0)
    return newcomers, float(flow.gene_copy_shares(parents, parents)[0])


def test_that_growth_and_flow_begin_as_stated():
    assert_allclose(growth([0.0, 0.35]), [1.23, 0.91797], rtol=SIX)
    assert_allclose(brentq(lambda f: growth(f) - 1.0, 0.0, 0.5), 0.217442, rtol=SIX)
    assert_allclose(share(), (1.92, 0.0875912), rtol=SIX)


ROWS = [
    (0.291371, 0.0875912, 0.950271, 0.363, 0.911545),
    (0.254362, 0.16751, 0.973788, 0.37574, 0.905488),
    (0.224169, 0.240429, 0.995005, 0.388225, 0.899771),
    (0.199536, 0.306961, 1.0138, 0.400461, 0.894374),
    (0.179439, 0.367665, 1.03019, 0.412451, 0.889272),
]


def test_that_four_releases_pass_growth_of_one_at_a_third_of_ancestry():
    m, f, ancestry, alone = share()[1], 0.35, np.zeros(1), 0.35
    for stated in ROWS:
        mixed = (1 - m) ** 2 * f
        ancestry = flow.ancestry_after(ancestry, [m])
        alone = inbreeding.inbreeding_after(25, 1, alone)
        row = (mixed, ancestry[0], growth(mixed), alone, growth(alone))
        assert_allclose(row, stated, rtol=SIX)
        f = inbreeding.inbreeding_after(25, 1, mixed)


@pytest.mark.parametrize("releases", [1, 5, 40])
def test_that_the_same_course_comes_from_the_recursion_of_identity(releases):
    """Independent: drift first, then mixing, in one recursion of `identity`."""
    m, f = share()[1], 0.35
    start = (1 - m) ** 2 * f
    for _ in range(releases - 1):
        start = identity.with_flow_after(start, 25, m)
    mixed = 0.35
    for _ in range(releases):
        mixed = (1 - m) ** 2 * f
        f = inbreeding.inbreeding_after(25, 1, mixed)
    assert_allclose(mixed, start, rtol=1e-12)
