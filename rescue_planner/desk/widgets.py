"""Small pieces that several pages use: rules, headings, link buttons, columns."""

from __future__ import annotations

from PySide6.QtCore import QEvent, QRect, QSize, Qt
from PySide6.QtGui import QPainter, QPaintEvent, QPalette, QPen
from PySide6.QtWidgets import (
    QAbstractButton,
    QFrame,
    QHBoxLayout,
    QLabel,
    QPushButton,
    QScrollArea,
    QSizePolicy,
    QWidget,
)

from rescue_planner.desk import theme


def rule(*, upright: bool = False) -> QFrame:
    """Return a hairline."""
    line = QFrame()
    line.setObjectName("vrule" if upright else "rule")
    return line


def text(words: str, kind: str = "", *, wrap: bool = True) -> QLabel:
    """Return a label; `kind` is title, section, soft, note, small, problem or caution."""
    label = QLabel(words)
    if kind:
        label.setObjectName(kind)
    label.setWordWrap(wrap)
    label.setTextFormat(Qt.TextFormat.PlainText)
    return label


def button(words: str, *, kind: str = "", said: str = "") -> QAbstractButton:
    """Return a button; `kind` is empty, primary or link; `said` is its accessible name."""
    if kind == "link":
        made: QAbstractButton = Link(words)
    else:
        made = QPushButton(words)
        made.setAutoDefault(False)
        if kind:
            made.setObjectName(kind)
    made.setAccessibleName(said or words)
    made.setMinimumHeight(theme.TARGET)  # a least width would let words be cut off
    return made


class Link(QAbstractButton):
    """A button that looks like a link and breaks its words over lines where it must."""

    def __init__(self, words: str = "") -> None:
        super().__init__()
        self.setText(words)
        self.setCursor(Qt.CursorShape.PointingHandCursor)
        self.setFocusPolicy(Qt.FocusPolicy.StrongFocus)
        policy = QSizePolicy(QSizePolicy.Policy.Maximum, QSizePolicy.Policy.Preferred)
        policy.setHeightForWidth(True)
        self.setSizePolicy(policy)

    def setText(self, words: str) -> None:
        super().setText(words)
        self.updateGeometry()

    def _needs(self, width: int) -> QSize:
        flags = Qt.TextFlag.TextWordWrap.value | Qt.AlignmentFlag.AlignLeft.value
        size = (
            self.fontMetrics().boundingRect(QRect(0, 0, width, 10_000), flags, self.text()).size()
        )
        return QSize(size.width() + 2, max(size.height() + 6, theme.TARGET))

    def sizeHint(self) -> QSize:
        return self._needs(10_000)

    def minimumSizeHint(self) -> QSize:
        longest = max(self.text().split() or [""], key=len)
        width = self.fontMetrics().horizontalAdvance(longest) + 4
        return QSize(max(width, theme.TARGET), theme.TARGET)

    def heightForWidth(self, width: int) -> int:
        return self._needs(width - 2).height()

    def paintEvent(self, _event: QPaintEvent) -> None:
        painter = QPainter(self)
        colours = self.palette()
        group = QPalette.ColorGroup.Normal if self.isEnabled() else QPalette.ColorGroup.Disabled
        role = QPalette.ColorRole.Link if self.isEnabled() else QPalette.ColorRole.Text
        made = self.font()
        made.setUnderline(self.isEnabled())
        painter.setFont(made)
        painter.setPen(colours.color(group, role))
        flags = Qt.TextFlag.TextWordWrap.value | Qt.AlignmentFlag.AlignVCenter.value
        painter.drawText(self.rect().adjusted(0, 1, -1, -1), flags, self.text())
        if self.hasFocus():
            painter.setPen(QPen(colours.color(QPalette.ColorRole.Highlight), 2))
            painter.drawRect(self.rect().adjusted(1, 1, -1, -1))
        painter.end()


class Column(QWidget):
    """Holds a column of text no wider than so many letters, at the left of the room there is.

    A scroll area asks its widget for the height at the width of the whole area, so the widget
    itself must not be the one with the greatest width.
    """

    def __init__(self, inner: QWidget, letters: int) -> None:
        super().__init__()
        self._inner, self._letters = inner, letters
        row = QHBoxLayout(self)
        row.setContentsMargins(0, 0, 0, 0)
        row.setSpacing(0)
        row.addWidget(inner, 1)
        row.addStretch(0)
        self._fit()

    def changeEvent(self, event: QEvent) -> None:
        super().changeEvent(event)
        if event.type() in (QEvent.Type.FontChange, QEvent.Type.StyleChange):
            self._fit()

    def _fit(self) -> None:
        self._inner.setMaximumWidth(self.fontMetrics().averageCharWidth() * self._letters)


def bring_into_view(widget: QWidget) -> None:
    """Scroll the areas around a widget so that it can be seen."""
    above = widget.parentWidget()
    while above is not None:
        if isinstance(above, QScrollArea):
            above.ensureWidgetVisible(widget, theme.UNIT, theme.UNIT * 6)
        above = above.parentWidget()


def scrolled(inner: QWidget, *, reachable: bool = False) -> QScrollArea:
    """Return `inner` in an area that scrolls down only.

    `reachable` where it holds text alone, so that keys can scroll it; else its fields bring
    themselves into view, and the area would be a stop of Tab that nobody sees.
    """
    area = QScrollArea()
    policy = Qt.FocusPolicy.StrongFocus if reachable else Qt.FocusPolicy.NoFocus
    area.setFocusPolicy(policy)
    area.setObjectName("reading" if reachable else "")
    area.setWidgetResizable(True)
    area.setHorizontalScrollBarPolicy(Qt.ScrollBarPolicy.ScrollBarAlwaysOff)
    if not reachable:  # the other one has the ring of the focus as its frame
        area.setFrameShape(QFrame.Shape.NoFrame)
    area.setWidget(inner)
    return area
