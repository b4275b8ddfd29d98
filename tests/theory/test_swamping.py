"""Flow against local selection. Derived; Haldane 1930, Wright 1931, Bulmer 1972, from memory."""

import numpy as np
import pytest
from hypothesis import assume, given, settings
from hypothesis import strategies as st
from numpy.testing import assert_allclose

from rescue_planner.theory import orders, selection, swamping
from rescue_planner.theory.fitness_forms import against_other

DIGITS = 1e-11  # the check values are printed to 12 digits
exact = settings(derandomize=True, deadline=None)
fitness = st.lists(st.floats(0.1, 1.5), min_size=3, max_size=3)


@pytest.mark.parametrize(
    ("s", "additive", "recessive", "fold"),
    [
        (0.02, 0.010101010101, 0.00505063388335, 0.497474683058),
        (0.05, 0.025641025641, 0.0128226207641, 0.493588689618),
        (0.1, 0.0526315789474, 0.0263340389897, 0.486832980505),
        (0.2, 0.111111111111, 0.0557280900008, 0.472135955),
        (0.5, 0.333333333333, 0.171572875254, 0.414213562373),
    ],
)
def test_that_the_limit_depends_on_dominance(s, additive, recessive, fold):
    """ "m = s for every dominance" is wrong by up to four times."""
    found = swamping.critical_flow(against_other(s, [0.0, 0.5, 1.0]))
    assert_allclose(found.m, [s, additive, recessive], rtol=DIGITS)
    assert_allclose(found.frequency, [0.0, 0.0, fold], rtol=DIGITS)
    assert_allclose(found.invasion, [s, additive, 0.0], rtol=DIGITS)
    assert_allclose(swamping.critical_flow(swamping.haploid(s)).m, s, rtol=1e-12)


@pytest.mark.parametrize(
    ("h", "m", "invasion"),
    [(0.7, 0.0062012002, 0.0060851927), (0.8, 0.0053909923, 0.0040650407)],
)
def test_that_a_fold_can_lie_above_the_invasion_limit(h, m, invasion):
    """Derived; printed to ten decimals."""
    found = swamping.critical_flow(against_other(0.02, h))
    assert_allclose([found.m, found.invasion], [m, invasion], rtol=0, atol=5.1e-11)
    assert found.frequency > 0.0


def test_that_an_allele_nowhere_favoured_bears_no_flow():
    found = swamping.critical_flow([[1.0, 1.0, 1.0], [0.8, 0.9, 1.0], [1.0, 0.0, 2.0]])
    assert list(found.m[:2]) == [0.0, 0.0]
    assert list(found.invasion) == [0.0, 0.0, 0.0]


@exact
@given(w=fitness)
def test_that_the_limit_is_the_largest_flow_a_grid_finds(w):
    p = np.linspace(1e-9, 1.0, 4001)
    of_a = p * w[0] + (1 - p) * w[1]
    borne = np.max(1 - selection.mean_fitness(p, w) / of_a)
    found = swamping.critical_flow(w).m
    assert found >= borne - 1e-12
    # between grid points a parabola of curvature below 50 / min(w)^2 rises by less than this
    assert_allclose(found, max(0.0, borne), atol=1e-5)


@exact
@given(w=fitness)
def test_that_all_is_lost_just_above_the_limit_and_not_below(w):
    limit = swamping.critical_flow(w).m
    assume(0.01 < limit < 0.9)
    above = swamping.flow_equilibria(w, limit + 1e-3).p
    below = swamping.flow_equilibria(w, limit - 1e-3).p
    assert np.nanmax(above) == 0.0
    assert np.nanmax(below) > 0.0


@pytest.mark.parametrize(
    ("s", "h", "m", "stated", "slopes", "among_breeders"),
    [
        (0.1, 0.5, 0.02, [31 / 51], [0.967734693878], [0.62024809924]),
        (0.1, 0, 0.02, [0.5527864045], [0.949548245816], [0.564067759694]),
        (
            0.1,
            1,
            0.02,
            [0.244846986557, 0.735153013443],
            [1.01325061977, 0.962218767989],
            [0.249843863834, 0.750156136166],
        ),
        (0.1, 1, 0.03, [], [], []),
        (0.2, 0.25, 0.05, [0.508241257923], [0.917261329538], [0.534990797813]),
        (0.1, 0.5, 0.06, [], [], []),
    ],
)
def test_that_equilibria_from_a_donor_without_the_allele(s, h, m, stated, slopes, among_breeders):
    w = against_other(s, h)
    found = swamping.flow_equilibria(w, m)
    inside = found.p > 0.0
    assert_allclose(found.p[inside], stated, rtol=DIGITS)
    assert_allclose(found.slope[inside], slopes, rtol=1e-10)  # eleven digits at the fold
    assert_allclose(selection.after_selection(found.p[inside], w), among_breeders, rtol=DIGITS)


@pytest.mark.parametrize(
    ("s", "h", "m", "donor", "stated", "slopes"),
    [
        (0.1, 0.5, 0.02, 0.2, [0.714482575147], [0.957303724265]),
        (
            0.5,
            1,
            0.1,
            0.02,
            [0.0258583653687, 0.0996012743924, 0.776540360239],
            [0.944679516268, 1.04942910029, 0.682993605664],
        ),
        (0.5, 1, 0.1, 0.1, [0.800707895359], [0.655048685633]),
        (0.2, 0, 0.05, 0.5, [0.719087217756], [0.885991888239]),
    ],
)
def test_that_equilibria_from_a_donor_that_has_some(s, h, m, donor, stated, slopes):
    found = swamping.flow_equilibria(against_other(s, h), m, donor)
    there = ~np.isnan(found.p)
    assert_allclose(found.p[there], stated, rtol=DIGITS)
    assert_allclose(found.slope[there], slopes, rtol=DIGITS)


@exact
@given(w=fitness, m=st.floats(0.0, 0.9), donor=st.floats(0.0, 1.0))
def test_that_an_equilibrium_stays_where_it_is(w, m, donor):
    assume(np.ptp(w) > 1e-3)
    p = swamping.flow_equilibria(w, m, donor).p
    p = p[~np.isnan(p)]
    assert p.size
    assert np.all(np.diff(p) >= 0)
    moved = orders.residents_selected_then_joined(p, w, m, donor)
    assert_allclose(moved, p, atol=1e-9)  # double roots keep half the digits


def test_that_a_donor_that_has_the_allele_never_lets_it_go():
    found = swamping.flow_equilibria(against_other(-0.5, 0.5), 0.1, 0.3)
    assert np.nanmin(found.p) >= 0.1 * 0.3


def test_that_without_flow_selections_own_resting_points_are_left():
    assert_allclose(swamping.flow_equilibria([0.9, 1.0, 0.7], 0.0).p, [0, 0.75, 1], atol=1e-12)
    assert np.all(np.isnan(swamping.flow_equilibria([1.0, 1.0, 1.0], 0.0).p))
    assert_allclose(swamping.flow_equilibria([1.0, 1.0, 1.0], 0.1, 0.3).p[0], 0.3, rtol=1e-12)


@pytest.mark.parametrize(
    ("m", "h", "stated"),
    [
        (0.06, 0.5, [0.599734973257, 0.200616544874, 0.0914928384532, 0.00243128918506]),
        (0.03, 1, [0.807116967754, 0.588433005033, 0.479722622276, 0.000169748819961]),
    ],
)
def test_that_loss_is_slow(m, h, stated):
    course = swamping.course_under_flow(1.0, against_other(0.1, h), np.full(500, m))
    assert_allclose(course[[9, 49, 99, 499]], stated, rtol=1e-10)  # errors grow along the way


def test_that_one_pulse_can_push_a_recessive_over_the_edge():
    """m is below the limit, and still the side of the middle root decides."""
    w, m = against_other(0.1, 1), np.full(400, 0.02)
    assert swamping.critical_flow(w).m > 0.02
    ends = swamping.course_under_flow([0.24, 0.25], w, m)[..., -1]
    assert_allclose(ends, [0.0218551973813, 0.727579879445], rtol=1e-9)


@pytest.mark.parametrize(
    ("gain", "loss", "m", "weak"),
    [(0.02, 0.05, 0.03125, 1 / 30), (0.05, 0.1, 1 / 12, 0.1)],
)
def test_that_two_niches_protect_below_bulmers_exchange(gain, loss, m, weak):
    limit = swamping.two_niche_critical_exchange(gain, loss)
    assert_allclose(limit, m, rtol=1e-12)
    assert_allclose(gain * loss / (loss - gain), weak, rtol=1e-12)
    growth = swamping.two_niche_growth_when_rare(gain, loss, m * np.array([0.9, 1.0, 1.1]))
    assert growth[0] > 1.0
    assert_allclose(growth[1], 1.0, rtol=1e-14)
    assert growth[2] < 1.0


def test_that_two_niches_have_one_way_flow_and_certain_fates_as_limits():
    assert_allclose(swamping.two_niche_critical_exchange(0.1, 1.0), 0.1 / 1.1, rtol=1e-14)
    assert swamping.two_niche_critical_exchange(0.1, 0.05) == np.inf
    assert swamping.two_niche_critical_exchange(0.1, -0.05) == np.inf
    assert swamping.two_niche_critical_exchange(0.0, 0.05) == 0.0
    assert swamping.two_niche_critical_exchange(-0.1, 0.05) == 0.0
    # the same two niches in the other order
    assert_allclose(swamping.two_niche_critical_exchange(-0.05, -0.02), 0.03125, rtol=1e-12)


@exact
@given(gain=st.floats(-0.5, 0.5), loss=st.floats(-0.5, 0.9), m=st.floats(0.0, 0.5))
def test_that_growth_when_rare_is_the_matrixs_eigenvalue(gain, loss, m):
    matrix = [[(1 - m) * (1 + gain), m * (1 - loss)], [m * (1 + gain), (1 - m) * (1 - loss)]]
    largest = np.max(np.linalg.eigvals(matrix).real)
    assert_allclose(swamping.two_niche_growth_when_rare(gain, loss, m), largest, rtol=1e-7)


def test_that_triples_and_flows_broadcast():
    w = against_other(np.array([[0.1], [0.2]]), [0.0, 0.5, 1.0])
    assert swamping.critical_flow(w).m.shape == (2, 3)
    found = swamping.flow_equilibria(w, [0.01, 0.02, 0.03])
    assert found.p.shape == (2, 3, 3)
    assert_allclose(found.p[1, 2], swamping.flow_equilibria(w[1, 2], 0.03).p)
