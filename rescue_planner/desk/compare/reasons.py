"""The why panel of the Compare page: one plan, step by step, split into its parts."""

from __future__ import annotations

from PySide6.QtWidgets import QVBoxLayout, QWidget

from rescue_planner.advice.reasons import topics, why_table
from rescue_planner.desk import theme
from rescue_planner.desk.compare.fold import Choice, Seen
from rescue_planner.desk.compare.values import EMPTY, CopyingTable, ValueModel
from rescue_planner.desk.flow import FlowLayout
from rescue_planner.desk.widgets import button, text
from rescue_planner.projection.why import Why, why


class WhyPanel(QWidget):
    """Which plan, of what, and the parts of each step with their formula and source."""

    def __init__(self, parent: QWidget | None = None) -> None:
        super().__init__(parent)
        self._seen: Seen | None = None
        self.why: Why | None = None
        self.plan = Choice("Plan", "Plan that is explained", self)
        self.topic = Choice("What", "What is explained", self)
        self.copy_button = button("Copy table", said="Copy the table of steps as text")
        self.model = ValueModel(self)
        self.table = CopyingTable("Parts of each step", self)
        self.table.setModel(self.model)
        self.notes = text("", "note")
        top = FlowLayout()
        for choice in (self.plan, self.topic):
            top.addWidget(choice.pair)
            choice.currentIndexChanged.connect(self._rebuild)
        top.addWidget(self.copy_button)
        layout = QVBoxLayout(self)
        layout.setContentsMargins(0, 0, 0, 0)
        layout.setSpacing(theme.HALF)
        layout.addLayout(top)
        layout.addWidget(self.table)
        layout.addWidget(self.notes)
        self.copy_button.clicked.connect(self.table.copy)

    def stops(self) -> tuple[QWidget, ...]:
        """Return what Tab stops at, in order."""
        return (self.plan, self.topic, self.copy_button, self.table)

    def show_seen(self, seen: Seen | None) -> None:
        """Explain one of these plans, or nothing."""
        self._seen = seen
        if seen is not None:
            self.plan.offer(seen.offered_plans(), usual=1)
        self._rebuild()

    def _rebuild(self) -> None:
        seen, plan = self._seen, self.plan.currentData()
        self.table.setVisible(seen is not None and plan is not None)
        self.notes.setVisible(seen is not None and plan is not None)
        if seen is None or plan is None:
            self.why = None
            self.model.show_table(EMPTY)
            return
        self.why = why(seen.case, plan, seen.comparison)
        self.topic.offer(list(topics(self.why)))
        self.model.show_table(why_table(seen.comparison, self.why, self.topic.currentData()))
        self.table.fit_height()
        self.notes.setText("\n".join(self.model.table.notes))
