"""Small pieces that several pages use: rules, headings, link buttons, columns."""

from __future__ import annotations

from PySide6.QtCore import Qt
from PySide6.QtWidgets import QFrame, QLabel, QPushButton, QScrollArea, QWidget

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


def button(words: str, *, kind: str = "", said: str = "") -> QPushButton:
    """Return a button; `kind` is empty, primary or link; `said` is its accessible name."""
    made = QPushButton(words)
    if kind:
        made.setObjectName(kind)
    made.setAccessibleName(said or words)
    made.setMinimumSize(theme.TARGET, theme.TARGET)
    made.setAutoDefault(False)
    if kind == "link":
        made.setCursor(Qt.CursorShape.PointingHandCursor)
    return made


def scrolled(inner: QWidget) -> QScrollArea:
    """Return `inner` in an area that scrolls down only."""
    area = QScrollArea()
    area.setWidgetResizable(True)
    area.setHorizontalScrollBarPolicy(Qt.ScrollBarPolicy.ScrollBarAlwaysOff)
    area.setFrameShape(QFrame.Shape.NoFrame)
    area.setWidget(inner)
    return area
