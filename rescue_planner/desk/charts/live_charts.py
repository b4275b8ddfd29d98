"""Charts that follow the open case: they draw its own comparison or say why they don't."""

from __future__ import annotations

from collections.abc import Callable

from PySide6.QtCore import QObject, QTimer, Signal
from PySide6.QtGui import QShowEvent
from PySide6.QtWidgets import QVBoxLayout, QWidget

from rescue_planner.case.document import Case
from rescue_planner.desk.charts.look import Look
from rescue_planner.desk.charts.multiples import SmallMultiples
from rescue_planner.desk.charts.shown import PanelSpec, Shown
from rescue_planner.desk.context import Desk
from rescue_planner.projection.results import Comparison

Choose = Callable[[Case, Comparison, tuple[str, ...]], tuple[PanelSpec, ...]]

STALE_MS = 150  # how long old lines may wait for new ones before they are taken away
NO_CASE = "No case is open. Open one, or begin a new one, from the File menu."
COMPUTING = "The projections of the changed case are being computed."


class LiveCharts(QWidget):
    """Small multiples of the open case; hidden ones draw when they are shown again."""

    refreshed = Signal()

    def __init__(
        self, desk: Desk, name: str, choose: Choose, parent: QWidget | None = None
    ) -> None:
        super().__init__(parent)
        self._desk, self._choose = desk, choose
        self._strong: str | None = None
        self._waiting = True
        self.charts = SmallMultiples(name, self)
        self._stale = QTimer(self)
        self._stale.setSingleShot(True)
        self._stale.setInterval(STALE_MS)
        layout = QVBoxLayout(self)
        layout.setContentsMargins(0, 0, 0, 0)
        layout.addWidget(self.charts)
        self._say(COMPUTING)
        self._connect()

    def _connect(self) -> None:
        self._stale.timeout.connect(self._take_away)
        self._desk.document.changed.connect(self._case_changed)
        self._desk.document.replaced.connect(self.refresh)
        self._desk.live.updated.connect(self._updated)
        self._desk.view.changed.connect(self.refresh)
        self.charts.panel_chosen.connect(self._desk.explain.show)

    def set_strong(self, plan: str | None) -> None:
        """Draw one plan stronger than the others."""
        if plan != self._strong:
            self._strong = plan
            self.refresh()

    def _case_changed(self, _case: object) -> None:
        if self._desk.live.comparison is None:
            self._stale.start()

    def _take_away(self) -> None:
        if self._desk.live.comparison is None:
            self.refresh()

    def _updated(self, _comparison: object) -> None:
        self.refresh()

    def refresh(self) -> None:
        """Draw the comparison of the case as it stands now, and no other."""
        if not self.isVisible():
            self._waiting = True
            return
        self._waiting = False
        document, comparison = self._desk.document, self._desk.live.comparison
        if not document.has_case:
            self._say(NO_CASE)
        elif comparison is None:
            self._say(COMPUTING)
        else:
            self._draw(document.case, comparison)
        self.refreshed.emit()

    def _say(self, words: str) -> None:
        self._dress()
        self.charts.show_message(words)

    def _dress(self) -> None:
        self.charts.setBackground(self.look().colours.paper)

    def look(self) -> Look:
        """How charts look now."""
        view = self._desk.view
        return Look(view.scheme, view.text_scale, view.axis)

    def _draw(self, case: Case, comparison: Comparison) -> None:
        self._stale.stop()
        plans = tuple(p for p in comparison.plans if p not in self._desk.view.hidden)
        specs = self._choose(case, comparison, plans)
        if not specs:
            self._say("No measure is chosen here.")
            return
        strong = self._strong if self._strong in plans else None
        self.charts.show_all(Shown(comparison, case, plans, specs, strong, self.look()))

    def showEvent(self, event: QShowEvent) -> None:
        super().showEvent(event)
        if self._waiting:
            self.refresh()


def read_together(charts: list[SmallMultiples]) -> None:
    """Let several charts share one read-out."""
    for one in charts:
        one.read_out_moved.connect(_Follow(one, [x for x in charts if x is not one]).follow)


class _Follow(QObject):
    """Passes the read-out of one chart on to others."""

    def __init__(self, leader: SmallMultiples, others: list[SmallMultiples]) -> None:
        super().__init__(leader)
        self._leader, self._others = leader, others

    def follow(self, _t: int) -> None:
        for other in self._others:
            if other.t != self._leader.t:
                other.t = self._leader.t
                other.show_read_out()
