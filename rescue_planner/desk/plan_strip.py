"""The strip across the top: a chip per plan, the axis switch, the what-if in force."""

from __future__ import annotations

from typing import TYPE_CHECKING

from PySide6.QtCore import QEvent, QPointF, QRect, QRectF, QSignalBlocker, QSize, Qt, QTimer
from PySide6.QtGui import QColor, QPainter, QPaintEvent, QPen, QResizeEvent
from PySide6.QtWidgets import (
    QAbstractButton,
    QBoxLayout,
    QButtonGroup,
    QHBoxLayout,
    QPushButton,
    QWidget,
)

from rescue_planner.desk import theme
from rescue_planner.desk.context import Desk
from rescue_planner.desk.flow import FlowLayout
from rescue_planner.desk.plan_mark import paint_sample
from rescue_planner.desk.widgets import rule, text
from rescue_planner.projection.marks import PlanMark, mark

if TYPE_CHECKING:
    from rescue_planner.case.plans import Plan

SAMPLE = 36
NAME_WIDTHS = (48, 36, 28, 22, 17, 13, 10, 7, 4, 0)  # in letters; the widest that fits is taken
MOST_ROWS = 2
LARGE, MOST_ROWS_LARGE = 1.5, 3  # large text takes a row more before names are shortened


class PlanChip(QAbstractButton):
    """Letter, line and name of one plan; a click or Space hides or shows it everywhere."""

    def __init__(self, desk: Desk, name: str, drawn: PlanMark, parent: QWidget) -> None:
        super().__init__(parent)
        self._desk, self.plan, self._mark = desk, name, drawn
        self.letters = NAME_WIDTHS[0]
        self.setText(name)
        self.setCheckable(True)
        self.setCursor(Qt.CursorShape.PointingHandCursor)
        self.setFocusPolicy(Qt.FocusPolicy.StrongFocus)
        self.clicked.connect(self._clicked)
        self.refresh()

    def _clicked(self, shown: bool) -> None:
        self._desk.view.set_hidden(self.plan, not shown)

    def refresh(self) -> None:
        """Show whether the plan is hidden."""
        shown = self.plan not in self._desk.view.hidden
        blocker = QSignalBlocker(self)
        self.setChecked(shown)
        del blocker
        state = "shown" if shown else "hidden"
        self.setAccessibleName(f"Plan {self._mark.letter}, {self.plan}, {state}")
        self.setAccessibleDescription("Hides or shows this plan on every chart and table.")
        self.setToolTip(f"{self._mark.letter}  {self.plan} ({state}); click to change")
        self.updateGeometry()
        self.update()

    def _label(self) -> str:
        return self.plan if self.isChecked() else f"{self.plan} (hidden)"

    def sizeHint(self) -> QSize:
        metrics = self.fontMetrics()
        most = metrics.averageCharWidth() * self.letters
        letter = metrics.horizontalAdvance("M")
        width = min(metrics.horizontalAdvance(self._label()) + 2, most)
        high = max(theme.TARGET + 4, metrics.height() + theme.UNIT)
        return QSize(theme.UNIT * 4 + letter + SAMPLE + width, high)

    def minimumSizeHint(self) -> QSize:
        return self.sizeHint()

    def paintEvent(self, _event: QPaintEvent) -> None:
        colours, scheme = theme.palette(self._desk.view.scheme), self._desk.view.scheme
        painter, shown = QPainter(self), self.isChecked()
        if self.underMouse():
            painter.fillRect(self.rect(), QColor(colours.accent_ground))
        metrics, x = self.fontMetrics(), theme.UNIT
        letter = metrics.horizontalAdvance("M")
        made = self.font()
        made.setBold(True)
        painter.setFont(made)
        colour = theme.plan_colour(self._mark, scheme) if shown else QColor(colours.soft)
        painter.setPen(colour)
        painter.drawText(
            QRect(x, 0, letter, self.height()), Qt.AlignmentFlag.AlignCenter, self._mark.letter
        )
        x += letter + theme.UNIT
        if shown:
            paint_sample(painter, QRectF(x, 0, SAMPLE, self.height()), self._mark, scheme)
        else:
            painter.setPen(QPen(QColor(colours.line), 1))
            middle = self.height() / 2
            painter.drawLine(QPointF(x, middle), QPointF(x + SAMPLE, middle))
        x += SAMPLE + theme.UNIT
        painter.setFont(self.font())
        painter.setPen(QColor(colours.ink if shown else colours.soft))
        room = self.width() - x - theme.HALF
        words = metrics.elidedText(self._label(), Qt.TextElideMode.ElideRight, room)
        painter.drawText(
            QRect(x, 0, room, self.height()),
            Qt.AlignmentFlag.AlignVCenter | Qt.AlignmentFlag.AlignLeft,
            words,
        )
        if self.hasFocus():
            painter.setPen(QPen(QColor(colours.accent), 2))
            painter.drawRect(self.rect().adjusted(1, 1, -1, -1))
        painter.end()


class PlanStrip(QWidget):
    """The same plans, marks and axis for every page."""

    def __init__(self, desk: Desk, parent: QWidget | None = None) -> None:
        super().__init__(parent)
        self._desk = desk
        self.setObjectName("strip")
        self.setAttribute(Qt.WidgetAttribute.WA_StyledBackground)
        self._held = QWidget(self)
        self._flow = FlowLayout(self._held, gap=theme.HALF)
        self.chips: list[PlanChip] = []
        self.years = self._switch("Years", "years")
        self.generations = self._switch("Generations", "generations")
        self.what_if = text("What-if: none", "soft", wrap=False)
        self.what_if.setToolTip("Changed assumptions in force, for all plans at once")
        row = QHBoxLayout(self)
        row.setContentsMargins(theme.UNIT, theme.HALF, theme.UNIT * 2, theme.HALF)
        row.setSpacing(theme.UNIT)
        row.addWidget(self._held, 1)
        row.addWidget(rule(upright=True))
        row.addLayout(self._sides())
        self._later = QTimer(self)  # fonts of the chips follow the strip's own a moment later
        self._later.setSingleShot(True)
        self._later.setInterval(0)
        self._later.timeout.connect(self._fit)
        self._group = QButtonGroup(self)
        self._group.addButton(self.years)
        self._group.addButton(self.generations)
        desk.document.changed.connect(self.refresh)
        desk.document.replaced.connect(self._replaced)
        desk.view.changed.connect(self._view_changed)
        self._view_changed()

    def _sides(self) -> QBoxLayout:
        """Return switch and what-if, side by side; one above the other where text is large."""
        switch = QHBoxLayout()
        switch.setSpacing(theme.UNIT)
        switch.addWidget(self.years)
        switch.addWidget(self.generations)
        self._between = rule(upright=True)
        self._side = QBoxLayout(QBoxLayout.Direction.LeftToRight)
        self._side.setSpacing(theme.UNIT)
        self._side.addLayout(switch)
        self._side.addWidget(self._between)
        self._side.addWidget(self.what_if)
        return self._side

    def _switch(self, words: str, axis: str) -> QPushButton:
        made = QPushButton(words)
        made.setObjectName("switch")
        made.setCheckable(True)
        made.setMinimumSize(theme.TARGET, theme.TARGET)
        made.setAccessibleName(f"Time axis in {words.lower()}")
        made.setAccessibleDescription("Changes the labels of the time axis, never the results.")
        made.clicked.connect(lambda: self._desk.view.set_axis(axis))  # type: ignore[arg-type]
        return made

    def _replaced(self) -> None:
        self._desk.view.show_all()
        if not self._desk.document.has_case:
            self._rebuild(())

    def refresh(self) -> None:
        """Show the plans of the case."""
        plans = self._desk.document.case.plans
        if [chip.plan for chip in self.chips] != [plan.name for plan in plans]:
            self._rebuild(plans)

    def _rebuild(self, plans: tuple[Plan, ...]) -> None:
        for chip in self.chips:
            self._flow.removeWidget(chip)
            chip.setParent(None)
            chip.deleteLater()
        self.chips = [
            PlanChip(self._desk, plan.name, mark(index), self._held)
            for index, plan in enumerate(plans)
        ]
        for chip in self.chips:
            self._flow.addWidget(chip)
            chip.show()
        self._later.start()

    def resizeEvent(self, event: QResizeEvent) -> None:
        super().resizeEvent(event)
        self._fit()

    def changeEvent(self, event: QEvent) -> None:
        super().changeEvent(event)
        if hasattr(self, "_later") and event.type() in (
            QEvent.Type.FontChange,
            QEvent.Type.StyleChange,
        ):
            self._later.start()

    def _fit(self) -> None:
        """Shorten names until the chips stand in two rows; the tool tip tells them whole."""
        if not self.chips or self._held.width() < theme.TARGET:
            return
        row = self.chips[0].sizeHint().height()
        most = MOST_ROWS_LARGE if self._desk.view.text_scale >= LARGE else MOST_ROWS
        for letters in NAME_WIDTHS:
            for chip in self.chips:
                chip.letters = letters
                chip.updateGeometry()  # or the layout keeps the size it knows
            high = self._flow.heightForWidth(self._held.width())
            if high <= most * (row + theme.UNIT):
                break
        self._held.updateGeometry()

    def _view_changed(self) -> None:
        for chip in self.chips:
            chip.refresh()
        for made, axis in ((self.years, "years"), (self.generations, "generations")):
            made.setChecked(self._desk.view.axis == axis)
        large = self._desk.view.text_scale >= LARGE
        ways = QBoxLayout.Direction
        self._side.setDirection(ways.TopToBottom if large else ways.LeftToRight)
        self._between.setVisible(not large)
        self._later.start()
        self.update()
