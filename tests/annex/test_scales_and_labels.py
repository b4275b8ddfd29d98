from __future__ import annotations

import numpy as np
import pytest
from hypothesis import given as each
from hypothesis import strategies as some

from rescue_planner.annex.curves import Band, Curve
from rescue_planner.annex.labels import spread, wrapped
from rescue_planner.annex.scales import generations_scale, ticks, values_scale, years_scale
from rescue_planner.projection.marks import mark


def _curve(*values: float) -> Curve:
    years = 2027.0 + np.arange(len(values))
    return Curve(
        "No releases", mark(0), "expected", "mean", years, np.array(values), Band(None, None), None
    )


@each(some.lists(some.floats(0, 60), min_size=1, max_size=12))
def test_that_labels_never_overlap_and_stay_on_the_sheet(wanted):
    heights = [4.0] * len(wanted)
    placed = sorted(spread(wanted, heights, 0.0, 60.0))
    gaps = np.diff(placed)
    assert (gaps >= 4.0 - 1e-9).all()
    assert placed[0] >= 2.0 - 1e-9
    assert placed[-1] <= 58.0 + 1e-9


def test_that_labels_with_room_stay_at_the_end_of_their_lines():
    assert spread([10.0, 30.0], [4.0, 4.0], 0.0, 60.0) == [10.0, 30.0]


def test_that_labels_keep_the_order_of_their_lines():
    placed = spread([30.0, 29.0, 31.0], [4.0] * 3, 0.0, 60.0)
    assert placed[1] < placed[0] < placed[2]


def test_that_long_names_are_broken_at_spaces_and_cut_with_an_ellipsis():
    rows = wrapped("two pairs every fourth year", 10, len, 2)
    assert rows == ("two pairs", "every fou…")
    assert wrapped("short", 10, len, 2) == ("short",)
    assert wrapped("unbreakableword", 10, len, 2) == ("unbreakab…",)


@each(some.floats(-1e6, 1e6), some.floats(1e-6, 1e6))
def test_that_ticks_are_few_and_lie_within_the_axis(low, span):
    at = ticks(low, low + span, 5)
    assert len(at) <= 6
    assert all(low - 1e-6 * span <= v <= low + span * (1 + 1e-6) for v in at)


def test_that_a_flat_line_is_not_blown_up_into_a_trend():
    scale = values_scale("gene_diversity_kept", [_curve(100.0, 99.99, 99.98)], [])
    assert scale.high - scale.low >= 2.0


def test_that_nothing_at_all_has_an_axis_from_zero_up():
    scale = values_scale("cost", [_curve(0.0, 0.0)], [])
    assert scale.low == 0.0
    assert scale.texts == ("0", "1")


def test_that_an_axis_begins_at_zero_where_zero_is_near_and_not_where_it_is_far():
    assert values_scale("adults", [_curve(10.0, 60.0)], []).low == 0.0
    assert values_scale("gene_diversity_kept", [_curve(100.0, 80.0)], []).low > 50


def test_that_values_below_zero_are_on_the_axis():
    scale = values_scale("inbreeding", [_curve(0.3, -0.05)], [])
    assert scale.low < -0.05
    assert any(
        text.startswith("−") or value >= 0
        for value, text in zip(scale.ticks, scale.texts, strict=True)
    )


def test_that_missing_numbers_do_not_break_the_axis():
    scale = values_scale("inbreeding", [_curve(0.3, float("nan"), 0.4)], [])
    assert scale.low < 0.3
    assert scale.high > 0.4


@pytest.mark.parametrize("length", [0.7, 4.0, 25.0])
def test_that_generations_stand_over_their_years(length):
    scale = generations_scale(2027, 2087, length, 8)
    for year, text in zip(scale.ticks, scale.texts, strict=True):
        assert year == pytest.approx(2027 + length * int(text))
        assert year <= 2087 + 1e-9


def test_that_years_are_whole_and_ungrouped():
    scale = years_scale(2027, 2031, 8)
    assert scale.texts == ("2027", "2028", "2029", "2030", "2031")
