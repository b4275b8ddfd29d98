"""The sections under the charts of the Compare page, brought up to date only while they show."""

from __future__ import annotations

from PySide6.QtGui import QShowEvent
from PySide6.QtWidgets import QVBoxLayout, QWidget

from rescue_planner.desk import theme
from rescue_planner.desk.compare.consequence import ConsequenceTable
from rescue_planner.desk.compare.fold import Seen
from rescue_planner.desk.widgets import rule, text


class Sections(QWidget):
    """Consequences of the plans, one under another with headings."""

    def __init__(self, parent: QWidget | None = None) -> None:
        super().__init__(parent)
        self._seen: Seen | None = None
        self._waiting = False
        self.consequences = ConsequenceTable(self)
        layout = QVBoxLayout(self)
        layout.setContentsMargins(0, 0, 0, 0)
        layout.setSpacing(theme.UNIT)
        for heading, part in (("Consequences of each plan", self.consequences),):
            layout.addWidget(rule())
            layout.addWidget(text(heading, "section"))
            layout.addWidget(part)

    def stops(self) -> tuple[QWidget, ...]:
        """Return what Tab stops at, in order."""
        return self.consequences.stops()

    def forget(self) -> None:
        """Forget what was chosen: another case is open."""
        self.consequences.forget()

    def show_seen(self, seen: Seen | None) -> None:
        """Show these plans and measures; hidden sections wait until they are shown."""
        self._seen = seen
        if seen is not None and not self.isVisible():
            self._waiting = True
            return
        self._show()

    def _show(self) -> None:
        self._waiting = False
        self.consequences.show_seen(self._seen)

    def showEvent(self, event: QShowEvent) -> None:
        super().showEvent(event)
        if self._waiting:
            self._show()
