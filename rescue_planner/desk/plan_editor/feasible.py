"""What in a plan cannot be done, how to mend it, and a link to the number."""

from __future__ import annotations

from PySide6.QtCore import Signal
from PySide6.QtWidgets import QVBoxLayout, QWidget

from rescue_planner.case.document import Case
from rescue_planner.case.plans import Plan
from rescue_planner.desk import theme
from rescue_planner.desk.context import Desk
from rescue_planner.desk.widgets import Link, rule, text
from rescue_planner.projection.feasibility import CHECKED, Finding, findings


class Feasible(QWidget):
    """A sentence for each finding; made anew where the findings change."""

    wanted = Signal(str)  # the path of a number
    built = Signal()  # with other links

    def __init__(self, desk: Desk, parent: QWidget | None = None) -> None:
        super().__init__(parent)
        self._desk = desk
        self._plan = ""
        self.found: tuple[Finding, ...] = ()
        self.links: list[Link] = []
        self._list = QWidget(self)
        self._sound = text(CHECKED, "note")
        column = QVBoxLayout(self)
        column.setContentsMargins(0, 0, 0, theme.HALF)
        column.setSpacing(theme.HALF)
        column.addWidget(rule())
        column.addWidget(text("Can it be done?", "section"))
        column.addWidget(self._sound)
        column.addWidget(self._list)

    def show_plan(self, case: Case, plan: Plan) -> None:
        """Show what was found; while the projection is on its way, what was found before stays."""
        comparison = self._desk.live.comparison
        if comparison is None and plan.name == self._plan:
            return
        self._plan = plan.name
        found = findings(case, plan.name, comparison)
        if found != self.found or self._list.layout() is None:
            self.found = found
            self._build()

    def _build(self) -> None:
        made = QWidget(self)
        column = QVBoxLayout(made)
        column.setContentsMargins(0, 0, 0, 0)
        column.setSpacing(2)
        self.links = []
        for one in self.found:
            column.addWidget(text(f"⚠ {one.sentence} {one.mend}", "caution"))
            link = Link(one.link)
            link.setAccessibleName(one.link)
            link.clicked.connect(lambda _=False, path=one.path: self.wanted.emit(path))
            self.links.append(link)
            column.addWidget(link)
        layout = self.layout()
        assert layout is not None
        layout.replaceWidget(self._list, made)
        self._list.hide()
        self._list.deleteLater()
        self._list = made
        made.setVisible(bool(self.found))
        self._sound.setVisible(not self.found)
        self.built.emit()
