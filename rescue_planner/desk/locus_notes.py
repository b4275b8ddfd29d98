"""What theory says of tracked loci, in words, under the plans as they stand."""

from __future__ import annotations

from collections.abc import Callable, Iterator

from PySide6.QtCore import Qt
from PySide6.QtGui import QShowEvent
from PySide6.QtWidgets import QVBoxLayout, QWidget

from rescue_planner.case.document import Case
from rescue_planner.desk import theme
from rescue_planner.desk.context import Desk
from rescue_planner.desk.widgets import text

Which = Callable[[Case], tuple[str, ...]]


def every_locus(case: Case) -> tuple[str, ...]:
    """Return the names of all tracked loci."""
    return tuple(locus.name for locus in case.loci)


class LocusNotes(QWidget):
    """Follows the live comparison: equilibria, fastest frequency, critical flow, each plan's m."""

    def __init__(self, desk: Desk, which: Which, *, named: bool = True) -> None:
        super().__init__()
        self._desk, self._which, self._named = desk, which, named
        self.words, self.left_out = text("", "small"), text("", "note")
        column = QVBoxLayout(self)
        column.setContentsMargins(0, theme.HALF, 0, theme.HALF)
        column.setSpacing(theme.HALF)
        for label in (self.words, self.left_out):
            label.setTextInteractionFlags(Qt.TextInteractionFlag.TextSelectableByMouse)
            column.addWidget(label)
        desk.live.updated.connect(self.refresh)
        desk.view.changed.connect(self.refresh)

    def retire(self) -> None:
        """Listen to nothing any more."""
        self._desk.live.updated.disconnect(self.refresh)
        self._desk.view.changed.disconnect(self.refresh)

    def refresh(self, _: object = None) -> None:
        """Say what holds for the case as it stands; hidden notes wait until they are shown."""
        document = self._desk.document
        if not self.isVisible() or not document.has_case or self._desk.live.comparison is None:
            return
        from rescue_planner.projection.locus_words import LEFT_OUT

        self.words.setText("\n\n".join(self._paragraphs(document.case)))
        self.left_out.setText(LEFT_OUT if self.words.text() else "")

    def showEvent(self, event: QShowEvent) -> None:
        super().showEvent(event)
        self.refresh()

    def _paragraphs(self, case: Case) -> Iterator[str]:
        from rescue_planner.projection.compare import plan_courses
        from rescue_planner.projection.locus_words import locus_sentences, plan_words

        shown = [plan.name for plan in case.plans if plan.name not in self._desk.view.hidden]
        courses = plan_courses(case, shown)
        wanted = self._which(case)
        for i, locus in enumerate(case.loci):
            if locus.name in wanted:
                name = f"{locus.name}. " if self._named else ""
                yield name + "\n".join(locus_sentences(case, i))
                yield "\n".join(plan_words(case, locus, courses))
