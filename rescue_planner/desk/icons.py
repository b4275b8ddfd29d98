"""The program's own icons: simple SVG under resources/icons, in the colour of the text they join.

An icon only accompanies words; no button is an icon alone.
"""

from __future__ import annotations

from functools import lru_cache

from PySide6.QtCore import QBuffer, QByteArray, QIODevice, QObject, QSize
from PySide6.QtGui import QIcon, QImageReader, QPixmap
from PySide6.QtWidgets import QAbstractButton

from rescue_planner import places
from rescue_planner.desk import theme
from rescue_planner.desk.view import ViewState

SIZE = 16


@lru_cache(maxsize=128)
def icon(name: str, colour: str, soft: str, scale: float) -> QIcon:
    """Return an icon in `colour`, and in `soft` where its button is disabled.

    Parameters
    ----------
    name : str
        Of a file `resources/icons/<name>.svg`.
    scale : float
        Text size, 1 is the usual one.
    """
    made = QIcon()
    made.addPixmap(_drawn(name, colour, scale), QIcon.Mode.Normal)
    made.addPixmap(_drawn(name, soft, scale), QIcon.Mode.Disabled)
    return made


def _drawn(name: str, colour: str, scale: float) -> QPixmap:
    drawn = (places.resources() / "icons" / f"{name}.svg").read_text(encoding="utf-8")
    held = QBuffer()
    held.setData(QByteArray(drawn.replace("currentColor", colour).encode()))
    held.open(QIODevice.OpenModeFlag.ReadOnly)
    reader = QImageReader(held, QByteArray(b"svg"))
    reader.setScaledSize(QSize(1, 1) * round(2 * SIZE * scale))
    pixmap = QPixmap.fromImage(reader.read())
    pixmap.setDevicePixelRatio(2.0)
    return pixmap


class Icons(QObject):
    """Keeps the icons of some buttons in the colours and the size of the view."""

    def __init__(
        self, view: ViewState, named: dict[QAbstractButton, str], ink: str = "accent"
    ) -> None:
        super().__init__(next(iter(named)))
        self._view, self._named, self._ink = view, named, ink
        view.changed.connect(self.refresh)
        self.refresh()

    def refresh(self) -> None:
        """Draw them for the scheme and text size in force."""
        colours, scale = theme.palette(self._view.scheme), self._view.text_scale
        for made, name in self._named.items():
            made.setIcon(icon(name, getattr(colours, self._ink), colours.soft, scale))
            made.setIconSize(QSize(1, 1) * round(SIZE * scale))
