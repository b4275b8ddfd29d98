"""The Plans page: what could be done."""

from __future__ import annotations

from PySide6.QtCore import Qt
from PySide6.QtGui import QResizeEvent
from PySide6.QtWidgets import QBoxLayout, QScrollArea, QVBoxLayout, QWidget

from rescue_planner.case.document import Case
from rescue_planner.desk import theme
from rescue_planner.desk.charts.live_charts import NO_CASE, LiveCharts
from rescue_planner.desk.charts.shown import PanelSpec
from rescue_planner.desk.context import Desk
from rescue_planner.desk.plan_editor.editor import PlanEditor
from rescue_planner.desk.plan_editor.plan_list import PlanList
from rescue_planner.desk.widgets import rule, scrolled, text
from rescue_planner.projection.results import Comparison

QUESTION = "What could we do?"
MOST_HEIGHT = 16777215  # Qt: no bound
LIST_WIDTH, CHART_WIDTH, EDITOR_WIDTH = 212, 300, 320
BESIDE = ("relative_first_year_survival", "gene_diversity_kept", "inbreeding", "donor_ancestry")


class PlansPage(QWidget):
    """The plans, the editor of one of them, and its live projection beside it."""

    def __init__(self, desk: Desk, parent: QWidget | None = None) -> None:
        super().__init__(parent)
        self._desk = desk
        self._wide = True
        self.list = PlanList(desk, self)
        self.editor = PlanEditor(desk, self)
        self.live = LiveCharts(desk, "Live projection of the plans", self._specs, self)
        self.charts = self.live.charts
        self.empty = text(NO_CASE, "soft")
        self._lay_out()
        self._connect()
        self._choose(self.list.current)
        self._case_came_or_went()

    def _lay_out(self) -> None:
        self._editor_holder, self._chart_holder = self._padded(self.editor), self._padded(self.live)
        self.area: QScrollArea = _scrolled_always(self._editor_holder)
        self.chart_area: QScrollArea = _scrolled_always(self._chart_holder)
        self.columns = QBoxLayout(QBoxLayout.Direction.LeftToRight)
        self.columns.setSpacing(theme.UNIT)
        self._rules = [rule(upright=True), rule(upright=True)]
        for widget, stretch in (
            (self.list, 0), (self._rules[0], 0), (self.area, 5), (self._rules[1], 0),
            (self.chart_area, 4),
        ):  # fmt: skip
            self.columns.addWidget(widget, stretch)
        inner = QWidget(self)
        column = QVBoxLayout(inner)
        column.setContentsMargins(2 * theme.UNIT, 2 * theme.UNIT, theme.UNIT, theme.UNIT)
        column.setSpacing(theme.UNIT)
        column.addWidget(text(QUESTION, "title"))
        column.addWidget(self.empty)
        column.addLayout(self.columns, 1)
        self.whole: QScrollArea = scrolled(inner)
        self.whole.setFocusPolicy(Qt.FocusPolicy.NoFocus)
        outer = QVBoxLayout(self)
        outer.setContentsMargins(0, 0, 0, 0)
        outer.addWidget(self.whole)

    def _padded(self, inner: QWidget) -> QWidget:
        """Return `inner` in a column that keeps it at the top."""
        holder = QWidget(self)
        column = QVBoxLayout(holder)
        column.setContentsMargins(theme.HALF, 0, theme.UNIT, theme.UNIT)
        column.addWidget(inner)
        column.addStretch(1)
        return holder

    def _connect(self) -> None:
        self.list.chosen.connect(self._choose)
        self._desk.document.replaced.connect(self._case_came_or_went)
        self._desk.view.changed.connect(self._arrange)
        self.editor.built.connect(self._chain)
        self.setFocusProxy(self.list.list)

    def _chain(self) -> None:
        """Let Tab go from the list through the plan, top to bottom, to the charts."""
        before: QWidget = self.list.remove_button
        for widget in self.editor.reached():
            QWidget.setTabOrder(before, widget)
            before = widget
        QWidget.setTabOrder(before, self.charts)

    def _choose(self, plan: str) -> None:
        self.editor.show_plan(plan)
        self.live.set_strong(plan)

    def _case_came_or_went(self) -> None:
        there = self._desk.document.has_case
        self.empty.setVisible(not there)
        parts = (self.area, self.chart_area) if self._wide else ()
        for widget in (self.list, self._editor_holder, self._chart_holder, *parts, *self._rules):
            widget.setVisible(there)

    def _specs(
        self, case: Case, comparison: Comparison, plans: tuple[str, ...]
    ) -> tuple[PanelSpec, ...]:
        keys = [*BESIDE, *(["adults"] if case.life_cycle is not None else [])]
        found = [PanelSpec(key) for key in keys]
        current = self.list.current
        if case.loci:
            fan_of = current if current in plans else None
            found.append(PanelSpec(f"allele_frequency:{case.loci[0].name}", fan_of))
        return tuple(found)

    def resizeEvent(self, event: QResizeEvent) -> None:
        super().resizeEvent(event)
        self._arrange()

    def _arrange(self) -> None:
        """Stand columns side by side where there is room, else below one another."""
        scale = self._desk.view.text_scale
        wide = self.width() >= (LIST_WIDTH + EDITOR_WIDTH + CHART_WIDTH) * scale
        if wide:
            self.list.setFixedWidth(round(LIST_WIDTH * scale))
        else:
            self.list.setFixedWidth(max(120, self.width() - 5 * theme.UNIT))
        if wide != self._wide:
            self._wide = wide
            self._stand(wide)

    def _stand(self, wide: bool) -> None:
        """Side by side each column scrolls by itself; below one another only the page does."""
        self.columns.setDirection(
            QBoxLayout.Direction.LeftToRight if wide else QBoxLayout.Direction.TopToBottom
        )
        for line in self._rules:
            line.setObjectName("vrule" if wide else "rule")
            line.setMinimumSize(1, 1)
            line.setMaximumSize(*((1, MOST_HEIGHT) if wide else (MOST_HEIGHT, 1)))
            line.style().polish(line)
        for area, holder in (
            (self.area, self._editor_holder),
            (self.chart_area, self._chart_holder),
        ):
            if wide:
                self.columns.removeWidget(holder)
                area.setWidget(holder)
            else:
                area.takeWidget()
                self.columns.insertWidget(self.columns.indexOf(area), holder)
            holder.show()
            area.setVisible(wide and self._desk.document.has_case)


def _scrolled_always(inner: QWidget) -> QScrollArea:
    """Return `inner` in an area whose scroll bar is always there, so that nothing jumps."""
    area = scrolled(inner)
    area.setVerticalScrollBarPolicy(Qt.ScrollBarPolicy.ScrollBarAlwaysOn)
    area.setFocusPolicy(Qt.FocusPolicy.NoFocus)
    return area
