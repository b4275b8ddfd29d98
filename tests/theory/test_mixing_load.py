"""Load under crossing and gene flow. Derived values; Falconer & Mackay 1996, from memory."""

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st
from numpy.testing import assert_allclose

from rescue_planner.theory import load, mixing_load

SIX = 1e-5  # the check values are printed to six figures
exact = settings(derandomize=True, deadline=None)
share = st.floats(0.0, 1.0)
ONE = ([0.9], [0.1], [0.05], [0.1])


def test_that_crosses_have_the_stated_loads():
    stated = (0.0414, 0.0014, 0.0086, 0.015, 0.025)
    assert_allclose(mixing_load.cross_loads(*ONE), stated, rtol=1e-12)
    assert_allclose(mixing_load.heterosis(*ONE), 0.0128, rtol=1e-12)
    many = mixing_load.heterosis(*(np.repeat(x, 40) for x in ONE))
    assert_allclose(np.exp([many, many / 2]), [1.66863, 1.29175], rtol=SIX)


@exact
@given(q1=share, q2=share, s=share, h=st.floats(0.0, 1.0))
def test_that_heterosis_is_halved_in_f2_and_in_backcrosses(q1, q2, s, h):
    found = mixing_load.cross_loads([q1], [q2], [s], [h])
    gain = mixing_load.heterosis([q1], [q2], [s], [h])
    middle = 0.5 * (found.first + found.second)
    assert_allclose(middle - found.f1, gain, atol=1e-14)
    assert_allclose(middle - found.f2, 0.5 * gain, atol=1e-14)
    weighted = 0.75 * found.first + 0.25 * found.second
    assert_allclose(weighted - found.backcross, 0.5 * gain, atol=1e-14)


RECIPIENT, DONOR, S, H = [0.6, 0.02], [0.1, 0.08], [0.05, 0.8], [0.1, 0.02]


@pytest.mark.parametrize(
    ("a", "masked", "realised"),
    [(0.0, 0.0246528, 0.0213472), (1.0, 0.0601248, 0.0088752), (0.2, 0.0337896, 0.0168104)],
)
def test_that_flow_hides_load_rather_than_removing_it(a, masked, realised):
    """Pitfall: a drop of realised load after a rescue isn't removal."""
    found = mixing_load.mixed_load(RECIPIENT, DONOR, S, H, a)
    assert_allclose((found.masked, found.realised), (masked, realised), rtol=SIX)


@exact
@given(a=share, q=st.lists(share, min_size=4, max_size=4))
def test_that_the_masked_load_after_mixing_obeys_its_identity(a, q):
    recipient, donor = np.array(q[:2]), np.array(q[2:])
    b_r = load.population_load(recipient, S, H).masked
    b_d = load.population_load(donor, S, H).masked
    weight = np.array(S) * (1 - 2 * np.array(H))
    identity = (1 - a) * b_r + a * b_d + a * (1 - a) * np.sum(weight * (recipient - donor) ** 2)
    found = mixing_load.mixed_load(recipient, donor, S, H, a).masked
    assert_allclose(found, identity, rtol=1e-10, atol=1e-14)


def test_that_ancestry_broadcasts():
    found = mixing_load.mixed_load(RECIPIENT, DONOR, S, H, [0.0, 0.2, 1.0])
    assert_allclose(found.masked, [0.0246528, 0.0337896, 0.0601248], rtol=SIX)
