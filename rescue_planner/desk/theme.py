"""Colours, text sizes, grid and the style sheet, in one place.

Text holds 4.5:1 against the ground it stands on, chart parts and the edges of controls 3:1
(tests/desk/test_theme.py computes both).
"""

from __future__ import annotations

from dataclasses import dataclass
from string import Template

from PySide6.QtCore import Qt
from PySide6.QtGui import QColor, QFont, QPalette, QPen
from PySide6.QtWidgets import QApplication

from rescue_planner import places
from rescue_planner.desk.view import Scheme
from rescue_planner.projection.marks import PlanMark

UNIT = 8
HALF = 4
TARGET = 24  # the least height and width of anything that can be acted on
NOTE, BODY, TITLE = 12, 14, 20  # the three text sizes, in device-independent pixels


@dataclass(frozen=True, slots=True)
class Palette:
    """Colours of one scheme, each a `#rrggbb` text that QColor and pyqtgraph take."""

    paper: str  # ground of the page
    raised: str  # ground of rail, strips, selected rows
    ink: str  # text
    soft: str  # secondary text, units
    hairline: str  # rules between things; decoration only
    line: str  # edges of controls, chart axes (3:1)
    accent: str  # what can be acted on
    accent_ink: str  # text on accent
    accent_ground: str  # ground of a chosen thing; ink and accent stay readable on it
    problem: str
    caution: str
    good: str


_LIGHT = Palette(
    paper="#fbfaf7",
    raised="#f2f0ea",
    ink="#1b1d1f",
    soft="#595b5c",
    hairline="#d3cfc4",
    line="#868278",
    accent="#4b3a96",
    accent_ink="#ffffff",
    accent_ground="#e6e2f3",
    problem="#a3241a",
    caution="#7a5000",
    good="#1d6b3a",
)
_DARK = Palette(
    paper="#1d2023",
    raised="#272b2f",
    ink="#eeece6",
    soft="#b4b6b5",
    hairline="#40454a",
    line="#7f868c",
    accent="#b9abf6",
    accent_ink="#1b1830",
    accent_ground="#3a3558",
    problem="#ff9d8e",
    caution="#e8bd66",
    good="#7fd09a",
)


def palette(scheme: Scheme) -> Palette:
    """Return the colours of a scheme."""
    return _DARK if scheme == "dark" else _LIGHT


def plan_colour(mark: PlanMark, scheme: Scheme) -> QColor:
    """Return the colour of a plan."""
    return QColor(mark.dark if scheme == "dark" else mark.light)


def plan_pen(mark: PlanMark, scheme: Scheme, width: float = 2.0) -> QPen:
    """Return the pen of a plan: its colour, and its dash pattern in widths of the pen."""
    pen = QPen(plan_colour(mark, scheme))
    pen.setWidthF(width)
    pen.setCosmetic(True)
    pen.setCapStyle(Qt.PenCapStyle.FlatCap)
    if mark.dash:
        pen.setDashPattern(list(mark.dash))
    return pen


def pixels(size: int, scale: float) -> int:
    """Return a text size at a text scale."""
    return round(size * scale)


def font(size: int, scale: float, *, bold: bool = False) -> QFont:
    """Return the application's font in one of the three sizes."""
    made = QFont(QApplication.font())
    made.setPixelSize(pixels(size, scale))
    made.setBold(bold)
    return made


def apply(app: QApplication, scheme: Scheme, text_scale: float = 1.0) -> None:
    """Give the whole program a scheme and a text size."""
    colours = palette(scheme)
    if app.style().objectName() != "fusion":
        app.setStyle("fusion")
    made = QFont(app.font())
    made.setPixelSize(pixels(BODY, text_scale))
    app.setFont(made)
    app.setPalette(_qt_palette(colours))
    app.setStyleSheet(style_sheet(colours, text_scale))


def style_sheet(colours: Palette, text_scale: float) -> str:
    """Return the style sheet of `resources/desk.qss` with colours and sizes put in."""
    text = (places.resources() / "desk.qss").read_text(encoding="utf-8")
    values = {name: getattr(colours, name) for name in colours.__slots__}
    sizes = {"note": pixels(NOTE, text_scale), "body": pixels(BODY, text_scale)}
    sizes |= {"title": pixels(TITLE, text_scale), "target": max(TARGET, pixels(22, text_scale))}
    icons = (places.resources() / "icons").as_posix()
    shade = "dark" if colours is _DARK else "light"
    return Template(text).substitute(values, **sizes, icons=icons, shade=shade)


def _qt_palette(colours: Palette) -> QPalette:
    made = QPalette()
    roles = {
        QPalette.ColorRole.Window: colours.paper,
        QPalette.ColorRole.WindowText: colours.ink,
        QPalette.ColorRole.Base: colours.paper,
        QPalette.ColorRole.AlternateBase: colours.raised,
        QPalette.ColorRole.Text: colours.ink,
        QPalette.ColorRole.Button: colours.raised,
        QPalette.ColorRole.ButtonText: colours.ink,
        QPalette.ColorRole.ToolTipBase: colours.raised,
        QPalette.ColorRole.ToolTipText: colours.ink,
        QPalette.ColorRole.PlaceholderText: colours.soft,
        QPalette.ColorRole.Highlight: colours.accent,
        QPalette.ColorRole.HighlightedText: colours.accent_ink,
        QPalette.ColorRole.Link: colours.accent,
        QPalette.ColorRole.Mid: colours.hairline,
        QPalette.ColorRole.Dark: colours.line,
    }
    for role, colour in roles.items():
        made.setColor(role, QColor(colour))
    for role in (
        QPalette.ColorRole.Text,
        QPalette.ColorRole.WindowText,
        QPalette.ColorRole.ButtonText,
    ):
        made.setColor(QPalette.ColorGroup.Disabled, role, QColor(colours.soft))
    return made
