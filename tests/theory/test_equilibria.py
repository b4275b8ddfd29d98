"""Where selection rests and where it is fastest. Derived; Fisher 1922, Haldane 1924 from memory."""

import numpy as np
import pytest
from hypothesis import assume, given, settings
from hypothesis import strategies as st
from numpy.testing import assert_allclose

from rescue_planner.theory import equilibria, selection
from rescue_planner.theory.fitness_forms import against_other, heterozygote_best, multiplicative

DIGITS = 1e-11  # the check values are printed to 12 digits
exact = settings(derandomize=True, deadline=None)
fitness = st.lists(st.floats(0.05, 2.0), min_size=3, max_size=3)


@pytest.mark.parametrize(
    ("s", "t", "settled", "slope"),
    [
        (0.1, 0.3, 0.75, 0.918918918919),
        (0.12, 0.86, 0.877551020408, 0.882299270073),
        (0.15, 1.0, 0.869565217391, 0.85),
    ],
)
def test_that_the_best_heterozygote_holds_both_alleles(s, t, settled, slope):
    """Second row sickle cell, after Cavalli-Sforza & Bodmer 1971, from memory."""
    rest = equilibria.resting_points(heterozygote_best(s, t))
    assert_allclose([rest.interior, rest.slope], [settled, slope], rtol=DIGITS)
    assert rest.interior_stable
    assert not rest.fixed_stable
    assert not rest.lost_stable
    assert_allclose(equilibria.slope_of_selection(rest.interior, heterozygote_best(s, t)), slope)


def test_that_the_worst_heterozygote_lets_the_side_decide():
    w = [1.0, 0.8, 0.9]
    rest = equilibria.resting_points(w)
    assert_allclose([rest.interior, rest.slope], [1 / 3, 1.07692307692], rtol=DIGITS)
    assert not rest.interior_stable
    assert rest.fixed_stable
    assert rest.lost_stable
    assert list(equilibria.settles_at([0.33, 0.34], w)) == [0.0, 1.0]


@pytest.mark.parametrize(
    ("w", "fixed", "lost"),
    [
        ([1.0, 0.95, 0.9], True, False),
        ([1.0, 1.0, 0.9], True, False),  # dominance: the end is judged by the next term
        ([1.0, 0.9, 0.9], True, False),
        ([0.9, 0.9, 1.0], False, True),
        ([1.0, 1.0, 1.0], False, False),
    ],
)
def test_that_one_end_is_stable_under_directional_selection(w, fixed, lost):
    rest = equilibria.resting_points(w)
    assert (rest.fixed_stable, rest.lost_stable) == (fixed, lost)
    assert np.isnan(rest.interior)
    assert np.isnan(rest.slope)


def test_that_nothing_moves_an_allele_that_is_alone_or_at_rest():
    assert list(equilibria.settles_at([0.0, 1.0], [1.0, 0.8, 0.9])) == [0.0, 1.0]
    assert equilibria.settles_at(0.3, [1.0, 1.0, 1.0]) == 0.3


@settings(derandomize=True, deadline=None, max_examples=25)
@given(w=fitness, p=st.floats(0.02, 0.98))
def test_that_iterating_goes_where_it_is_said_to_settle(w, p):
    """Second way: 3000 generations; cases that creep are left out; few, for each takes 40 ms."""
    sizes = np.abs([w[0] - w[1], w[1] - w[2]])
    assume(np.min(sizes) > 0.02)
    rest = equilibria.resting_points(w)
    assume(not abs(p - rest.interior) < 1e-3 or rest.interior_stable)
    end = np.float64(p)
    for _ in range(3000):
        end = selection.after_selection(end, w)
    assert_allclose(end, equilibria.settles_at(p, w), atol=1e-6)


@exact
@given(w=fitness, p=st.floats(0.01, 0.99))
def test_that_the_slope_is_the_numerical_derivative(w, p):
    step = 1e-5  # error of a central difference: its square times the third derivative (< 1e4)
    rise = selection.after_selection(p + step, w) - selection.after_selection(p - step, w)
    assert_allclose(equilibria.slope_of_selection(p, w), rise / (2 * step), atol=2e-6, rtol=1e-6)


def test_that_the_slope_is_unknown_where_nobody_lives():
    assert np.isnan(equilibria.slope_of_selection(0.0, [1.0, 1.0, 0.0]))


@pytest.mark.parametrize(
    ("s", "additive", "products", "dominant", "recessive"),
    [
        (0.02, 0.497474683058, 0.498743710662, 0.331340255426, 0.664669109798),
        (0.1, 0.486832980505, 0.493588689618, 0.322989913255, 0.656201459917),
        (0.5, 0.414213562373, 0.464101615138, 0.267949192431, 0.596071637983),
        (0.9, 0.240253073352, 0.425821886021, 0.147400019263, 0.429303250235),
    ],
)
def test_that_selection_is_fastest_off_the_middle(s, additive, products, dominant, recessive):
    """Derived; "fastest at one half" holds only in the weak limit without dominance."""
    found = equilibria.fastest_at(against_other(s, [0.5, 0.0, 1.0]))
    assert_allclose(found, [additive, dominant, recessive], rtol=DIGITS)
    assert_allclose(equilibria.fastest_additive(against_other(s, 0.5)), additive, rtol=DIGITS)
    assert_allclose(equilibria.fastest_multiplicative(1.0, 1 - s / 2), products, rtol=DIGITS)
    assert_allclose(equilibria.fastest_at(multiplicative(1.0, 1 - s / 2)), products, rtol=DIGITS)


@pytest.mark.parametrize("s", [0.02, 0.3, 0.9])
def test_that_complete_dominance_solves_its_cubics(s):
    """Derived: 2 - 3q + s q^3 = 0 (A dominant), s p^3 + 3(1-s) p - 2(1-s) = 0 (A recessive)."""
    dominant, recessive = equilibria.fastest_at(against_other(s, [0.0, 1.0]))
    q = 1 - dominant
    assert abs(2 - 3 * q + s * q**3) < 1e-12
    assert abs(s * recessive**3 + 3 * (1 - s) * recessive - 2 * (1 - s)) < 1e-12


@pytest.mark.parametrize(
    ("s", "moves"),
    [
        (0.02, [0.00252531694167, 0.00298961686143, 0.0029963353024]),
        (0.5, [0.0857864376269, 0.0980762113533, 0.105892543025]),
        (0.9, [0.259746926648, 0.278899971105, 0.356045124648]),
    ],
)
def test_that_the_fastest_generation_moves_this_far(s, moves):
    w = against_other(s, [0.5, 0.0, 1.0])
    assert_allclose(equilibria.change(equilibria.fastest_at(w), w), moves, rtol=DIGITS)


@exact
@given(w=fitness)
def test_that_no_other_frequency_moves_further(w):
    assume(np.ptp(w) > 1e-3)
    at = equilibria.fastest_at(w)
    grid = np.linspace(0.0, 1.0, 401)
    best = np.abs(equilibria.change(at, w))
    assert np.all(np.abs(equilibria.change(grid, w)) <= best * (1 + 1e-9))


def test_that_nothing_is_fastest_without_selection():
    assert np.isnan(equilibria.fastest_at([1.0, 1.0, 1.0]))


def test_that_triples_broadcast_and_wrong_lengths_are_refused():
    w = against_other(np.array([[0.1], [0.2]]), [0.0, 0.5, 1.0])
    assert equilibria.fastest_at(w).shape == (2, 3)
    assert equilibria.resting_points(w).interior.shape == (2, 3)
    with pytest.raises(ValueError, match="three values"):
        equilibria.fastest_at([1.0, 0.9])
