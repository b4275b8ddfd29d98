"""Viability selection and mutation.

Check values: derived (algebra, enumeration), printed to 12 digits; the formulas' sources (Haldane
1924, Crow & Kimura 1970, Ewens 2004) are quoted from memory.
"""

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st
from numpy.testing import assert_allclose

from rescue_planner.theory import flow, selection

DIGITS = 1e-11  # the check values are printed to 12 digits

ONE_GENERATION = [  # fitness, p, mean, p', average effect, (VA, VD, change of the mean)
    ((1.5, 1, 0.5), 0.5, 1, 0.625, 0.5, (0.125, 0, 0.125)),
    (
        (1, 0.98, 0.9),
        0.3,
        0.9426,
        0.313812858052,
        0.062,
        (0.00161448, 0.00015876, 0.00170134669562),
    ),
    ((1, 1, 0.8), 0.4, 0.928, 0.431034482759, 0.12, (0.006912, 0.002304, 0.00725564803805)),
    ((1, 0.8, 0.8), 0.1, 0.802, 0.102244389027, 0.02, (7.2e-5, 0.000324, 9.07830175185e-5)),
    ((0.9, 1, 0.7), 0.5, 0.9, 0.527777777778, 0.1, (0.005, 0.01, 0.00524691358025)),
    ((1, 0.7, 0.9), 0.5, 0.825, 0.515151515152, 0.05, (0.00125, 0.015625, 0.00162993572084)),
]

exact = settings(derandomize=True, deadline=None)
unit = st.floats(0.0, 1.0, allow_subnormal=False)
viabilities = st.tuples(*[st.floats(0.01, 2.0)] * 3)


def against_other(s, h):
    """Fitness 1, 1 - hs, 1 - s: selection against the other allele."""
    return np.array([1.0, 1.0 - h * s, 1.0 - s])


def iterate(p, fitness, generations):
    for _ in range(generations):
        p = selection.after_selection(p, fitness)
    return p


@pytest.mark.parametrize(("w", "p", "mean", "after", "effect", "rest"), ONE_GENERATION)
def test_that_one_generation_gives_the_worked_values(w, p, mean, after, effect, rest):
    """Derived: symbolic identity and enumeration."""
    va, vd, change = rest
    assert_allclose(selection.mean_fitness(p, w), mean, rtol=DIGITS)
    assert_allclose(selection.after_selection(p, w), after, rtol=DIGITS)
    assert_allclose(selection.average_effect(p, w), effect, rtol=DIGITS)
    assert_allclose(selection.additive_variance(p, w), va, rtol=DIGITS)
    assert_allclose(selection.dominance_variance(p, w), vd, rtol=DIGITS, atol=1e-18)
    assert_allclose(selection.change_of_mean_fitness(p, w), change, rtol=DIGITS)


@pytest.mark.parametrize(
    ("s", "h", "first", "before", "reached"),
    [
        (0.01, 0.5, 1829, 0.989957659901, 0.990007372351),
        (0.1, 0.5, 175, 0.989717487547, 0.99022685042),
        (0.1, 0, 1075, 0.989991679926, 0.990001596422),
        (0.1, 1, 981, 0.989532305313, 0.99055941399),
        (0.5, 0.5, 28, 0.989590572662, 0.99217931411),
        (0.5, 0, 210, 0.989998372367, 0.990047890877),
        (0.5, 1, 115, 0.985156481962, 0.99246725844),
    ],
)
def test_that_an_allele_rises_from_one_to_ninety_nine_percent_in_time(s, h, first, before, reached):
    """Derived: exact iteration in 30-digit arithmetic."""
    w = against_other(s, h)
    at = iterate(0.01, w, first - 1)
    assert_allclose(at, before, rtol=DIGITS)
    assert_allclose(selection.after_selection(at, w), reached, rtol=DIGITS)


def test_that_a_multiplicative_gene_follows_its_closed_form():
    """Derived: the odds are multiplied by x/y each generation (haploid recursion, exact)."""
    x, y = 1.0, 0.95
    p = iterate(0.01, [x * x, x * y, y * y], 179)
    odds = 0.01 / 0.99 * (x / y) ** 179
    assert_allclose(p, odds / (1 + odds), rtol=1e-12)
    assert p < 0.99 < selection.after_selection(p, [x * x, x * y, y * y])  # 179.17 generations


@pytest.mark.parametrize(("generations", "share"), [(1, 3), (2, 4), (5, 7), (10, 12)])
def test_that_a_recessive_lethal_falls_as_one_over_its_age(generations, share):
    """q = q0 / (1 + t q0), exact; Crow & Kimura 1970, from memory."""
    p = iterate(0.5, [1.0, 1.0, 0.0], generations)
    assert_allclose(1.0 - p, 1.0 / share, rtol=1e-13)


def test_that_haldanes_dominant_gene_takes_his_time():
    """Haldane 1924 prints 4819 generations from 1 to 50 % dominants, s = 0.001, from memory.

    He used the weak-selection integral (4818.6); exact iteration takes 4817 (derived).
    """
    p, count, end = 1 - np.sqrt(0.99), 0, 1 - np.sqrt(0.5)
    while p < end and count < 5000:
        p, count = selection.after_selection(p, [1.0, 1.0, 0.999]), count + 1
    assert count == 4817


@pytest.mark.parametrize(
    ("s", "t", "settled", "slope", "mean"),
    [
        (0.1, 0.3, 0.75, 0.918918918919, 0.925),
        (0.12, 0.86, 0.877551020408, 0.882299270073, 0.894693877551),
        (0.15, 1.0, 0.869565217391, 0.85, 0.869565217391),
    ],
)
def test_that_heterozygote_advantage_holds_both_alleles(s, t, settled, slope, mean):
    """Derived; Fisher 1922, Crow & Kimura 1970; second row sickle cell; from memory."""
    w = [1 - s, 1.0, 1 - t]
    p = iterate(0.5, w, 500)
    assert_allclose(p, settled, rtol=DIGITS)
    assert_allclose(selection.mean_fitness(p, w), mean, rtol=DIGITS)
    step = 1e-6  # central difference: error of the order of its square
    rise = selection.after_selection(p + step, w) - selection.after_selection(p - step, w)
    assert_allclose(rise / (2 * step), slope, rtol=1e-8)


def test_that_heterozygote_disadvantage_lets_the_side_decide():
    """Derived: equilibrium 1/3 is unstable; the values after 50 generations."""
    p = iterate(np.array([0.33, 0.34]), [1.0, 0.8, 0.9], 50)
    assert_allclose(p, [0.22229485977, 0.663699164417], rtol=1e-10)  # 11 digits, errors grow


@pytest.mark.parametrize(
    ("s", "additive", "dominant", "recessive"),
    [
        (0.02, 0.497474683058, 0.331340255426, 0.664669109798),
        (0.5, 0.414213562373, 0.267949192431, 0.596071637983),
        (0.9, 0.240253073352, 0.147400019263, 0.429303250235),
    ],
)
def test_that_selection_is_fastest_where_theory_says(s, additive, dominant, recessive):
    """Derived: root of the derivative. A grid of 1e-4 finds the peak to one grid step."""
    p = np.linspace(0.0, 1.0, 10_001)
    for h, peak in ((0.5, additive), (0.0, dominant), (1.0, recessive)):
        change = selection.after_selection(p, against_other(s, h)) - p
        assert abs(p[np.argmax(change)] - peak) <= 1.01e-4


@pytest.mark.parametrize(
    ("u", "s", "h", "settled"),
    [
        (1e-5, 1, 0, 0.00316227766017),
        (1e-4, 0.01, 0.25, 0.0372248922976),
        (1e-6, 1, 0.02, 4.98805229243e-5),
    ],
)
def test_that_mutation_holds_a_harmful_allele_at_its_balance(u, s, h, settled):
    """Derived (quadratic); Haldane 1927, 1937, from memory: q = sqrt(u/s) if wholly recessive."""
    p = 1.0 - settled
    w = against_other(s, h)
    back = selection.after_mutation(selection.after_selection(p, w), 0.0, u)
    # 1 - p has lost digits near p = 1: 1e-16 / q of them, and the printed value has 12
    assert_allclose(1.0 - back, settled, rtol=DIGITS + 4e-16 / settled)


@pytest.mark.parametrize(
    ("s", "h", "m", "settled"),
    [
        (0.2, 0.5, 0.05, 11 / 21),
        (0.5, 0, 0.1, 0.5527864045),
        (0.5, 1, 0.1, 0.770156211872),
        (0.1, 0, 0.02, 0.5527864045),
        (0.1, 1, 0.02, 0.735153013443),
        (0.2, 0.25, 0.05, 0.508241257923),
    ],
)
def test_that_flow_against_selection_settles_where_theory_says(s, h, m, settled):
    """Derived (quadratic), newborn counted, donor without the allele; Haldane 1930, from memory."""
    p = 1.0
    for _ in range(5000):
        p = flow.mixed(selection.after_selection(p, against_other(s, h)), [0.0], [m])
    assert_allclose(p, settled, rtol=DIGITS)


@pytest.mark.parametrize(
    ("s", "h", "m", "values"),
    [
        (0.2, 0.5, 0.05, (0.954797979798, 0.824983760805, 0.634845598658)),
        (0.5, 0, 0.1, (0.904522613065, 0.696342705608, 0.614863017173)),
    ],
)
def test_that_flow_before_selection_gives_the_worked_course(s, h, m, values):
    """Derived: the order of a step here (newcomers breed, then selection among the young)."""
    p, course = 1.0, []
    for _ in range(20):
        p = selection.after_selection(flow.mixed(p, [0.0], [m]), against_other(s, h))
        course.append(p)
    assert_allclose([course[0], course[4], course[19]], values, rtol=DIGITS)


@pytest.mark.parametrize(
    ("m", "h", "values"),
    [
        (0.06, 0.5, (0.599734973257, 0.200616544874, 0.0914928384532, 0.00243128918506)),
        (0.03, 1.0, (0.807116967754, 0.588433005033, 0.479722622276, 0.000169748819961)),
    ],
)
def test_that_swamping_flow_takes_long(m, h, values):
    """Derived: s = 0.1, flow above the critical rate; 10, 50, 100, 500 generations."""
    p, course = 1.0, [1.0]
    for _ in range(500):
        p = flow.mixed(selection.after_selection(p, against_other(0.1, h)), [0.0], [m])
        course.append(p)
    assert_allclose([course[t] for t in (10, 50, 100, 500)], values, rtol=1e-10)


def test_that_a_recessive_local_allele_can_go_either_way():
    """Derived: s = 0.1, h = 1, m = 0.02; unstable equilibrium at 0.2448."""
    p = np.array([0.24, 0.25])
    for _ in range(400):
        p = flow.mixed(
            selection.after_selection(p, against_other(0.1, 1.0)), [0.0], np.array([0.02])
        )
    assert_allclose(p, [0.0218551973813, 0.727579879445], rtol=1e-10)


@pytest.mark.parametrize(
    ("rescue", "s", "h", "values"),
    [
        (True, 0.2, 0.5, (0.2, 0.238571428571, 0.360982828477, 0.564031928327, 0.844855660453)),
        (True, 0.5, 0.0, (0.2, 0.311764705882, 0.598042306745, 0.801294219103, 0.915392862583)),
        (False, 0.05, 0.5, (0.8, 0.783939393939, 0.739428045254, 0.675572678065, 0.576305509195)),
        (False, 0.1, 1.0, (0.8, 0.792946058091, 0.774120526484, 0.748789098111, 0.712767933642)),
    ],
)
def test_that_a_pulse_then_a_trickle_gives_the_worked_course(rescue, s, h, values):
    """Derived: 20 % in the first generation, then 2.5 %; schedule after Hedrick 1995, confirmed."""
    p, course = (0.0 if rescue else 1.0), []
    for t in range(20):
        m = 0.2 if t == 0 else 0.025
        donor = 1.0 if rescue else 0.0
        p = flow.mixed(selection.after_selection(p, against_other(s, h)), [donor], [m])
        course.append(p)
    assert_allclose([course[t - 1] for t in (1, 2, 5, 10, 20)], values, rtol=DIGITS)


def test_that_a_dead_homozygote_alone_leaves_the_frequency_as_it_is():
    assert selection.after_selection(0.0, [1.0, 1.0, 0.0]) == 0.0
    assert selection.after_selection(1.0, [0.0, 1.0, 1.0]) == 1.0
    assert selection.change_of_mean_fitness(1.0, [0.0, 1.0, 1.0]) == 0.0


def test_that_no_survivor_is_an_error_and_not_a_nan():
    with pytest.raises(ValueError, match="no genotype that is present can live"):
        selection.after_selection([0.0, 0.5], [0.0, 0.0, 0.0])


def test_that_fitness_of_the_wrong_length_is_refused():
    for wrong in (1.0, [1.0, 0.9]):
        with pytest.raises(ValueError, match="three values"):
            selection.mean_fitness(0.5, wrong)


def test_that_draws_broadcast_to_the_same_numbers():
    w = np.array([row[0] for row in ONE_GENERATION])
    p = np.array([row[1] for row in ONE_GENERATION])
    together = selection.after_selection(p, w)
    assert together.shape == (6,)
    assert_allclose(
        together, [selection.after_selection(a, b) for a, b in zip(p, w, strict=True)], rtol=0
    )


@exact
@given(p=unit, w=viabilities)
def test_that_selection_stays_between_zero_and_one_and_keeps_ends(p, w):
    after = selection.after_selection(p, w)
    assert 0.0 <= after <= 1.0 + 1e-15
    assert selection.after_selection(0.0, w) == 0.0
    assert selection.after_selection(1.0, w) == 1.0


@exact
@given(p=unit, w=viabilities, scale=st.floats(0.1, 10.0))
def test_that_only_ratios_of_fitness_change_the_frequency(p, w, scale):
    scaled = selection.after_selection(p, scale * np.array(w))
    assert_allclose(scaled, selection.after_selection(p, w), rtol=1e-13, atol=1e-300)


@exact
@given(p=unit, w=viabilities)
def test_that_the_alleles_can_change_names(p, w):
    """Names swapped: fitness read backwards, frequency of the other allele."""
    other = selection.after_selection(1.0 - p, w[::-1])
    assert_allclose(1.0 - other, selection.after_selection(p, w), rtol=1e-9, atol=1e-14)


@exact
@given(p=unit, w=viabilities)
def test_that_mean_fitness_rises_by_exactly_the_stated_change(p, w):
    """Fisher; the whole change, exact for any dominance, is never negative."""
    rise = selection.mean_fitness(selection.after_selection(p, w), w) - selection.mean_fitness(p, w)
    stated = selection.change_of_mean_fitness(p, w)
    assert_allclose(stated, rise, rtol=1e-9, atol=1e-14)
    assert stated >= 0.0


@exact
@given(p=unit, w=viabilities)
def test_that_the_two_variances_make_up_the_whole(p, w):
    """VG = sum of genotype frequency * w^2 - mean^2 = VA + VD, exact under random mating."""
    q, (a, b, c) = 1.0 - p, w
    whole = p * p * a * a + 2 * p * q * b * b + q * q * c * c - selection.mean_fitness(p, w) ** 2
    parts = selection.additive_variance(p, w) + selection.dominance_variance(p, w)
    assert_allclose(parts, whole, rtol=1e-9, atol=1e-14)


@exact
@given(p=unit, w=st.floats(0.01, 2.0))
def test_that_equal_fitness_changes_nothing(p, w):
    assert_allclose(selection.after_selection(p, [w, w, w]), p, rtol=1e-14)
    assert selection.average_effect(p, [w, w, w]) == 0.0


@exact
@given(p=unit, to=st.floats(0.0, 0.5), back=st.floats(0.0, 0.5))
def test_that_mutation_pulls_towards_its_own_balance(p, to, back):
    after = selection.after_mutation(p, to, back)
    assert 0.0 <= after <= 1.0
    if to + back > 0.0:
        balance = to / (to + back)
        assert_allclose(after - balance, (1 - to - back) * (p - balance), atol=1e-14)


def test_that_mutation_from_takes_the_named_allele_away():
    assert_allclose(selection.after_mutation(0.8, 0.0, 0.1), 0.72, rtol=1e-15)
    assert_allclose(selection.after_mutation(0.8, 0.1, 0.0), 0.82, rtol=1e-15)
