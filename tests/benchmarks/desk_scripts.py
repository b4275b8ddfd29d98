"""Small programs that `bench_desk` runs in fresh processes; each prints one line of JSON."""

from __future__ import annotations

import json
import os
import sys
import time

BEGUN = time.perf_counter()
os.environ.setdefault("QT_QPA_PLATFORM", "offscreen")
HEAVY = ("scipy.stats", "pandas", "numba", "matplotlib", "docx")


def say(**values: object) -> None:
    print(json.dumps(values), flush=True)
    os._exit(0)  # nothing of the ending belongs to the measurement


def _until_painted(window, app) -> None:
    from PySide6.QtCore import QEvent, QObject

    class Watch(QObject):
        def eventFilter(self, watched, event):
            if event.type() == QEvent.Type.Paint:
                seconds = time.perf_counter() - BEGUN
                heavy = sum(name in sys.modules for name in HEAVY)
                say(seconds=seconds, heavy=heavy)
            return False

    watch = Watch()
    window.installEventFilter(watch)
    window.show()
    app.exec()


def bare_window() -> None:
    """A window of the same shape: menus, strip, rail, stack, side, status."""
    from PySide6.QtCore import Qt
    from PySide6.QtWidgets import (
        QApplication,
        QDockWidget,
        QLabel,
        QListWidget,
        QMainWindow,
        QStackedWidget,
        QToolBar,
    )

    app = QApplication([])
    window = QMainWindow()
    for title in ("File", "Edit", "View", "Help"):
        menu = window.menuBar().addMenu(title)
        for index in range(6):
            menu.addAction(f"{title} {index}")
    bar = QToolBar()
    for index in range(8):
        bar.addAction(str(index))
    window.addToolBar(bar)
    stack = QStackedWidget()
    stack.addWidget(QLabel("page"))
    window.setCentralWidget(stack)
    for side in (Qt.DockWidgetArea.LeftDockWidgetArea, Qt.DockWidgetArea.RightDockWidgetArea):
        dock = QDockWidget()
        dock.setWidget(QListWidget())
        window.addDockWidget(side, dock)
    window.statusBar().showMessage("ready")
    window.resize(1280, 760)
    _until_painted(window, app)


def own_window() -> None:
    """The desk as `rescue-planner` opens it."""
    from rescue_planner import places

    places.prepare_numerics()
    from PySide6.QtWidgets import QApplication

    from rescue_planner.desk.settings import Settings
    from rescue_planner.desk.window import DeskWindow

    app = QApplication([])
    _until_painted(DeskWindow(Settings()), app)


def fill_cache() -> None:
    from rescue_planner.kernels.warm import warm

    warm()
    say(done=True)


def stall() -> None:
    """The longest gap of a 5 ms ticker from the shown window until the kernels are in."""
    from rescue_planner import places

    places.prepare_numerics()
    from PySide6.QtCore import QTimer
    from PySide6.QtWidgets import QApplication

    from rescue_planner.desk.kernels import KernelLoader
    from rescue_planner.desk.settings import Settings
    from rescue_planner.desk.window import DeskWindow

    app = QApplication([])
    window = DeskWindow(Settings())
    window.show()
    for _ in range(50):  # the first page is made before the measurement
        app.processEvents()
        time.sleep(0.01)
    loader = KernelLoader()
    gaps, last = [], [time.perf_counter()]

    def tick() -> None:
        now = time.perf_counter()
        gaps.append(now - last[0])
        last[0] = now

    ticker = QTimer()
    ticker.setInterval(5)
    ticker.timeout.connect(tick)
    begun = time.perf_counter()
    loader.ready.connect(
        lambda: say(longest=max(gaps), done=time.perf_counter() - begun, gaps=len(gaps))
    )
    loader.given_up.connect(lambda: sys.exit("the kernels did not come in"))
    last[0] = time.perf_counter()
    ticker.start()
    loader.start()
    app.exec()


LOCI = 2


def _raw(scale: float, changed: float) -> dict:
    """A case of six plans over 100 generations with two tracked loci."""
    plans = [{"name": "No releases"}]
    for i in range(5):
        rate = (1.0 + i) * scale * (changed if i == 2 else 1.0)
        plans.append(
            {"name": f"Plan {i}", "steady": [{"donor": "There", "migrants_per_generation": rate}]}
        )
    return {
        "title": "Board",
        "time": {"start_year": 2000, "horizon_years": 100, "generation_years": 1},
        "recipient": {
            "name": "Here",
            "adults": 60,
            "effective_size": 20,
            "gene_diversity": 0.42,
            "reference_gene_diversity": 0.68,
        },
        "donors": [{"name": "There", "gene_diversity": 0.64, "fst_to_recipient": 0.2}],
        "loci": [
            {
                "name": f"locus {k}",
                "fitness": [1, 0.98, 0.95],
                "frequency": 0.8,
                "donor_frequency": {"There": 0.1},
            }
            for k in range(LOCI)
        ],
        "plans": plans,
    }


def _board(app):
    """Return charts of 12 panels, and a function that gives what they show of a case."""
    from rescue_planner.case.problems import read_case
    from rescue_planner.desk.charts.multiples import SmallMultiples
    from rescue_planner.desk.charts.shown import Shown, specs
    from rescue_planner.projection.compare import compare

    def shown(scale: float, changed: float):
        case = read_case(_raw(scale, changed))
        result = compare(case)
        keys = [f"allele_frequency:locus {k}" for k in range(LOCI)]
        return Shown(result, case, result.plans, specs(keys, result.plans))

    charts = SmallMultiples("board")
    charts.resize(1280, 800)
    charts.show()
    charts.show_all(shown(1.0, 1.0))
    assert len(charts.panels) == 12
    for _ in range(20):
        app.processEvents()
        time.sleep(0.01)
    return charts, shown


def _drawn(charts, wanted) -> float:
    """Seconds from the new values to painted pixels."""
    begun = time.perf_counter()
    charts._wanted = wanted
    charts.flush()
    charts.viewport().repaint()
    return time.perf_counter() - begun


def board() -> None:
    """One plan changed against all changed, in turn."""
    from PySide6.QtWidgets import QApplication

    app = QApplication([])
    charts, shown = _board(app)
    ratios, ones, alls, frames = [], [], [], []
    for turn in range(7):
        scale = 1.0 + 0.02 * (turn + 1)
        everything = shown(scale, 1.0)
        alls.append(_drawn(charts, everything))
        one = shown(scale, 1.3)
        ones.append(_drawn(charts, one))
        ratios.append(ones[-1] / alls[-1])
        frames.append(_frames_until_drawn(app, charts, shown(scale, 1.6)))
    ones, alls = sorted(ones), sorted(alls)
    say(ratios=ratios, one=1e3 * ones[3], all=1e3 * alls[3], frames=frames)


def _frames_until_drawn(app, charts, wanted) -> int:
    """Paints of the charts until those of the wanted values are through the event loop."""
    from PySide6.QtCore import QEvent, QObject

    class Count(QObject):
        paints = 0

        def eventFilter(self, watched, event):
            self.paints += event.type() == QEvent.Type.Paint
            return False

    count = Count()
    charts.viewport().installEventFilter(count)
    charts.show_all(wanted)
    while charts.shown is not wanted or not count.paints:
        app.processEvents()
    charts.viewport().removeEventFilter(count)
    return count.paints


def edits() -> None:
    """200 edits in a second: how often the charts are painted."""
    from PySide6.QtCore import QEvent, QObject, QTimer
    from PySide6.QtWidgets import QApplication

    app = QApplication([])
    charts, shown = _board(app)
    values = [shown(1.0, 1.0 + 0.01 * (i % 20)) for i in range(20)]

    class Count(QObject):
        paints = 0

        def eventFilter(self, watched, event):
            self.paints += event.type() == QEvent.Type.Paint
            return False

    count = Count()
    charts.viewport().installEventFilter(count)
    done = [0]
    timer = QTimer()
    timer.setInterval(5)

    def edit() -> None:
        charts.show_all(values[done[0] % 20])
        done[0] += 1
        if done[0] == 200:
            timer.stop()
            QTimer.singleShot(100, lambda: say(paints=count.paints))

    timer.timeout.connect(edit)
    timer.start()
    app.exec()


if __name__ == "__main__":
    {
        "bare_window": bare_window,
        "own_window": own_window,
        "fill_cache": fill_cache,
        "stall": stall,
        "board": board,
        "edits": edits,
    }[sys.argv[1]]()
