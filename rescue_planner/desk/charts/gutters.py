"""What stands around a plot: heading with read-out, ticks, letters at the lines' ends."""

from __future__ import annotations

from PySide6.QtCore import QPointF, QRectF, Qt
from PySide6.QtGui import QColor, QFontMetricsF, QPainter
from PySide6.QtWidgets import QGraphicsWidget, QStyleOptionGraphicsItem, QWidget

from rescue_planner.desk import theme
from rescue_planner.desk.charts.look import Look
from rescue_planner.projection.picture import Line, Picture
from rescue_planner.projection.placing import place_labels, tick_texts

GAP = theme.HALF
ROOM = 0.03
SCALE_NAMES = {"years": "year", "generations": "gen."}
SEPARATOR = " · "
LETTER_HEIGHT = 0.92  # of a line of text: letters have no descenders


def plotted_range(picture: Picture) -> tuple[float, float]:
    """Return the value range of the plot: the picture's, with room for the width of lines."""
    room = ROOM * (picture.high - picture.low)
    return picture.low - room, picture.high + room


class Gutter(QGraphicsWidget):
    """A part of a panel that paints itself from the panel's picture."""

    def __init__(self, parent: QGraphicsWidget | None = None) -> None:
        super().__init__(parent)
        self.picture: Picture | None = None
        self.look = Look()
        self.fixed_height = self.fixed_width = 0.0

    def show_picture(self, picture: Picture, look: Look) -> None:
        """Paint this from now on."""
        self.picture, self.look = picture, look
        self.resize_to_text()
        self.update()

    def resize_to_text(self) -> None:
        """Ask for the room that the text needs."""

    def fix_height(self, height: float) -> None:
        """Take exactly this height; the upper bound comes first, it clips the others."""
        self.setMaximumHeight(height)
        self.setMinimumHeight(height)
        self.setPreferredHeight(height)
        self.fixed_height = height

    def fix_width(self, width: float) -> None:
        """Take exactly this width."""
        self.setMaximumWidth(width)
        self.setMinimumWidth(width)
        self.setPreferredWidth(width)
        self.fixed_width = width

    def y_of(self, value: float) -> float:
        """Return the height at which a shown value stands."""
        assert self.picture is not None
        low, high = plotted_range(self.picture)
        return float(self.size().height()) * (1.0 - (value - low) / (high - low))


class Heading(Gutter):
    """Measure, unit, and below them every plan's value at the read-out."""

    def __init__(self, parent: QGraphicsWidget | None = None) -> None:
        super().__init__(parent)
        self.when = ""
        self.t = 0
        self.lines = 1  # rows of values
        self.unit_below = False  # where title and unit do not fit side by side
        self.short = ""

    def show_read_out(self, t: int, when: str) -> None:
        """Show the values at t; `when` names it."""
        if (t, when) != (self.t, self.when):
            self.t, self.when = t, when
            self.update()

    def resize_to_text(self) -> None:
        height = self.look.line_height
        self.fix_height(self._top() + self.lines * height + 2 * GAP)

    def _top(self) -> float:
        return self.look.line_height * (2.15 if self.unit_below else 1.15)

    def _name(self, *, brief: bool = False) -> str:
        """Return title and plan; of the plan only its letter where `brief`."""
        assert self.picture is not None
        plan = self.short.partition(" ")[0] if brief else self.short
        return self.picture.title + (f" · {plan}" if plan else "")

    def fits(self, width: float) -> bool:
        """Return whether title and unit fit side by side."""
        if self.picture is None:
            return True
        name = QFontMetricsF(self.look.font(bold=True)).horizontalAdvance(self._name())
        unit = QFontMetricsF(self.look.font()).horizontalAdvance(self.picture.unit)
        return name + 2 * GAP + unit <= width

    def rows_needed(self, width: float) -> int:
        """Return how many rows the values of all plans take in `width`."""
        if self.picture is None or not self.picture.lines:
            return 1
        each, first = self._widths()
        per_row = max(1, int((width - first) / each))
        return -(-len(self.picture.lines) // per_row) + self._band_rows(width)

    def _band_rows(self, width: float) -> int:
        """Return how many rows the bands take: one where both fit, for any t."""
        if self.picture is None or self.picture.fan is None:
            return 0
        widest = SEPARATOR.join([f"90 in 100: {self.picture.widest} to {self.picture.widest}"] * 2)
        return 1 if QFontMetricsF(self.look.font()).horizontalAdvance(widest) <= width else 2

    def _widths(self) -> tuple[float, float]:
        assert self.picture is not None
        metrics = QFontMetricsF(self.look.font())
        each = metrics.horizontalAdvance(f"W {self.picture.widest}") + 2.5 * GAP
        return each, metrics.horizontalAdvance("2088.8") + 2 * GAP

    def cells(self) -> tuple[tuple[Line, str], ...]:
        """Return each plan's line with its value at the read-out."""
        if self.picture is None:
            return ()
        return tuple((line, self.picture.text_at(line, self.t)) for line in self.picture.lines)

    def texts(self) -> tuple[str, ...]:
        """Return what the read-out says, plan by plan."""
        if self.picture is None:
            return ()
        values = (f"{line.letter} {text}" for line, text in self.cells())
        bands = self.picture.bands_at(self.t)
        return (*values, *bands)

    def paint(
        self, painter: QPainter, option: QStyleOptionGraphicsItem, widget: QWidget | None = None
    ) -> None:
        if self.picture is None:
            return
        width, height = self.size().width(), self.look.line_height
        ink, soft = QColor(self.look.colours.ink), QColor(self.look.colours.soft)
        bold = self.look.font(bold=True)
        whole = self._name()
        if QFontMetricsF(bold).horizontalAdvance(whole) > width:
            whole = self._name(brief=True)
        name = QFontMetricsF(bold).elidedText(whole, Qt.TextElideMode.ElideRight, width)
        painter.setFont(bold)
        painter.setPen(ink)
        flags = Qt.AlignmentFlag.AlignLeft | Qt.AlignmentFlag.AlignVCenter
        painter.drawText(QRectF(0, 0, width, height * 1.15), flags, name)
        left = 0.0 if self.unit_below else QFontMetricsF(bold).horizontalAdvance(name) + 2 * GAP
        below = height if self.unit_below else 0.0
        painter.setFont(self.look.font())
        painter.setPen(soft)
        unit = QFontMetricsF(self.look.font()).elidedText(
            self.picture.unit, Qt.TextElideMode.ElideRight, max(0.0, width - left)
        )
        painter.drawText(QRectF(left, below, width - left, height * 1.15), flags, unit)
        if not self.picture.empty:
            self._paint_values(painter, self._top() + GAP / 2)

    def _paint_values(self, painter: QPainter, top: float) -> None:
        assert self.picture is not None
        height, width = self.look.line_height, self.size().width()
        metrics = QFontMetricsF(self.look.font())
        each, first = self._widths()
        per_row = max(1, int((width - first) / each))
        flags = Qt.AlignmentFlag.AlignLeft | Qt.AlignmentFlag.AlignVCenter
        painter.drawText(QRectF(0, top, first, height), flags, self.when)
        for i, (line, text) in enumerate(self.cells()):
            row, column = divmod(i, per_row)
            x, y = first + column * each, top + row * height
            painter.setFont(self.look.font(bold=True))
            painter.setPen(self.look.letter_colour(line.mark))
            painter.drawText(QRectF(x, y, each, height), flags, line.letter)
            shift = metrics.horizontalAdvance("W ")
            painter.setFont(self.look.font())
            painter.setPen(QColor(self.look.colours.ink))
            painter.drawText(QRectF(x + shift, y, each, height), flags, text)
        rows = -(-len(self.picture.lines) // per_row)
        painter.setPen(QColor(self.look.colours.soft))
        bands = self.picture.bands_at(self.t)
        if self._band_rows(width) == 1:
            bands = (SEPARATOR.join(bands),)
        for i, words in enumerate(bands):
            box = QRectF(0, top + (rows + i) * height, width, height)
            painter.drawText(box, flags, words)


class ValueTicks(Gutter):
    """Tick values to the left of the plot."""

    def resize_to_text(self) -> None:
        assert self.picture is not None
        metrics = QFontMetricsF(self.look.font())
        texts = () if self.picture.empty else tick_texts(self.picture.ticks)
        width = max((metrics.horizontalAdvance(text) for text in texts), default=0.0) + 2 * GAP
        names = max(metrics.horizontalAdvance(name) for name in SCALE_NAMES.values())
        self.fix_width(max(width, names + 5 * GAP))

    def paint(
        self, painter: QPainter, option: QStyleOptionGraphicsItem, widget: QWidget | None = None
    ) -> None:
        if self.picture is None or self.picture.empty:
            return
        painter.setFont(self.look.font())
        painter.setPen(QColor(self.look.colours.soft))
        height = self.look.line_height
        right = self.size().width() - 1.5 * GAP
        flags = Qt.AlignmentFlag.AlignRight | Qt.AlignmentFlag.AlignVCenter
        texts = tick_texts(self.picture.ticks)
        for value, text in zip(self.picture.ticks, texts, strict=True):
            box = QRectF(0, self.y_of(value) - height / 2, right, height)
            painter.drawText(box, flags, text)


class EndLetters(Gutter):
    """The letter of each plan where its line ends; a hairline leads to letters that moved."""

    def __init__(self, parent: QGraphicsWidget | None = None) -> None:
        super().__init__(parent)
        self.columns = 1
        self.full = 0  # values of a line that reaches the horizon

    def fit(self, count: int, room: float) -> None:
        """Take as many columns as `count` letters need in a plot of the height `room`."""
        each = max(1, int(room / (self.look.line_height * LETTER_HEIGHT)))
        self.columns = max(1, -(-count // each))
        self.resize_to_text()

    def resize_to_text(self) -> None:
        metrics = QFontMetricsF(self.look.font(bold=True))
        width = 3 * GAP + self.columns * (metrics.horizontalAdvance("W") + GAP)
        self.setMinimumWidth(width)
        self.setPreferredWidth(width)
        self.setMaximumWidth(width)

    def places(self) -> list[tuple[int, float, float, int]]:
        """Return (line, height of its end, height of its letter, column) for each letter."""
        if self.picture is None:
            return []
        ends = [
            (i, self.y_of(float(line.curve.values[-1])))
            for i, line in enumerate(self.picture.lines)
            if line.curve.years.size == self.full and line.curve.values.size
        ]
        room = float(self.size().height())
        found = place_labels([y for _, y in ends], self.look.line_height * LETTER_HEIGHT, 0.0, room)
        return [
            (i, y, place.position, place.column) for (i, y), place in zip(ends, found, strict=True)
        ]

    def paint(
        self, painter: QPainter, option: QStyleOptionGraphicsItem, widget: QWidget | None = None
    ) -> None:
        if self.picture is None:
            return
        metrics = QFontMetricsF(self.look.font(bold=True))
        wide, height = metrics.horizontalAdvance("W") + GAP, self.look.line_height
        painter.setRenderHint(QPainter.RenderHint.Antialiasing)
        places = self.places()
        painter.setPen(self.look.hair(self.look.colours.line))
        for _, end, y, column in places:
            if abs(end - y) > 2 or column:
                left = 2.5 * GAP + column * wide
                painter.drawLine(QPointF(0.5, end), QPointF(left - 2, y))
        painter.setFont(self.look.font(bold=True))
        flags = Qt.AlignmentFlag.AlignLeft | Qt.AlignmentFlag.AlignVCenter
        for i, _, y, column in places:
            line = self.picture.lines[i]
            box = QRectF(2.5 * GAP + column * wide, y - height / 2, wide - GAP, height)
            painter.fillRect(box.adjusted(-1, 2, 1, -2), QColor(self.look.colours.paper))
            painter.setPen(self.look.letter_colour(line.mark))
            painter.drawText(box.adjusted(0, 0, GAP, 0), flags, line.letter)


class TimeTicks(Gutter):
    """Years and generations under the plot; the chosen one stands first."""

    def __init__(self, parent: QGraphicsWidget | None = None) -> None:
        super().__init__(parent)
        self.rows = 1
        self.span = (0.0, 1.0)
        self.ticks: dict[str, tuple[tuple[float, str], ...]] = {}

    def show_time(
        self, span: tuple[float, float], ticks: dict[str, tuple[tuple[float, str], ...]], rows: int
    ) -> None:
        """Show `rows` scales (1 or 2) over the years of `span`."""
        self.span, self.ticks, self.rows = span, ticks, rows
        self.resize_to_text()
        self.update()

    def resize_to_text(self) -> None:
        self.fix_height(self.look.line_height * self.rows + 1.5 * GAP)

    def scales(self) -> tuple[str, ...]:
        """Return the scales in the order in which they stand."""
        second = "generations" if self.look.axis == "years" else "years"
        return (self.look.axis, second)[: self.rows]

    def labels(self) -> tuple[tuple[str, ...], ...]:
        """Return the labels of each scale."""
        return tuple(tuple(text for _, text in self.ticks.get(s, ())) for s in self.scales())

    def paint(
        self, painter: QPainter, option: QStyleOptionGraphicsItem, widget: QWidget | None = None
    ) -> None:
        if self.picture is None or self.picture.empty:
            return
        width, height = float(self.size().width()), self.look.line_height
        first, last = self.span
        painter.setFont(self.look.font())
        metrics = QFontMetricsF(self.look.font())
        painter.setPen(self.look.hair(self.look.colours.soft))
        for row, scale in enumerate(self.scales()):
            base = GAP + row * height + metrics.ascent()
            name = SCALE_NAMES[scale]
            painter.drawText(QPointF(-3 * GAP - metrics.horizontalAdvance(name), base), name)
            for year, text in self.ticks.get(scale, ()):
                x = width * (year - first) / (last - first)
                wide = metrics.horizontalAdvance(text)
                left = min(max(x - wide / 2, -2 * GAP), width - wide + 2 * GAP)
                if row == 0:
                    painter.drawLine(QPointF(x, 0), QPointF(x, GAP * 0.75))
                painter.drawText(QPointF(left, base), text)
