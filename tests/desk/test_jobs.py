"""One job at a time, told on the GUI thread."""

from __future__ import annotations

import threading

import pytest

from rescue_planner.desk.jobs import JobRunner


@pytest.fixture
def runner(qapp):
    made = JobRunner()
    yield made
    made.close()


def test_that_a_result_arrives_on_the_gui_thread(qtbot, runner) -> None:
    seen = []
    runner.finished.connect(lambda _: seen.append(threading.current_thread()))
    with qtbot.waitSignal(runner.finished) as told:
        runner.start(lambda _control: 42, "Counting")
    assert told.args == [42]
    assert seen == [threading.main_thread()]
    assert not runner.is_running


def test_that_a_superseded_job_is_silent(qtbot, runner) -> None:
    hold = threading.Event()
    results = []
    runner.finished.connect(results.append)
    runner.start(lambda _control: hold.wait(5) and "old", "Old")
    with qtbot.waitSignal(runner.finished):
        runner.start(lambda _control: "new", "New")
        hold.set()
    qtbot.wait(50)
    assert results == ["new"]


def test_that_cancel_stops_a_job_at_its_next_step(qtbot, runner) -> None:
    begun = threading.Event()

    def work(control) -> None:
        for done in range(100_000):
            begun.set()
            control.step(done, 100_000)
            threading.Event().wait(0.001)

    with qtbot.waitSignal(runner.cancelled, timeout=5000):
        runner.start(work, "Long")
        assert begun.wait(5)
        runner.cancel()


def test_that_an_error_is_told_to_who_started_the_job(qtbot, runner) -> None:
    told = []

    def work(_control) -> None:
        raise ValueError("no")

    with qtbot.waitSignal(runner.failed):
        runner.start(work, "Failing", failed=told.append)
    assert [str(error) for error in told] == ["no"]


def test_that_progress_is_thinned(qtbot, runner) -> None:
    steps = []
    runner.progressed.connect(lambda done, total: steps.append((done, total)))

    def work(control) -> None:
        for done in range(1, 20_001):
            control.step(done, 20_000)

    with qtbot.waitSignal(runner.finished, timeout=10_000):
        runner.start(work, "Many steps")
    assert steps[-1] == (20_000, 20_000)
    assert len(steps) < 100


def test_that_a_dropped_job_is_never_heard_of_again(qtbot, runner) -> None:
    results = []
    runner.finished.connect(results.append)
    runner.start(lambda _control: "late", "Late")
    runner.drop()
    qtbot.wait(80)
    assert results == []
    assert not runner.is_running
