"""Icons: drawn in the colour asked for, and only beside words."""

from __future__ import annotations

import pytest
from PySide6.QtGui import QColor, QIcon
from PySide6.QtWidgets import QAbstractButton

from rescue_planner import places
from rescue_planner.desk.icons import icon

DRAWN = sorted(
    path.stem
    for path in (places.resources() / "icons").glob("*.svg")
    if "currentColor" in path.read_text(encoding="utf-8")
)


@pytest.mark.parametrize("name", DRAWN)
def test_that_an_icon_is_drawn_in_the_colour_of_its_words(qapp, name) -> None:
    made = icon(name, "#4b3a96", "#595b5c", 1.0)
    for mode, colour in ((QIcon.Mode.Normal, "#4b3a96"), (QIcon.Mode.Disabled, "#595b5c")):
        image = made.pixmap(32, 32, mode).toImage()
        inks = {
            QColor(image.pixelColor(x, y)).name()
            for x in range(image.width())
            for y in range(image.height())
            if image.pixelColor(x, y).alpha() == 255
        }
        assert colour in inks


def test_that_icons_grow_with_the_text(qapp) -> None:
    usual, twice = (icon("add", "#000000", "#888888", scale) for scale in (1.0, 2.0))
    sizes = [one.availableSizes()[0].width() for one in (usual, twice)]
    assert sizes[1] == 2 * sizes[0]


def test_that_no_button_is_an_icon_alone(window) -> None:
    for page in ("case", "plans", "compare"):
        window.show_page(page)
    with_icon = [
        one
        for one in window.findChildren(QAbstractButton)
        if not one.icon().isNull() and not one.objectName().startswith("qt_")  # Qt's own
    ]
    assert len(with_icon) >= 10  # three pages, four of the list of plans, three of Compare
    assert [b.accessibleName() for b in with_icon if not b.text()] == []
