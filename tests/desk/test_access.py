"""Names for screen readers, targets large enough, nothing cut off at twice the text size."""

from __future__ import annotations

import json
from pathlib import Path

import pytest
from PySide6.QtCore import QPoint, QRect, Qt
from PySide6.QtWidgets import (
    QAbstractButton,
    QComboBox,
    QLabel,
    QLineEdit,
    QPlainTextEdit,
    QScrollArea,
    QWidget,
)

from rescue_planner import places
from rescue_planner.desk import theme

PAGES = ("start", "known", "case", "plans", "compare")
ACTED_ON = (QAbstractButton, QLineEdit, QComboBox, QPlainTextEdit)
FULLEST = "ground-bird"


def _full_case(window) -> None:
    path = next(p for p in places.scenarios().glob("*.json") if FULLEST in p.stem)
    raw = json.loads(path.read_text("utf-8"))
    target = Path(window.desk.document.path).with_name("full.json")
    target.write_text(json.dumps(raw), encoding="utf-8")
    assert window.files.open(target)


def _shown(area: QWidget, kinds: tuple[type, ...]) -> list[QWidget]:
    internal = ("qt_spinbox_lineedit", "qt_toolbar_ext_button")
    return [
        one
        for one in area.findChildren(QWidget)
        if isinstance(one, kinds) and one.isVisible() and one.objectName() not in internal
    ]


def _by_page(window, find) -> dict[str, list[object]]:
    """Show each page and return what `find` finds wrong on it, pages without faults left out."""
    found = {}
    for page in PAGES:
        window.show_page(page)
        if wrong := find(page):
            found[page] = wrong
    return found


def test_that_everything_that_can_be_acted_on_has_a_name_a_unit_and_can_be_reached(window) -> None:
    _full_case(window)

    def wrong(page: str) -> list[object]:
        nameless = [x for x in _shown(window, ACTED_ON) if not (x.accessibleName() or "").strip()]
        numbers = [
            one
            for one in _shown(window.pages[page], (QLineEdit,))
            if one.objectName() in ("number", "compact-number")
        ]
        bare = [one.accessibleName() for one in numbers if "," not in one.accessibleName()]
        unitless = [name for name in bare if "Replicates" not in name]
        unreached = [
            one.accessibleName()
            for one in _shown(window.stack, ACTED_ON)
            if not one.focusPolicy() & Qt.FocusPolicy.TabFocus
        ]
        return [*nameless, *unitless, *unreached]

    assert _by_page(window, wrong) == {}


@pytest.mark.parametrize("scale", [1.0, 2.0])
def test_that_targets_are_at_least_24_pixels_and_no_text_is_cut_off(qtbot, window, scale) -> None:
    _full_case(window)
    window.desk.view.set_text_scale(scale)
    window.resize(1280, 720)

    def wrong(page: str) -> list[object]:
        if page == "known":
            window.pages["known"].questions["adults"].edit.setText("46")
        _wait_until_whole(qtbot, window.pages[page])
        return [
            (one.accessibleName(), one.width(), one.height())
            for one in _shown(window, ACTED_ON)
            if min(one.width(), one.height()) < theme.TARGET
        ]

    assert _by_page(window, wrong) == {}


def _cut_off(area: QWidget) -> list[str]:
    """Name what does not show all its text, or sticks out of its area sideways."""
    found = []
    for one in area.findChildren(QWidget):
        if not one.isVisible():
            continue
        if isinstance(one, QLabel) and one.text():
            flags = Qt.TextFlag.TextWordWrap.value if one.wordWrap() else 0
            room = QRect(0, 0, one.contentsRect().width() if one.wordWrap() else 10_000, 10_000)
            needs = one.fontMetrics().boundingRect(room, flags, one.text())
            has = one.contentsRect()
            if needs.width() > has.width() + 1 or needs.height() > has.height() + 1:
                found.append(f"{one.text()!r} needs {needs.size()}, has {has.size()}")
        if isinstance(one, QAbstractButton) and one.width() < one.minimumSizeHint().width():
            found.append(f"button {one.text()!r}")
        within = _area_of(one)
        if within is not None:
            left = one.mapTo(within.viewport(), QPoint(0, 0)).x()
            if left < -1 or left + one.width() > within.viewport().width() + 1:
                found.append(f"{type(one).__name__} {one.accessibleName()!r} sticks out")
    return found


def _wait_until_whole(qtbot, area: QWidget) -> None:
    """Layouts settle over a few turns of the event loop; what is then cut off fails."""

    def whole() -> None:
        assert _cut_off(area) == []

    qtbot.waitUntil(whole)


def _area_of(widget: QWidget) -> QScrollArea | None:
    above = widget.parentWidget()
    while above is not None:
        if isinstance(above, QScrollArea):
            return above if above.viewport().isAncestorOf(widget) else None
        above = above.parentWidget()
    return None


def test_that_the_frame_of_the_window_is_not_cut_off_at_twice_the_size(qtbot, window) -> None:
    _full_case(window)
    window.desk.explain.show("recipient.effective_size")
    window.desk.view.set_text_scale(2.0)
    window.resize(1280, 720)
    qtbot.waitUntil(lambda: window.desk.live.comparison is not None)
    qtbot.wait(300)
    assert (window.width(), window.height()) == (1280, 720)  # it did not have to grow
    for part in (window.work, window.explainer, window.rail):
        _wait_until_whole(qtbot, part)
    for chip in window.strip.chips:
        assert window.strip.rect().contains(
            QRect(chip.mapTo(window.strip, QPoint(0, 0)), chip.size())
        )


def test_that_a_cut_off_label_would_be_seen(qtbot) -> None:
    holder = QWidget()
    qtbot.addWidget(holder)
    label = QLabel("a long text that has no room here", holder)
    label.setGeometry(0, 0, 30, 12)
    holder.show()
    assert len(_cut_off(holder)) == 1
