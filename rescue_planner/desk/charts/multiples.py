"""Small multiples: one panel a measure, one read-out through all of them."""

from __future__ import annotations

import pyqtgraph as pg
from PySide6.QtCore import QCoreApplication, QEvent, QPointF, QRectF, Qt, QTimer, Signal
from PySide6.QtGui import (
    QColor,
    QContextMenuEvent,
    QFocusEvent,
    QFontMetricsF,
    QGuiApplication,
    QKeyEvent,
    QMouseEvent,
    QPainter,
    QPen,
    QPixmapCache,
    QResizeEvent,
)
from PySide6.QtWidgets import QFrame, QGraphicsView, QMenu, QScrollArea, QSizePolicy, QWidget

from rescue_planner.desk.charts.arrangement import Grid
from rescue_planner.desk.charts.panel import Panel
from rescue_planner.desk.charts.shown import PanelSpec, Shown
from rescue_planner.projection.picture import picture
from rescue_planner.projection.reading import letter, time_ticks, year_text
from rescue_planner.projection.value_table import course_table

FRAME_MS = 16
PIXELS_KIB = 96 * 1024
WORDS_MS = 120  # a burst of edits is told in words once, after it
PLOT_SHARE = 0.75  # of a panel's width is the plot's, about
EDGE = 0.012  # of the time span, left and right of it, so that markers are whole


class SmallMultiples(pg.GraphicsLayoutWidget):
    """Panels in columns. Redraws are gathered into frames; `flush` draws at once."""

    read_out_moved = Signal(int)  # t
    panel_chosen = Signal(str)  # measure
    drawn = Signal()

    def __init__(self, name: str, parent: QWidget | None = None) -> None:
        super().__init__(parent)
        self._name = name
        self.panels: list[Panel] = []
        self._wanted: Shown | None = None
        self._message = ""
        self.shown: Shown | None = None
        self.t: int | None = None  # nothing asked: the horizon
        self.current = 0
        self.grid = Grid(self.ci)
        self._timer = QTimer(self)
        self._timer.setSingleShot(True)
        self._timer.setInterval(FRAME_MS)
        self._timer.timeout.connect(self.flush)
        self._words = QTimer(self)
        self._words.setSingleShot(True)
        self._words.setInterval(WORDS_MS)
        self._words.timeout.connect(self._describe)
        self._set_up()

    def _set_up(self) -> None:
        # Qt's own limit of 10 MB would drop the kept pixels of a full board at every paint
        QPixmapCache.setCacheLimit(max(QPixmapCache.cacheLimit(), PIXELS_KIB))
        self.setFrameShape(QFrame.Shape.NoFrame)
        self.setFocusPolicy(Qt.FocusPolicy.StrongFocus)
        self.setMouseTracking(True)
        self.viewport().setMouseTracking(True)
        self.setAccessibleName(self._name)
        self.setHorizontalScrollBarPolicy(Qt.ScrollBarPolicy.ScrollBarAlwaysOff)
        self.setVerticalScrollBarPolicy(Qt.ScrollBarPolicy.ScrollBarAlwaysOff)
        self.setSizePolicy(QSizePolicy.Policy.Expanding, QSizePolicy.Policy.Fixed)

    def close(self) -> bool:
        """Close like any widget; pyqtgraph's own way takes the scene apart under its items."""
        return bool(QGraphicsView.close(self))

    # what is shown

    def show_all(self, shown: Shown) -> None:
        """Draw this in the next frame."""
        self._wanted, self._message = shown, ""
        if self.shown is None:
            self.flush()
        elif not self._timer.isActive():
            self._timer.start()

    def show_message(self, words: str) -> None:
        """Draw nothing but a sentence."""
        self._timer.stop()
        self._words.stop()
        self._wanted = self.shown = None
        self._message = words
        self._set_count(0)
        self.setAccessibleDescription(words)
        self._take_height(96)
        self.viewport().update()

    @property
    def message(self) -> str:
        """The sentence that stands in place of charts."""
        return self._message

    def flush(self) -> None:
        """Draw what is wanted now."""
        self._timer.stop()
        wanted, self._wanted = self._wanted, None
        if wanted is None:
            return
        self.shown = wanted
        self.setBackground(QColor(wanted.look.colours.paper))
        self._set_count(len(wanted.specs))
        for panel, spec in zip(self.panels, wanted.specs, strict=True):
            made = picture(wanted.comparison, wanted.case, spec.key, wanted.plans, spec.fan_of)
            panel.heading.short = self._fan_name(spec)
            strong = wanted.strong if spec.fan_of is None else spec.fan_of
            panel.show_picture(made, wanted.look, strong, wanted.comparison.years.size)
        self._place()
        self._show_time()
        self.show_read_out()
        self._words.start()
        self.drawn.emit()

    def _fan_name(self, spec: PanelSpec) -> str:
        if spec.fan_of is None or self.shown is None:
            return ""
        return f"{letter(self.shown.comparison, spec.fan_of)} {spec.fan_of}"

    def _set_count(self, count: int) -> None:
        if count == len(self.panels):
            return
        while len(self.panels) > count:
            self.ci.removeItem(self.panels.pop())
        while len(self.panels) < count:
            panel = Panel()
            self.panels.append(panel)
            self.ci.addItem(panel, row=100 + len(self.panels), col=0)  # placed for good below
        self.grid.columns = 0
        self.current = min(self.current, max(0, count - 1))

    # where the panels stand

    def _place(self) -> None:
        if self.shown is not None and self.panels:
            look, width = self.shown.look, self.width()
            self._take_height(self.grid.place(self.panels, width, look.text_scale))

    def _take_height(self, height: int) -> None:
        """Take a height, and let the page make room at once: no frame shows half a chart."""
        if height != self.minimumHeight() or height != self.maximumHeight():
            self.setFixedHeight(height)
            QCoreApplication.sendPostedEvents(None, QEvent.Type.LayoutRequest.value)

    def _show_time(self) -> None:
        assert self.shown is not None
        comparison = self.shown.comparison
        first, last = float(comparison.years[0]), float(comparison.years[-1])
        room = EDGE * (last - first)
        label = QFontMetricsF(self.shown.look.font()).horizontalAdvance(year_text(last))
        wide = PLOT_SHARE * self.width() / max(1, self.grid.columns)
        most = max(2, min(4, round(wide / (1.7 * label))))
        ticks = {axis: time_ticks(comparison, axis, most) for axis in ("years", "generations")}
        for panel in self.panels:
            panel.show_time((first - room, last + room), ticks, panel.time.rows)

    def resizeEvent(self, event: QResizeEvent) -> None:
        super().resizeEvent(event)
        if getattr(self, "shown", None) is not None:
            self._place()
            self._show_time()

    # the read-out

    def set_read_out(self, t: int | None) -> None:
        """Read all panels at t; nothing brings back the horizon."""
        if self.shown is None:
            return
        last = self.shown.comparison.years.size - 1
        self.t = None if t is None else min(max(t, 0), last)
        self.show_read_out()
        self.read_out_moved.emit(last if self.t is None else self.t)

    @property
    def read_at(self) -> int:
        """The t that the read-out shows."""
        if self.shown is None:
            return 0
        last = int(self.shown.comparison.years.size) - 1
        return last if self.t is None else min(self.t, last)

    def show_read_out(self) -> None:
        if self.shown is None:
            return
        t, comparison = self.read_at, self.shown.comparison
        year = float(comparison.years[t])
        when = year_text(year) if self.shown.look.axis == "years" else f"gen. {t}"
        for panel in self.panels:
            panel.show_read_out(t, when, None if self.t is None else year)

    def read_out_texts(self) -> tuple[tuple[str, ...], ...]:
        """Return what the read-out says in each panel, plan by plan."""
        return tuple(panel.heading.texts() for panel in self.panels)

    def mouseMoveEvent(self, event: QMouseEvent) -> None:
        self._read_under(self.mapToScene(event.position().toPoint()))
        super().mouseMoveEvent(event)

    def _read_under(self, at: QPointF) -> None:
        for panel in self.panels:
            box: QRectF = panel.view.sceneBoundingRect()
            if box.contains(at) and self.shown is not None:
                year = panel.view.mapSceneToView(at).x()
                nearest = abs(self.shown.comparison.years - year).argmin()
                if self.t != int(nearest):
                    self.set_read_out(int(nearest))
                return

    def mousePressEvent(self, event: QMouseEvent) -> None:
        self.setFocus(Qt.FocusReason.MouseFocusReason)
        at = self.mapToScene(event.position().toPoint())
        for i, panel in enumerate(self.panels):
            if panel.sceneBoundingRect().contains(at):
                self._choose(i)
        event.accept()

    def leaveEvent(self, event: object) -> None:
        if not self.hasFocus():
            self.set_read_out(None)
        super().leaveEvent(event)

    # keyboard

    def keyPressEvent(self, event: QKeyEvent) -> None:
        key, control = event.key(), event.modifiers() & Qt.KeyboardModifier.ControlModifier
        if self.shown is None:
            event.ignore()
            return
        if control and key == Qt.Key.Key_C:
            self.copy_table(self.current)
            return
        last = int(self.shown.comparison.years.size) - 1
        moves = {
            Qt.Key.Key_Left: max(0, self.read_at - 1),
            Qt.Key.Key_Right: min(last, self.read_at + 1),
            Qt.Key.Key_Home: 0,
            Qt.Key.Key_End: last,
        }
        panels = {Qt.Key.Key_Up: -1, Qt.Key.Key_Down: 1}
        if key in moves:
            self.set_read_out(moves[Qt.Key(key)])
            self._describe()
        elif key in panels:
            self._choose(self.current + panels[Qt.Key(key)])
        elif key == Qt.Key.Key_Escape and self.t is not None:
            self.set_read_out(None)
        else:
            event.ignore()

    def _choose(self, i: int) -> None:
        if self.shown is None or not 0 <= i < len(self.panels):
            return
        self.current = i
        self._bring_into_view(self.panels[i])
        self._describe()
        self.viewport().update()
        self.panel_chosen.emit(self.shown.specs[i].key)

    def _bring_into_view(self, panel: Panel) -> None:
        """Scroll the page so that the chosen panel is seen."""
        holder = self.parentWidget()
        while holder is not None and not isinstance(holder, QScrollArea):
            holder = holder.parentWidget()
        if isinstance(holder, QScrollArea):
            box = self.mapFromScene(panel.sceneBoundingRect()).boundingRect()
            middle = self.mapTo(holder.widget(), box.center())
            holder.ensureVisible(middle.x(), middle.y(), 0, box.height() // 2 + 8)

    def focusInEvent(self, event: QFocusEvent) -> None:
        super().focusInEvent(event)
        self._choose(self.current)

    def focusOutEvent(self, event: QFocusEvent) -> None:
        super().focusOutEvent(event)
        self.viewport().update()

    def drawForeground(self, painter: QPainter, rect: QRectF) -> None:
        """Draw the ring of the chosen panel, or the sentence that stands for charts."""
        if self._message:
            painter.resetTransform()
            painter.setPen(self.palette().windowText().color())
            painter.setFont(self.font())
            flags = Qt.AlignmentFlag.AlignLeft | Qt.AlignmentFlag.AlignTop
            box = QRectF(self.viewport().rect().adjusted(0, 8, -8, -8))
            painter.drawText(box, int(flags) | int(Qt.TextFlag.TextWordWrap), self._message)
            return
        if self.hasFocus() and self.shown is not None and self.panels:
            painter.setPen(QPen(QColor(self.shown.look.colours.accent), 2))
            box = self.panels[self.current].sceneBoundingRect().adjusted(1, 1, -1, -1)
            painter.drawRect(box)

    # text and tables

    def panel_text(self, i: int) -> str:
        """Return one chart in words."""
        made = self.panels[i].picture
        return "" if made is None else made.description

    def _describe(self) -> None:
        if self.shown is None or not self.panels:
            return
        year = year_text(float(self.shown.comparison.years[self.read_at]))
        texts = self.panels[self.current].heading.texts()
        now = f"Read at {year}: {', '.join(texts)}." if texts else ""
        rest = " ".join(self.panel_text(i) for i in range(len(self.panels)) if i != self.current)
        self.setAccessibleDescription(f"{self.panel_text(self.current)} {now} {rest}".strip())

    def table_text(self, i: int) -> str:
        """Return one chart as tab-separated text, headed by its measure."""
        if self.shown is None:
            return ""
        table = course_table(self.shown.comparison, self.shown.plans, self.shown.specs[i].key)
        return f"{table.notes[0]}\n{table.tab_separated()}"

    def copy_table(self, i: int) -> None:
        """Put one chart as a table on the clipboard."""
        QGuiApplication.clipboard().setText(self.table_text(i))

    def copy_all(self) -> None:
        """Put all charts as tables on the clipboard."""
        texts = [self.table_text(i) for i in range(len(self.panels))]
        QGuiApplication.clipboard().setText("\n".join(texts))

    def copy_picture(self) -> None:
        """Put the charts as a picture on the clipboard."""
        QGuiApplication.clipboard().setPixmap(self.grab())

    def contextMenuEvent(self, event: QContextMenuEvent) -> None:
        if self.shown is None:
            return
        menu = QMenu(self)
        current = self.current
        menu.addAction("Copy this chart as a table", lambda: self.copy_table(current))
        menu.addAction("Copy all charts as tables", self.copy_all)
        menu.addAction("Copy all charts as a picture", self.copy_picture)
        menu.exec(event.globalPos())
        menu.deleteLater()
