"""A layout that sets widgets one after another and breaks lines, like words."""

from __future__ import annotations

from PySide6.QtCore import QMargins, QPoint, QRect, QSize, Qt
from PySide6.QtWidgets import QLayout, QLayoutItem, QWidget

from rescue_planner.desk import theme


class FlowLayout(QLayout):
    """Items keep their own width; a line is as high as its highest item."""

    def __init__(self, parent: QWidget | None = None, *, gap: int = theme.UNIT) -> None:
        super().__init__(parent)
        self._items: list[QLayoutItem] = []
        self._gap = gap
        self.setContentsMargins(QMargins(0, 0, 0, 0))

    def addItem(self, item: QLayoutItem) -> None:
        self._items.append(item)

    def count(self) -> int:
        return len(self._items)

    def itemAt(self, index: int) -> QLayoutItem | None:
        return self._items[index] if 0 <= index < len(self._items) else None

    def takeAt(self, index: int) -> QLayoutItem | None:
        return self._items.pop(index) if 0 <= index < len(self._items) else None

    def expandingDirections(self) -> Qt.Orientation:
        return Qt.Orientation(0)

    def hasHeightForWidth(self) -> bool:
        return True

    def heightForWidth(self, width: int) -> int:
        return self._place(QRect(0, 0, width, 0), move=False)

    def setGeometry(self, rect: QRect) -> None:
        super().setGeometry(rect)
        self._place(rect, move=True)

    def sizeHint(self) -> QSize:
        return self.minimumSize()

    def minimumSize(self) -> QSize:
        size = QSize(0, 0)
        for item in self._items:
            size = size.expandedTo(item.minimumSize())
        margins = self.contentsMargins()
        return size + QSize(margins.left() + margins.right(), margins.top() + margins.bottom())

    def _place(self, rect: QRect, *, move: bool) -> int:
        inside = rect.marginsRemoved(self.contentsMargins())
        x, y, high = inside.x(), inside.y(), 0
        line: list[tuple[QLayoutItem, QPoint, QSize]] = []
        for item in self._items:
            if item.isEmpty():
                continue
            size = item.sizeHint()
            size.setWidth(min(size.width(), max(inside.width(), item.minimumSize().width())))
            if line and x + size.width() > inside.right() + 1:
                self._set(line, high, move=move)
                x, y, high, line = inside.x(), y + high + self._gap // 2, 0, []
            line.append((item, QPoint(x, y), size))
            x += size.width() + self._gap
            high = max(high, size.height())
        self._set(line, high, move=move)
        return y + high - rect.y() + self.contentsMargins().bottom()

    @staticmethod
    def _set(line: list[tuple[QLayoutItem, QPoint, QSize]], high: int, *, move: bool) -> None:
        if not move:
            return
        for item, at, size in line:
            item.setGeometry(QRect(at + QPoint(0, (high - size.height()) // 2), size))
