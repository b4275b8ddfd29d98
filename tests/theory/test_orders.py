"""Orders of selection and arrival. Derived; Wright 1931, Nagylaki 1992, from memory."""

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st
from numpy.testing import assert_allclose

from rescue_planner.theory import orders, selection
from rescue_planner.theory.fitness_forms import against_other

DIGITS = 1e-11  # the check values are printed to 12 digits
A, B, C = (
    orders.residents_selected_then_joined,
    orders.mixed_then_selected,
    orders.selected_as_a_mixture,
)
exact = settings(derandomize=True, deadline=None)


def course(order, start, w, shares, donor):
    p, out = np.float64(start), []
    for m in shares:
        p = order(p, w, m, donor)
        out.append(p)
    return np.array(out)


@pytest.mark.parametrize(
    ("s", "h", "m", "order", "stated", "settled"),
    [
        (0.2, 0.5, 0.05, A, [0.95, 0.808912221963, 0.609014050503], 11 / 21),
        (0.2, 0.5, 0.05, B, [0.954797979798, 0.824983760805, 0.634845598658], 0.551378446115),
        (0.2, 0.5, 0.05, C, [0.959595959596, 0.841243225331, 0.661137431673], 11 / 19),
        (0.5, 0, 0.1, A, [0.9, 0.654870491641, 0.553600317646], 0.5527864045),
        (0.5, 0, 0.1, B, [0.904522613065, 0.696342705608, 0.614863017173], 0.614207116111),
        (0.5, 0, 0.1, C, [0.947368421053, 0.787802782885, 0.669661951347], 2 / 3),
        (0.5, 1, 0.1, A, [0.9, 0.793031058934, 0.770239369582], 0.770156211872),
        (0.5, 1, 0.1, C, [0.947368421053, 0.884464998856, 0.872697035566], 0.87267799625),
    ],
)
def test_that_each_order_has_its_own_course(s, h, m, order, stated, settled):
    """The same animals, up to 13 points apart: an order not named is a wrong number."""
    found = course(order, 1.0, against_other(s, h), [m] * 1000, 0.0)
    assert_allclose(found[[0, 4, 19]], stated, rtol=DIGITS)
    assert_allclose(found[-1], settled, rtol=DIGITS)


PULSE = [0.2] + [0.025] * 39


@pytest.mark.parametrize(
    ("start", "donor", "s", "h", "stated"),
    [
        (0, 1, 0.2, 0.5, [0.2, 0.238571428571, 0.360982828477, 0.564031928327, 0.844855660453]),
        (0, 1, 0.2, 0, [0.2, 0.248623853211, 0.395421301846, 0.592346980976, 0.794377648393]),
        (0, 1, 0.5, 0, [0.2, 0.311764705882, 0.598042306745, 0.801294219103, 0.915392862583]),
        (1, 0, 0.05, 0.5, [0.8, 0.783939393939, 0.739428045254, 0.675572678065, 0.576305509195]),
        (1, 0, 0.1, 1, [0.8, 0.792946058091, 0.774120526484, 0.748789098111, 0.712767933642]),
        (1, 0, 0.2, 0.5, [0.8, 0.79625, 0.786878262967, 0.775966877045, 0.764476007908]),
    ],
)
def test_that_a_pulse_then_a_trickle_moves_good_alleles_so(start, donor, s, h, stated):
    """Rescue allele (absent here) and local allele (absent there); 20 % then 2.5 %."""
    found = course(A, start, against_other(s, h), PULSE, donor)
    assert_allclose(found[[0, 1, 4, 9, 19]], stated, rtol=DIGITS)


def test_that_selecting_the_mixture_speeds_a_rescue_allele():
    stated = [0.238095238095, 0.281240012784, 0.412998101838, 0.616075410606, 0.870431969831]
    found = course(C, 0.0, against_other(0.2, 0.5), PULSE, 1.0)
    assert_allclose(found[[0, 1, 4, 9, 19]], stated, rtol=DIGITS)
    assert_allclose(found[39], 0.989647675812, rtol=DIGITS)


@exact
@given(p=st.floats(0.01, 0.99), m=st.floats(0.0, 0.9), d=st.floats(0.0, 1.0))
def test_that_two_orders_are_one_loop_seen_at_two_stages(p, m, d):
    w = [1.0, 0.9, 0.7]
    assert_allclose(
        B(selection.after_selection(p, w), w, m, d),
        selection.after_selection(A(p, w, m, d), w),
        rtol=1e-13,
    )


@exact
@given(p=st.floats(0.0, 1.0), m=st.floats(0.0, 1.0), d=st.floats(0.0, 1.0))
def test_that_without_selection_the_order_does_not_matter(p, m, d):
    mixed = (1 - m) * p + m * d
    for order in (A, B, C):
        assert_allclose(order(p, [1.0, 1.0, 1.0], m, d), mixed, atol=1e-15)


@exact
@given(p=st.floats(0.01, 0.99), w=st.lists(st.floats(0.1, 1.0), min_size=3, max_size=3))
def test_that_without_flow_every_order_is_selection(p, w):
    for order in (A, B, C):
        assert_allclose(order(p, w, 0.0, 0.3), selection.after_selection(p, w), rtol=1e-13)


def test_that_a_rare_allele_grows_alike_in_all_three():
    w, m, rare = against_other(0.2, 0.5), 0.05, 1e-9
    growth = [order(rare, w, m, 0.0) / rare for order in (A, B, C)]
    assert_allclose(growth, (1 - m) * w[1] / w[2], rtol=1e-8)


def test_that_a_mixture_without_survivors_is_an_error():
    with pytest.raises(ValueError, match="mean fitness is 0"):
        C(0.0, [1.0, 1.0, 0.0], 0.1, 0.0)
