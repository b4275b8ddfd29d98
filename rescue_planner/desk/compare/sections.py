"""The sections under the charts of the Compare page, brought up to date only while they show."""

from __future__ import annotations

from PySide6.QtGui import QShowEvent
from PySide6.QtWidgets import QVBoxLayout, QWidget

from rescue_planner.desk import theme
from rescue_planner.desk.compare.consequence import ConsequenceTable
from rescue_planner.desk.compare.difference import PlanAgainstPlan
from rescue_planner.desk.compare.fold import Seen
from rescue_planner.desk.compare.reasons import WhyPanel
from rescue_planner.desk.compare.trade import TradeOff
from rescue_planner.desk.widgets import rule, text


class Sections(QWidget):
    """Consequences, trade-offs, differences and reasons, one under another with headings."""

    def __init__(self, parent: QWidget | None = None) -> None:
        super().__init__(parent)
        self._seen: Seen | None = None
        self._waiting = False
        self.consequences = ConsequenceTable(self)
        self.trade_off = TradeOff(self)
        self.against = PlanAgainstPlan(self)
        self.why = WhyPanel(self)
        layout = QVBoxLayout(self)
        layout.setContentsMargins(0, 0, 0, 0)
        layout.setSpacing(theme.UNIT)
        parts: tuple[tuple[str, QWidget], ...] = (
            ("Consequences of each plan", self.consequences),
            ("What is paid for what, in the year of the table above", self.trade_off),
            ("One plan against another", self.against),
            ("Why a plan leads there", self.why),
        )
        for heading, part in parts:
            layout.addWidget(rule())
            layout.addWidget(text(heading, "section"))
            layout.addWidget(part)
        self.consequences.changed.connect(self._show_trade_off)

    def stops(self) -> tuple[QWidget, ...]:
        """Return what Tab stops at, in order."""
        return (
            *self.consequences.stops(), *self.trade_off.stops(), *self.against.stops(),
            *self.why.stops(),
        )  # fmt: skip

    def forget(self) -> None:
        """Forget what was chosen: another case is open."""
        self._seen = None
        self.consequences.forget()

    def show_seen(self, seen: Seen | None) -> None:
        """Show these plans and measures; hidden sections wait until they are shown."""
        if seen is not None and not self._waiting and seen.is_like(self._seen):
            return
        self._seen = seen
        if seen is not None and not self.isVisible():
            self._waiting = True
            return
        self._show()

    def _show(self) -> None:
        self._waiting = False
        self.consequences.show_seen(self._seen)  # the trade-off chart follows it
        self.against.show_seen(self._seen)
        self.why.show_seen(self._seen)

    def _show_trade_off(self) -> None:
        self.trade_off.show_table(self._seen, self.consequences.of_every_measure())

    def showEvent(self, event: QShowEvent) -> None:
        super().showEvent(event)
        if self._waiting:
            self._show()
