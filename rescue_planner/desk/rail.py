"""The rail of pages at the left, in the order of the work."""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import dataclass
from importlib import import_module

from PySide6.QtCore import Qt, Signal
from PySide6.QtWidgets import QButtonGroup, QPushButton, QVBoxLayout, QWidget

from rescue_planner.desk import theme
from rescue_planner.desk.context import Desk
from rescue_planner.desk.icons import Icons
from rescue_planner.desk.view import ViewState


@dataclass(frozen=True, slots=True)
class PageEntry:
    """One page: its key, its name, the question it answers, and the class that makes it."""

    key: str
    name: str
    question: str
    made_by: str  # class of `rescue_planner.desk.pages.<key>`
    about: str  # what the explainer says until something on the page is chosen

    def make(self, desk: Desk) -> QWidget:
        """Import and build the page."""
        module = import_module(f"rescue_planner.desk.pages.{self.key}")
        factory: Callable[[Desk], QWidget] = getattr(module, self.made_by)
        return factory(desk)


PAGES = (
    PageEntry(
        "case",
        "Case",
        "Who is in trouble, and what do we know?",
        "CasePage",
        "What is known of the recipient, the donors and the life cycle, each number with its "
        "range, where it came from, and who says so.",
    ),
    PageEntry(
        "plans",
        "Plans",
        "What could we do?",
        "PlansPage",
        "Releases and other actions, plan by plan, on the calendar and as sentences. The charts "
        "beside them show at once what the plan being edited leads to.",
    ),
    PageEntry(
        "compare",
        "Compare",
        "What does each plan buy and cost?",
        "ComparePage",
        "Every measure for all plans on one scale. Click a chart, or go to it with Tab and the "
        "Up and Down keys, to read here what it means, how it is computed and what that leaves "
        "out; Left and Right read all charts at another year.",
    ),
)


class Rail(QWidget):
    """A button per page; Ctrl and its number go there."""

    chosen = Signal(str)  # key of a page

    def __init__(self, view: ViewState, parent: QWidget | None = None) -> None:
        super().__init__(parent)
        self.setObjectName("rail")
        self.setAttribute(Qt.WidgetAttribute.WA_StyledBackground)
        column = QVBoxLayout(self)
        column.setContentsMargins(0, theme.UNIT, 0, theme.UNIT)
        column.setSpacing(0)
        self.buttons: dict[str, QPushButton] = {}
        self._group = QButtonGroup(self)
        for number, page in enumerate(PAGES, start=1):
            made = QPushButton(page.name)
            made.setObjectName("page")
            made.setCheckable(True)
            made.setMinimumHeight(theme.TARGET + theme.UNIT)
            made.setShortcut(f"Ctrl+{number}")
            made.setToolTip(f"{page.question} (Ctrl+{number})")
            made.setAccessibleName(f"Page {page.name}")
            made.setAccessibleDescription(page.question)
            made.clicked.connect(lambda _=False, key=page.key: self.chosen.emit(key))
            self._group.addButton(made)
            self.buttons[page.key] = made
            column.addWidget(made)
        column.addStretch(1)
        self._icons = Icons(view, {made: key for key, made in self.buttons.items()}, "ink")
        self.mark("")

    def mark(self, key: str) -> None:
        """Mark the page that is shown; none for the start page."""
        self._group.setExclusive(False)
        for name, made in self.buttons.items():
            made.setChecked(name == key)
        self._group.setExclusive(True)

    def set_open(self, is_open: bool) -> None:
        """Let pages be reached only while a case is open."""
        for made in self.buttons.values():
            made.setEnabled(is_open)
