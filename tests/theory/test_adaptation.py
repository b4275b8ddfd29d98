"""Closed forms of adaptation. Derived values, six figures; sources from memory (see the module)."""

import numpy as np
import pytest
from numpy.testing import assert_allclose

from rescue_planner.theory import adaptation, trait

SIX = 1e-5  # the check values are printed to six figures


def test_that_truncation_selects_with_the_tabled_intensity():
    """Falconer & Mackay 1996, table of i, from memory."""
    stated = [0.797885, 1.39981, 1.75498, 2.06271]
    assert_allclose(adaptation.selection_intensity([0.5, 0.2, 0.1, 0.05]), stated, rtol=SIX)
    breeders = 0.3 * 2.0 * adaptation.selection_intensity(0.2)  # R = h2 i SD
    assert_allclose(breeders, 0.839886, rtol=SIX)


@pytest.mark.parametrize(
    ("vm", "t", "variance"),
    [(0.001, 10, 0.826219), (0.001, 50, 0.395961), (0.0, 10, 0.817073), (0.0, 50, 0.36417)],
)
def test_that_variance_drifts_towards_its_balance(vm, t, variance):
    """V_A = 1 at the start, Ne = 25."""
    assert_allclose(adaptation.variance_after_drift(1.0, 25, t, vm), variance, rtol=SIX)
    stepwise = 1.0
    for _ in range(t):
        stepwise = trait.genic_after_drift(stepwise, 25, vm)
    assert_allclose(adaptation.variance_after_drift(1.0, 25, t, vm), stepwise, rtol=1e-12)


def test_that_variance_settles_at_twice_ne_times_the_input():
    assert_allclose(adaptation.settled_variance([25, 50, 500], 0.001), [0.05, 0.1, 1.0], rtol=1e-14)


@pytest.mark.parametrize(
    ("shift", "lag", "load"),
    [(0.02, 0.666667, 0.0222222), (0.05, 1.66667, 0.138889), (0.1, 3.33333, 0.555556)],
)
def test_that_lag_and_its_load_are_as_stated(shift, lag, load):
    """V_A = 0.3, V_s = 9.7: gamma = 0.03."""
    assert_allclose(adaptation.share_of_lag_made_up(0.3, 9.7), 0.03, rtol=1e-14)
    assert_allclose(adaptation.steady_lag(shift, 0.3, 9.7), lag, rtol=SIX)
    assert_allclose(adaptation.lag_load(lag, 0.3, 9.7), load, rtol=2 * SIX)


@pytest.mark.parametrize(("ne", "shift"), [(500, 0.0796303), (50, 0.0791123)])
def test_that_drift_of_the_mean_lowers_the_sustainable_shift_a_little(ne, shift):
    r_max = np.log(1.5 * np.sqrt(0.9)) - adaptation.drift_load(0.3, 9.7, ne)
    assert_allclose(trait.sustainable_shift(0.3, 0.7, 9.0, r_max), shift, rtol=SIX)


@pytest.mark.parametrize(
    ("m", "distance", "load"),
    [
        (0.01, 0.755668, 0.0285517),
        (0.05, 1.91083, 0.182563),
        (0.1, 2.3622, 0.279001),
        (0.2, 2.67857, 0.358737),
    ],
)
def test_that_an_ill_fitting_donor_holds_the_mean_away(m, distance, load):
    """Derived: donor 3 SD away, gamma = 0.03; iteration is the second route."""
    settled = adaptation.flow_lag(3.0, m, 0.3, 9.7)
    assert_allclose(settled, distance, rtol=SIX)
    assert_allclose(adaptation.lag_load(settled, 0.3, 9.7), load, rtol=SIX)
    z = 0.0
    for _ in range(3000):
        mixed = float(trait.mixed_trait(z, [3.0], [m]))
        z = mixed + float(trait.response(-mixed, 0.3, 0.7, 9.0))
    assert_allclose(settled, mixed, rtol=1e-12)
