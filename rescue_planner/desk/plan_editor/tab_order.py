"""Reading order: what can have the focus, as the layouts have it from top to bottom."""

from __future__ import annotations

from collections.abc import Iterator

from PySide6.QtCore import Qt
from PySide6.QtWidgets import QLayout, QWidget


def reached(widget: QWidget) -> Iterator[QWidget]:
    """Yield what can have the focus below `widget`."""
    if widget.focusPolicy() & Qt.FocusPolicy.TabFocus:
        yield widget
        return
    layout = widget.layout()
    if layout is not None:
        yield from _in_layout(layout)


def _in_layout(layout: QLayout) -> Iterator[QWidget]:
    for i in range(layout.count()):
        item = layout.itemAt(i)
        inner = item.widget() if item is not None else None
        if inner is not None:
            yield from reached(inner)
        nested = item.layout() if item is not None else None
        if inner is None and nested is not None:
            yield from _in_layout(nested)
