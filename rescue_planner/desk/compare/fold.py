"""Small parts that the sections of the Compare page share: labelled choices in a flowing line."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass

from PySide6.QtCore import QPoint, QSignalBlocker
from PySide6.QtGui import QColor, QGuiApplication, QPixmap, QRegion
from PySide6.QtWidgets import QComboBox, QHBoxLayout, QLabel, QSizePolicy, QVBoxLayout, QWidget

from rescue_planner.case.document import Case
from rescue_planner.desk import theme
from rescue_planner.desk.charts.look import Look
from rescue_planner.projection import reading
from rescue_planner.projection.results import Comparison


@dataclass(frozen=True, slots=True, eq=False)
class Seen:
    """What the page shows now: the case, its comparison, the plans and measures in their order.

    `keys` are the measures chosen, `every` all that were computed.
    """

    case: Case
    comparison: Comparison
    plans: tuple[str, ...]
    keys: tuple[str, ...]
    every: tuple[str, ...]
    look: Look

    def is_like(self, other: Seen | None) -> bool:
        """Return whether both show the same, so that nothing need be done."""
        return (
            other is not None
            and self.case is other.case
            and self.comparison is other.comparison
            and (self.plans, self.keys, self.every) == (other.plans, other.keys, other.every)
            and self.look == other.look
        )

    def offered_plans(self) -> list[tuple[object, str]]:
        """Return the plans for a choice."""
        return [(plan, self.named(plan)) for plan in self.plans]

    def named(self, plan: str) -> str:
        """Return a plan's letter and name."""
        return f"{reading.letter(self.comparison, plan)} {plan}"


def framed(caption: QWidget, chart: QWidget) -> QWidget:
    """Return a chart under its caption, as one thing that can be copied."""
    both = QWidget()
    column = QVBoxLayout(both)
    column.setContentsMargins(0, 0, 0, 0)
    column.setSpacing(theme.HALF)
    column.addWidget(caption)
    column.addWidget(chart)
    return both


def copy_picture(chart: QWidget, ground: str) -> None:
    """Put a chart on the clipboard as a picture, twice as fine as on the screen."""
    picture = QPixmap(chart.size() * 2)
    picture.setDevicePixelRatio(2.0)
    picture.fill(QColor(ground))
    chart.render(picture, QPoint(), QRegion(), QWidget.RenderFlag.DrawChildren)
    QGuiApplication.clipboard().setPixmap(picture)


class Choice(QComboBox):
    """A labelled choice among (key, words); what was chosen stays chosen while it is offered."""

    def __init__(self, label: str, said: str, parent: QWidget | None = None) -> None:
        super().__init__(parent)
        self.label = QLabel(label)
        self.label.setBuddy(self)
        self.setAccessibleName(said)
        self.setMinimumHeight(theme.TARGET)
        self.setSizeAdjustPolicy(QComboBox.SizeAdjustPolicy.AdjustToContents)
        self.setSizePolicy(QSizePolicy.Policy.Preferred, QSizePolicy.Policy.Fixed)
        self.setMinimumContentsLength(6)
        self.pair = QWidget(parent)  # the label stays beside its choice where lines break
        row = QHBoxLayout(self.pair)
        row.setContentsMargins(0, 0, 0, 0)
        row.setSpacing(theme.UNIT)
        row.addWidget(self.label)
        row.addWidget(self)

    def offer(self, offered: Sequence[tuple[object, str]], usual: int = 0) -> None:
        """Offer these; keep the choice where it is among them, else take the usual one."""
        now = [(self.itemData(i), self.itemText(i)) for i in range(self.count())]
        if now == list(offered):
            return
        kept = self.currentData()
        keys = [key for key, _ in offered]
        blocker = QSignalBlocker(self)
        self.clear()
        for key, words in offered:
            self.addItem(words, key)
        if keys:
            at = keys.index(kept) if kept in keys else min(usual, len(keys) - 1)
            self.setCurrentIndex(at)
        blocker.unblock()

    def choose(self, key: object) -> None:
        """Choose one that is offered."""
        keys = [self.itemData(i) for i in range(self.count())]
        self.setCurrentIndex(keys.index(key))
