"""The calendar of a plan, drawn as a time line; releases are put, moved and repeated on it."""

from __future__ import annotations

from collections.abc import Callable

from PySide6.QtCore import QPointF, QRectF, QSize, Qt, Signal
from PySide6.QtGui import (
    QColor,
    QFocusEvent,
    QFontMetricsF,
    QKeyEvent,
    QMouseEvent,
    QPainter,
    QPaintEvent,
    QPen,
)
from PySide6.QtWidgets import QSizePolicy, QWidget

from rescue_planner.case.document import Case
from rescue_planner.case.edits import Edit, remove_release, set_value
from rescue_planner.case.plans import Plan
from rescue_planner.desk import theme
from rescue_planner.desk.charts.look import Look
from rescue_planner.desk.context import Desk
from rescue_planner.desk.plan_editor.new_parts import release_in
from rescue_planner.projection.calendar import Calendar, CalendarRow, calendar
from rescue_planner.projection.placing import ticks
from rescue_planner.projection.reading import year_text

LABEL_SHARE, DOT = 0.34, 4.5
HELP = (
    "Up and Down choose a release, Left and Right move it a year, with Shift a generation, "
    "plus and minus repeat it more or less often, Insert puts a new one, Delete removes it."
)

SHORT_HELP = (
    "Drag a release or move it with the Left and Right keys; + and − repeat it, Insert puts a new "
    "one, Delete removes it. Hairlines are generations."
)


class Timeline(QWidget):
    """A row for each release, flow, action and rule; hairlines where generations begin."""

    refused = Signal(object)  # problems

    def __init__(self, desk: Desk, index: int, parent: QWidget | None = None) -> None:
        super().__init__(parent)
        self._desk, self.index = desk, index
        self.calendar: Calendar | None = None
        self.current = 0  # which release
        self._dragged: tuple[float, int] | None = None  # year pressed, years moved so far
        self.setFocusPolicy(Qt.FocusPolicy.StrongFocus)
        self.setSizePolicy(QSizePolicy.Policy.Expanding, QSizePolicy.Policy.Fixed)
        self.setAccessibleName("Calendar of the plan")
        desk.live.updated.connect(self._updated)
        desk.view.changed.connect(self._seen_anew)

    # what is shown

    def count(self) -> int:
        """Return how many releases are shown."""
        return len(self._releases())

    def _updated(self, _comparison: object) -> None:
        document = self._desk.document
        if document.has_case and self.index < len(document.case.plans):
            self.show_plan(document.case, document.case.plans[self.index])

    def _seen_anew(self) -> None:
        self.updateGeometry()
        self.update()

    def show_plan(self, case: Case, plan: Plan) -> None:
        """Show a plan as it stands, with the rules of its newest projection."""
        self.calendar = calendar(case, plan, self._desk.live.comparison)
        self.current = min(self.current, max(0, len(self._releases()) - 1))
        rows = ". ".join(row.words for row in self.calendar.rows) or "Nothing is planned"
        self.setAccessibleDescription(f"{rows}. {HELP}")
        self.setToolTip(HELP)
        self.updateGeometry()
        self.update()

    def _releases(self) -> list[CalendarRow]:
        rows = self.calendar.rows if self.calendar is not None else ()
        return [row for row in rows if row.kind == "release"]

    def look(self) -> Look:
        """How it looks now."""
        view = self._desk.view
        return Look(view.scheme, view.text_scale, view.axis)

    def row_height(self) -> float:
        """Height of a row: what can be pressed is big enough."""
        return max(float(theme.TARGET), self.look().line_height + theme.HALF)

    def sizeHint(self) -> QSize:
        """Be as high as the rows and the years under them."""
        rows = max(1, len(self.calendar.rows)) if self.calendar is not None else 1
        return QSize(280, round(rows * self.row_height() + self.look().line_height + 6))

    def minimumSizeHint(self) -> QSize:
        return QSize(160, self.sizeHint().height())

    def x_of(self, year: float) -> float:
        """Return where a year stands."""
        assert self.calendar is not None
        left, right = self.width() * LABEL_SHARE, self.width() - 2.5 * theme.UNIT
        first, last = self.calendar.first, self.calendar.last
        return left + (right - left) * (year - first) / (last - first)

    def year_at(self, x: float) -> float:
        """Return the year that stands at a place."""
        assert self.calendar is not None
        left, right = self.width() * LABEL_SHARE, self.width() - 2.5 * theme.UNIT
        first, last = self.calendar.first, self.calendar.last
        return first + (last - first) * (x - left) / (right - left)

    def paintEvent(self, event: QPaintEvent) -> None:
        if self.calendar is None:
            return
        painter, look = QPainter(self), self.look()
        painter.setRenderHint(QPainter.RenderHint.Antialiasing)
        painter.setFont(look.font())
        bottom = max(1, len(self.calendar.rows)) * self.row_height()
        painter.setPen(look.hair(look.colours.hairline))
        for year in self.calendar.generations:
            if year <= self.calendar.last + 0.5:
                x = round(self.x_of(year)) + 0.5
                painter.drawLine(QPointF(x, 0), QPointF(x, bottom))
        for at, row in enumerate(self.calendar.rows):
            self._paint_row(painter, look, row, at * self.row_height())
        self._paint_years(painter, look, bottom)
        if self.hasFocus():
            painter.setPen(QPen(QColor(look.colours.accent), 2))
            painter.setBrush(Qt.BrushStyle.NoBrush)
            painter.drawRect(QRectF(self.rect()).adjusted(1, 1, -1, -1))
        painter.end()

    def _paint_row(self, painter: QPainter, look: Look, row: CalendarRow, top: float) -> None:
        chosen = row.kind == "release" and row.index == self.current and self.hasFocus()
        height, middle = self.row_height(), top + self.row_height() / 2
        if chosen:
            ground = QRectF(0, top, self.width(), height)
            painter.fillRect(ground, QColor(look.colours.accent_ground))
        room = self.width() * LABEL_SHARE - 1.5 * theme.UNIT
        name = QFontMetricsF(look.font()).elidedText(row.name, Qt.TextElideMode.ElideRight, room)
        painter.setPen(QColor(look.colours.ink))
        flags = Qt.AlignmentFlag.AlignLeft | Qt.AlignmentFlag.AlignVCenter
        painter.drawText(QRectF(theme.HALF, top, room, height), flags, name)
        colour = QColor(look.colours.ink if row.kind == "rule" else look.plan_colour(self.index))
        painter.setPen(QPen(colour, 2.0))
        if row.span is not None:
            ends = [self.x_of(year) for year in row.span]
            painter.drawLine(QPointF(ends[0], middle), QPointF(ends[1], middle))
        painter.setBrush(colour if row.kind == "release" else QColor(look.colours.paper))
        moved = self._dragged[1] if chosen and self._dragged is not None else 0
        for year in row.years:
            at = QPointF(self.x_of(year + moved), middle)
            if row.kind == "rule":
                box = QRectF(at.x() - DOT, middle - DOT, 2 * DOT, 2 * DOT)
                painter.drawRect(box)
            else:
                painter.drawEllipse(at, DOT, DOT)

    def _paint_years(self, painter: QPainter, look: Look, top: float) -> None:
        assert self.calendar is not None
        painter.setPen(QColor(look.colours.soft))
        metrics = QFontMetricsF(look.font())
        after = ticks(0.0, self.calendar.last - self.calendar.first, 3, whole=True)
        for one in after:
            text = year_text(self.calendar.first + one)
            wide = metrics.horizontalAdvance(text)
            x = self.x_of(self.calendar.first + one) - wide / 2
            left = min(max(x, 0.0), self.width() - wide - 4.0)
            painter.drawText(QPointF(left, top + metrics.ascent() + 2), text)

    def focusInEvent(self, event: QFocusEvent) -> None:
        super().focusInEvent(event)
        self.update()

    def focusOutEvent(self, event: QFocusEvent) -> None:
        super().focusOutEvent(event)
        self.update()

    # edits

    def _try(self, make: Callable[[Case], Edit]) -> None:
        self.refused.emit(self._desk.document.try_edit(make))

    def _path(self, field: str) -> str:
        return f"plans[{self.index}].releases[{self.current}].when.{field}"

    def move_by(self, years: int) -> None:
        """Move the chosen release, all its repeats with it."""
        rows = self._releases()
        if rows and years:
            first = rows[self.current].years[0] + years
            self._try(lambda case: set_value(case, self._path("first_year"), first))

    def repeat(self, more: int) -> None:
        """Repeat the chosen release more or less often."""
        rows = self._releases()
        if rows and len(rows[self.current].years) + more >= 1:
            times = len(rows[self.current].years) + more
            self._try(lambda case: set_value(case, self._path("times"), times))

    def put(self, year: float) -> None:
        """Put a new release into a year."""
        document = self._desk.document
        if document.has_case and document.case.donors:
            plan = document.case.plans[self.index].name
            self._try(lambda case: release_in(case, plan, float(int(year))))

    def remove(self) -> None:
        """Remove the chosen release."""
        if self._releases():
            plan, index = self._desk.document.case.plans[self.index].name, self.current
            self._try(lambda case: remove_release(case, plan, index))

    def keyPressEvent(self, event: QKeyEvent) -> None:
        key, shift = Qt.Key(event.key()), event.modifiers() & Qt.KeyboardModifier.ShiftModifier
        case = self._desk.document.case if self._desk.document.has_case else None
        far = max(1, round(float(case.time.generation_years.best))) if case and shift else 1
        acts: dict[Qt.Key, Callable[[], None]] = {
            Qt.Key.Key_Left: lambda: self.move_by(-far),
            Qt.Key.Key_Right: lambda: self.move_by(far),
            Qt.Key.Key_Up: lambda: self._choose(self.current - 1),
            Qt.Key.Key_Down: lambda: self._choose(self.current + 1),
            Qt.Key.Key_Plus: lambda: self.repeat(1),
            Qt.Key.Key_Minus: lambda: self.repeat(-1),
            Qt.Key.Key_Delete: self.remove,
            Qt.Key.Key_Insert: lambda: self.put(self.calendar.first if self.calendar else 0.0),
        }
        if key in acts and case is not None:
            acts[key]()
        else:
            super().keyPressEvent(event)

    def _choose(self, index: int) -> None:
        if 0 <= index < len(self._releases()):
            self.current = index
            self._desk.explain.show(self._path("first_year"))
            self.update()

    def mousePressEvent(self, event: QMouseEvent) -> None:
        row = int(event.position().y() // self.row_height())
        rows = self.calendar.rows if self.calendar is not None else ()
        if 0 <= row < len(rows) and rows[row].kind == "release":
            self._choose(rows[row].index)
            if event.position().x() >= self.width() * LABEL_SHARE - DOT:
                self._dragged = (self.year_at(event.position().x()), 0)

    def mouseMoveEvent(self, event: QMouseEvent) -> None:
        if self._dragged is not None:
            moved = round(self.year_at(event.position().x()) - self._dragged[0])
            self._dragged = (self._dragged[0], moved)
            self.update()

    def mouseReleaseEvent(self, event: QMouseEvent) -> None:
        dragged, self._dragged = self._dragged, None
        if dragged is not None:
            self.move_by(dragged[1])
            self.update()

    def mouseDoubleClickEvent(self, event: QMouseEvent) -> None:
        self._dragged = None
        if self.calendar is not None and event.position().x() >= self.width() * LABEL_SHARE:
            self.put(self.year_at(event.position().x()))
