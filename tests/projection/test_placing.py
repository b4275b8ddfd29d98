"""Ticks, ranges and labels: pure functions, so every promise is tried on many inputs."""

import itertools

import pytest
from hypothesis import given
from hypothesis import strategies as st

from rescue_planner.projection.placing import (
    place_labels,
    quietest,
    round_range,
    spread,
    tick_step,
    tick_texts,
    ticks,
)

NUMBERS = st.floats(-1e4, 1e4, allow_nan=False)
CLOSE = 1e-6  # positions are sums of a few thousand at most: rounding stays far below this


@given(
    st.lists(st.floats(-50, 250, allow_nan=False), min_size=1, max_size=12),
    st.floats(1, 40),
    st.floats(20, 400),
)
def test_that_labels_never_overlap_and_stay_in_the_panel(wanted, height, room):
    places = place_labels(wanted, height, 0.0, room)
    for one, other in itertools.combinations(places, 2):
        if one.column == other.column:
            assert abs(one.position - other.position) >= height - CLOSE
    for place in places:
        assert height / 2 - CLOSE <= place.position <= max(room - height / 2, height / 2) + CLOSE


@given(st.lists(st.floats(0, 200, allow_nan=False), min_size=2, max_size=12))
def test_that_labels_keep_the_order_of_the_lines_in_each_column(wanted):
    places = place_labels(wanted, 12.0, 0.0, 200.0)
    for (a, one), (b, other) in itertools.combinations(zip(wanted, places, strict=True), 2):
        if one.column == other.column and a < b:
            assert one.position < other.position


def test_that_labels_with_room_stay_at_their_lines():
    wanted = [20.0, 100.0, 60.0]
    assert [p.position for p in place_labels(wanted, 12.0, 0.0, 120.0)] == wanted


def test_that_two_equal_ends_are_moved_apart_evenly():
    one, other = place_labels([50.0, 50.0], 10.0, 0.0, 100.0)
    assert (one.position, other.position) == (45.0, 55.0)


def test_that_labels_that_do_not_fit_in_one_column_take_two():
    places = place_labels([5.0] * 6, 10.0, 0.0, 30.0)
    assert {place.column for place in places} == {0, 1}


def test_that_spreading_more_than_fits_is_refused():
    with pytest.raises(ValueError, match="do not fit"):
        spread([1.0, 2.0, 3.0], 10.0, 0.0, 15.0)


@given(st.lists(st.floats(0, 100, allow_nan=False), min_size=1, max_size=8))
def test_that_spreading_moves_no_more_than_a_plain_search_finds(wanted):
    """The least sum of squares: no single move of a block towards its wish does better."""
    placed = spread(wanted, 5.0, 0.0, 100.0)
    cost = sum((a - b) ** 2 for a, b in zip(wanted, placed, strict=True))
    order = sorted(range(len(wanted)), key=lambda i: (placed[i], i))
    for first in range(len(order)):
        for last in range(first, len(order)):
            for by in (-0.01, 0.01):
                moved = list(placed)
                for i in order[first : last + 1]:
                    moved[i] += by
                row = [moved[i] for i in order]
                fits = all(b - a >= 5.0 - 1e-9 for a, b in itertools.pairwise(row))
                if fits and row[0] >= 0 and row[-1] <= 100:
                    other = sum((a - b) ** 2 for a, b in zip(wanted, moved, strict=True))
                    assert other >= cost - 1e-6


@given(NUMBERS, st.floats(1e-3, 1e4), st.integers(1, 8))
def test_that_ticks_are_few_and_inside(low, length, most):
    found = ticks(low, low + length, most)
    assert len(found) <= most + 1
    slack = 1e-6 * max(1.0, abs(low) + length)
    assert all(low - slack <= tick <= low + length + slack for tick in found)


@given(NUMBERS, st.floats(0, 1e4))
def test_that_a_round_range_holds_what_it_was_made_for(low, length):
    bottom, top = round_range(low, low + length)
    slack = 1e-6 * max(1.0, abs(low) + length)
    assert bottom < top
    assert bottom <= low + slack
    assert top >= low + length - slack


def test_that_steps_are_one_two_or_five():
    assert [tick_step(length, 4) for length in (4, 5, 10, 60, 0.3)] == [1, 2, 5, 20, 0.1]


@pytest.mark.parametrize(("length", "most"), [(0.0, 4), (-1.0, 4), (1.0, 0)])
def test_that_no_length_has_no_ticks(length, most):
    with pytest.raises(ValueError, match="no ticks"):
        tick_step(length, most)


def test_that_tick_texts_share_their_decimals_and_use_a_true_minus():
    assert tick_texts((-0.2, 0.0, 0.25)) == ("−0.20", "0.00", "0.25")


def test_that_whole_ticks_have_no_half_years():
    assert ticks(0.0, 3.0, 8, whole=True) == (0.0, 1.0, 2.0, 3.0)


def test_that_words_go_where_they_cover_least():
    boxes = [(0.0, 0.0, 10.0, 10.0), (20.0, 0.0, 10.0, 10.0), (40.0, 0.0, 10.0, 10.0)]
    assert quietest(boxes, [(5.0, 5.0), (25.0, 5.0)]) == 2
    assert quietest(boxes, []) == 0


def test_that_thousands_are_set_apart_on_an_axis():
    assert tick_texts((0.0, 100000.0)) == ("0", "100\u202f000")


@given(
    st.lists(st.tuples(st.floats(0, 60), st.floats(1, 5)), min_size=1, max_size=10),
)
def test_that_labels_of_different_heights_do_not_overlap(labels):
    wanted, heights = zip(*labels, strict=True)
    placed = spread(wanted, heights, 0.0, 100.0)
    order = sorted(range(len(placed)), key=lambda i: placed[i])
    for one, other in itertools.pairwise(order):
        assert placed[other] - placed[one] >= (heights[one] + heights[other]) / 2 - CLOSE
    assert min(placed) >= 0.0
    assert max(placed) <= 100.0 + CLOSE
