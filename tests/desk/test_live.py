"""The live comparison follows every edit and is never stale."""

from __future__ import annotations

import numpy as np

from rescue_planner.case.edits import set_value
from rescue_planner.desk import live as live_module
from rescue_planner.projection.compare import compare, comparison_key


def _edit(desk, path, value) -> None:
    assert desk.document.try_edit(lambda case: set_value(case, path, value)) == ()


def test_that_the_comparison_is_that_of_the_projection(qtbot, desk, small) -> None:
    with qtbot.waitSignal(desk.live.updated):
        desk.document.new(small)
    ours, theirs = desk.live.comparison, compare(small)
    assert ours is not None
    assert ours.key == theirs.key
    for one in theirs.series:
        same = ours.get(one.plan, one.depth, one.measure, one.statistic)
        assert same is not None
        np.testing.assert_array_equal(same.values, one.values)


def test_that_a_burst_of_edits_is_computed_once(qtbot, desk, small) -> None:
    desk.document.new(small)
    desk.live.recompute()
    heard = []
    desk.live.updated.connect(heard.append)
    for size in (15, 14, 13, 12):
        _edit(desk, "recipient.effective_size", size)
    qtbot.waitUntil(lambda: bool(heard))
    qtbot.wait(50)
    assert len(heard) == 1
    assert heard[0].case_hash == compare(desk.document.case).case_hash


def test_that_a_stale_comparison_is_not_given_out(desk, small) -> None:
    desk.document.new(small)
    desk.live.recompute()
    assert desk.live.comparison is not None
    _edit(desk, "recipient.effective_size", 12)
    assert desk.live.comparison is None
    desk.live.recompute()
    assert desk.live.comparison is not None
    plans = [plan.name for plan in desk.document.case.plans]
    key = comparison_key(desk.document.case, plans, ("expected", "exact"))
    assert desk.live.comparison.key == key


def test_that_costly_odds_come_behind_the_average_course(qtbot, desk, small, monkeypatch) -> None:
    monkeypatch.setattr(live_module, "most_exact_at_once", lambda: 0.0)
    heard = []
    desk.live.updated.connect(heard.append)
    desk.document.new(small)
    desk.live.recompute()
    assert [one.depths for one in heard] == [("expected",)]
    qtbot.waitUntil(lambda: len(heard) == 2)
    assert heard[1].depths == ("expected", "exact")
    assert desk.live.comparison is heard[1]


def test_that_odds_of_a_case_that_has_moved_on_are_dropped(qtbot, desk, small, monkeypatch) -> None:
    monkeypatch.setattr(live_module, "most_exact_at_once", lambda: 0.0)
    heard = []
    desk.live.updated.connect(heard.append)
    desk.document.new(small)
    desk.live.recompute()
    _edit(desk, "recipient.effective_size", 12)
    desk.live.recompute()
    qtbot.waitUntil(lambda: any("exact" in one.depths for one in heard))
    qtbot.wait(100)
    now = compare(desk.document.case).case_hash
    assert all(one.case_hash == now for one in heard if "exact" in one.depths)


def test_that_a_huge_horizon_is_computed_behind_the_window(qtbot, desk, small, monkeypatch) -> None:
    monkeypatch.setattr(live_module, "MOST_EXPECTED_AT_ONCE", 1.0)
    desk.document.new(small)
    desk.live.recompute()
    assert desk.live.comparison is None
    with qtbot.waitSignal(desk.live.updated):
        pass
    assert desk.live.comparison is not None


def test_that_closing_the_case_forgets_its_comparison(desk, small) -> None:
    desk.document.new(small)
    desk.live.recompute()
    desk.document.close()
    assert desk.live.comparison is None


def test_that_the_cost_of_odds_grows_with_plans_loci_and_size(small) -> None:
    cost = live_module.exact_cost(small)
    # one locus, two plans, ten generations, 2Ne = 32
    assert cost == 2 * 10 * 32**1.5
    larger = set_value(small, "recipient.effective_size", 32).case
    assert live_module.exact_cost(larger) > 2.8 * cost
