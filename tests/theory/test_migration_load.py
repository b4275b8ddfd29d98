"""Two demes. Ronce & Kirkpatrick 2001 from memory; the symmetric state derived."""

import numpy as np
import pytest
from numpy.testing import assert_allclose

from rescue_planner.theory import migration_load
from rescue_planner.theory.migration_load import TwoDemes

WEAK = TwoDemes(growth=0.5, capacity=1.0, strength=0.1, additive_variance=0.5, flow=0.02)
FIVE_DIGITS = 5.1e-6  # values printed to five decimals


@pytest.mark.parametrize(
    ("distance", "flow", "start", "stated"),
    [
        (3.0, 0.05, (0.9, 0.9, 0.0, 3.0), (0.9, 0.9, 1.0, 2.0)),
        (5.0, 0.02, (0.9, 0.9, 0.0, 5.0), (0.87654, 0.87654, 1.11111, 3.88889)),
        (5.0, 0.02, (0.9, 0.05, 0.0, 1.5), (0.96133, 0.03212, 0.00515, 0.39022)),
    ],
)
def test_that_two_demes_settle_as_stated(distance, flow, start, stated):
    """The last is migrational meltdown: the same flow, another start."""
    demes = WEAK._replace(flow=flow)
    found = migration_load.settle(start, (0.0, distance), demes)
    assert_allclose(found, stated, atol=FIVE_DIGITS)
    assert_allclose(migration_load.rates(found, (0.0, distance), demes), 0.0, atol=1e-8)


def test_that_equal_demes_sit_off_their_optima_as_derived():
    off = migration_load.symmetric_deviation(5.0, WEAK)
    assert_allclose(off, 0.02 * 5 / (0.05 + 0.04), rtol=1e-14)
    number = 1 - 0.05 * off**2 / 0.5
    state = np.array([number, number, off, 5 - off])
    assert_allclose(migration_load.rates(state, (0.0, 5.0), WEAK), 0.0, atol=1e-14)


def test_that_without_flow_each_deme_reaches_its_optimum():
    found = migration_load.settle((0.2, 0.5, 1.0, 1.0), (0.0, 2.0), WEAK._replace(flow=0.0), 1000)
    assert_allclose(found, [1, 1, 0, 2], atol=1e-7)


def test_that_a_donor_allele_settles_or_swamps():
    assert_allclose(migration_load.donor_allele_share([0.02, 0.1, 0.2], 0.1), [0.2, 1.0, 1.0])
    q = 0.5  # gametes: selection s against the donor's copy, then flow m; weak-flow balance
    for _ in range(20_000):
        q = q * (1 - 1e-3) / (1 - 1e-3 * q)
        q += 2e-4 * (1 - q)
    assert_allclose(migration_load.donor_allele_share(2e-4, 1e-3), q, rtol=2e-3)
