"""Gene flow: shares, mixing, ancestry. Derived values; sources (Wright 1931) from memory."""

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st
from numpy.testing import assert_allclose

from rescue_planner.theory import flow

DIGITS = 1e-11  # the check values are printed to 12 digits
SIX = 1e-5  # printed to six figures
exact = settings(derandomize=True, deadline=None)
unit = st.floats(0.0, 1.0, allow_subnormal=False)


def share_lists(donors):
    """Shares of several donors that leave something for the residents."""
    one = st.floats(0.0, 0.9 / donors, allow_subnormal=False)
    return st.lists(one, min_size=donors, max_size=donors)


@pytest.mark.parametrize(
    ("newcomers", "residents", "share"),
    [(4, 16, 0.2), (4 * 0.5, 16, 1 / 9), (4 * 2, 16, 1 / 3), (2 * 1.5, 28, 0.0967741935484)],
)
def test_that_newcomers_take_their_share_of_the_parents(newcomers, residents, share):
    """Derived: M v / (R + M v)."""
    assert_allclose(flow.parent_shares([newcomers], residents), [share], rtol=DIGITS)


@pytest.mark.parametrize(
    ("females", "males", "resident_males", "breeding", "m"),
    [
        (0, 6, 10, 1.0, 0.132353),
        (6, 0, 10, 1.0, 0.0967742),
        (0, 6, 4, 2.0, 0.321429),
        (3, 3, 10, 0.5, 0.0695863),
    ],
)
def test_that_six_animals_are_not_one_amount_of_flow(females, males, resident_males, breeding, m):
    """Derived: survival 0.6 into 15 females; the head count would say 6/31 = 0.194."""
    of_mothers = flow.parent_shares([flow.effective_newcomers(females, 0.6, breeding)], 15)
    of_fathers = flow.parent_shares(
        [flow.effective_newcomers(males, 0.6, breeding)], resident_males
    )
    assert_allclose(flow.gene_copy_shares(of_mothers, of_fathers), [m], rtol=SIX)


@pytest.mark.parametrize(("n", "chance"), [(1, 0.3), (3, 0.657), (6, 0.882351), (10, 0.971752)])
def test_that_one_of_several_breeds(n, chance):
    """Derived, six figures."""
    assert_allclose(flow.chance_any_breeds(n, 0.3), chance, rtol=SIX)


def test_that_chances_at_their_ends_are_exact():
    assert flow.chance_any_breeds(0, 0.3) == 0.0
    assert flow.chance_any_breeds(0, 1.0) == 0.0
    assert flow.chance_any_breeds(2, 1.0) == 1.0
    assert flow.chance_any_breeds(2, 0.0) == 0.0


def test_that_no_breeder_of_a_sex_is_an_error():
    with pytest.raises(ValueError, match="no breeders of one sex"):
        flow.parent_shares([[0.0], [1.0]], 0.0)


def test_that_a_pulse_and_a_trickle_leave_the_stated_ancestry():
    """Derived; 20 % then 2.5 % after Hedrick 1995 (the 2.5 % from memory)."""
    shares = np.full(40, 0.025)
    shares[0] = 0.2
    donor = flow.pulse_schedule_ancestry(shares)
    stated = [0.2, 0.22, 0.2770496875, 0.363011593143, 0.505487031615, 0.701963126246]
    assert_allclose(donor[[0, 1, 4, 9, 19, 39]], stated, rtol=DIGITS)
    assert_allclose(0.3 + (0.9 - 0.3) * (1 - donor[9]), 0.682193044114, rtol=DIGITS)


def test_that_step_by_step_ancestry_is_the_schedule():
    shares, a = np.array([0.2, 0.0, 0.05, 0.1]), np.zeros(1)
    course = []
    for m in shares:
        a = flow.ancestry_after(a, [m])
        course.append(a[0])
    assert_allclose(course, flow.pulse_schedule_ancestry(shares), rtol=1e-14)


@pytest.mark.parametrize(("pulses", "m", "ancestry"), [(5, 0.1, 0.40951), (10, 0.2, 0.892626)])
def test_that_repeated_pulses_end_in_replacement(pulses, m, ancestry):
    """Derived, six figures."""
    assert_allclose(flow.pulse_schedule_ancestry([m] * pulses)[-1], ancestry, rtol=SIX)


def test_that_neutral_frequencies_follow_ancestry():
    """Derived: p_t = p_d + (p_0 - p_d) R_t with 20 % then 2.5 %."""
    p, course = 0.9, []
    for t in range(20):
        p = flow.mixed(p, [0.3], [0.2 if t == 0 else 0.025])
        course.append(p)
    stated = [0.78, 0.7337701875, 0.682193044114, 0.596707781031]
    assert_allclose([course[t] for t in (0, 4, 9, 19)], stated, rtol=DIGITS)


def test_that_ancestry_spreads_and_then_evens_out():
    """Derived; type of result of Verdu & Rosenberg 2011, from memory."""
    v, a, course = 0.0, 0.0, []
    for t in range(10):
        m = 0.2 if t == 0 else 0.025
        v, a = flow.ancestry_spread_after(v, a, m), float(flow.ancestry_after([a], [m])[0])
        course.append(v)
    stated = [0.08, 0.0468, 0.030229875, 0.0173213246826, 0.0107759627478]
    assert_allclose([course[t - 1] for t in (1, 2, 3, 5, 10)], stated, rtol=DIGITS)
    assert_allclose(flow.ancestry_spread_after(0.08, 0.2, 0.0), 0.04, rtol=1e-14)


@pytest.mark.parametrize(
    ("n", "m", "f", "rule"),
    [
        (10, 0.1, 0.175704989154, 0.2),
        (25, 0.04, 0.190350297422, 0.2),
        (50, 0.02, 0.19518738314, 0.2),
        (200, 0.005, 0.198799202815, 0.2),
        (50, 0.1, 0.0408884401817, 0.047619047619),
        (10, 0.5, 0.016393442623, 0.047619047619),
        (20, 0.01, 0.551827036766, 0.555555555556),
        (22, 0.045, 0.190683525249, 0.201612903226),
    ],
)
def test_that_steady_flow_settles_at_wrights_fst(n, m, f, rule):
    """Derived; Wright 1931, 1943, from memory."""
    assert_allclose(flow.fst_equilibrium(n, m), f, rtol=DIGITS)
    assert_allclose(flow.fst_equilibrium_approximate(n, m), rule, rtol=DIGITS)


def test_that_fst_has_its_limits():
    assert flow.fst_equilibrium(30, 0.0) == 1.0
    assert flow.fst_equilibrium(30, 1.0) == 0.0
    assert_allclose(
        flow.fst_equilibrium(1e7, 1e-7), flow.fst_equilibrium_approximate(1e7, 1e-7), rtol=1e-6
    )


@pytest.mark.parametrize(
    ("ne", "m", "k", "after", "before"),
    [
        (25, 0.1, 1, 0.0785645, 0.0969932),
        (25, 0.1, 3, 0.200453, 0.247473),
        (25, 0.2, 5, 0.145889, 0.227951),
        (25, 0.3, 10, 0.149482, 0.305065),
        (50, 0.1, 5, 0.172827, 0.213367),
        (25, 0.1, 5 / 4, 0.0960952, 0.118636),
        (25, 0.2, 10 / 4, 0.0805105, 0.125798),
    ],
)
def test_that_pulses_every_few_generations_cycle(ne, m, k, after, before):
    """Derived (second route: iteration below); six figures, hence half a unit of the sixth."""
    assert_allclose(flow.cohort_cycle(ne, m, k), (after, before), rtol=SIX)


def test_that_iterated_pulses_end_in_the_cycle():
    f = 0.4
    for _ in range(300):
        f = (1 - 0.2) ** 2 * f
        after = f
        for _ in range(5):
            f = f + (1 - f) / 50
    assert_allclose(flow.cohort_cycle(25, 0.2, 5), (after, f), rtol=1e-12)


@exact
@given(x=unit, donors=st.lists(unit, min_size=3, max_size=3), shares=share_lists(3))
def test_that_mixing_stays_between_its_sources(x, donors, shares):
    value = flow.mixed(x, donors, shares)
    assert min([x, *donors]) - 1e-15 <= value <= max([x, *donors]) + 1e-15


@exact
@given(x=unit, donors=st.lists(unit, min_size=2, max_size=2))
def test_that_no_flow_changes_nothing_and_all_flow_replaces(x, donors):
    assert flow.mixed(x, donors, [0.0, 0.0]) == x
    assert_allclose(flow.mixed(x, donors, [1.0, 0.0]), donors[0], atol=1e-16)


@exact
@given(shares=share_lists(3), more=share_lists(3))
def test_that_ancestries_and_the_residents_part_sum_to_one(shares, more):
    a = flow.ancestry_after(flow.ancestry_after(np.zeros(3), shares), more)
    residents = (1 - sum(shares)) * (1 - sum(more))
    assert_allclose(a.sum() + residents, 1.0, rtol=1e-14)


@exact
@given(e=st.lists(st.floats(0.0, 50.0), min_size=2, max_size=2), n=st.floats(0.5, 500.0))
def test_that_shares_of_parents_and_residents_sum_to_one(e, n):
    u = flow.parent_shares(e, n)
    assert_allclose(u.sum() + n / (n + sum(e)), 1.0, rtol=1e-14)
    assert np.all(u >= 0.0)


def test_that_donors_and_draws_broadcast():
    shares = np.array([[0.1, 0.0], [0.0, 0.2], [0.05, 0.05]])
    together = flow.mixed([0.5, 0.4, 0.3], [0.9, 0.1], shares)
    one_by_one = [
        flow.mixed(p, [0.9, 0.1], s) for p, s in zip([0.5, 0.4, 0.3], shares, strict=True)
    ]
    assert_allclose(together, one_by_one, rtol=0)


def test_that_a_case_without_donors_works():
    none = np.zeros(0)
    assert flow.mixed(0.4, none, none) == 0.4
    assert flow.ancestry_after(none, none).shape == (0,)
    assert flow.parent_shares(none, 5.0).shape == (0,)
