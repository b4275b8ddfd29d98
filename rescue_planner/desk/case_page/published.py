"""Published values for one input, each with its use button; shown beside a field."""

from __future__ import annotations

from functools import partial

from PySide6.QtWidgets import QVBoxLayout, QWidget

from rescue_planner.case.faults import InvalidCase
from rescue_planner.case.library import (
    LibraryError,
    Published,
    borrow,
    entry_from,
    forget,
    keep,
    library,
)
from rescue_planner.desk import theme
from rescue_planner.desk.context import Desk
from rescue_planner.desk.fields import sentence_of
from rescue_planner.desk.widgets import Link, text


class PublishedList(QWidget):
    """What has been published for the input at `path`; empty and hidden where nothing has."""

    def __init__(self, desk: Desk, path: str) -> None:
        super().__init__()
        self._desk, self.path = desk, path
        self.uses: list[Link] = []
        self.removes: list[Link] = []
        self.problem = text("", "problem")
        self.problem.hide()
        self._column = QVBoxLayout(self)
        self._column.setContentsMargins(0, 0, 0, 0)
        self._column.setSpacing(theme.HALF)
        self.keep: Link | None = None
        self._fill()

    def _fill(self) -> None:
        held = library()
        entries = held.fitting(self.path)
        self._column.addWidget(text("Published values", "section"))
        if not entries:
            self._column.addWidget(text("None is held for this input.", "soft"))
        for entry in entries:
            self._column.addWidget(self._entry(entry, own=entry in held.own))
        if held.complaint:
            self._say(held.complaint)
        self.keep = Link("Keep the value entered here among mine")
        self.keep.setAccessibleName("Keep the value entered here among my published values")
        self.keep.clicked.connect(self._keep)
        self._column.addWidget(self.keep)
        self._column.addWidget(self.problem)

    def _entry(self, entry: Published, *, own: bool) -> QWidget:
        made = QWidget()
        column = QVBoxLayout(made)
        column.setContentsMargins(0, 0, 0, theme.HALF)
        column.setSpacing(0)
        if entry.usable:
            column.addWidget(text(entry.value_words))
            column.addWidget(text(f"{entry.name}: {entry.taxon}.", "small"))
        else:
            column.addWidget(text(f"To read: {entry.name} ({entry.taxon}).", "small"))
        column.addWidget(text(f"{entry.source}.", "soft"))
        column.addWidget(text(f"△ {entry.caveat}", "caution"))
        if entry.usable:
            use = Link("Use")
            use.setAccessibleName(f"Use {entry.value_words}: {entry.name}, {entry.taxon}")
            use.clicked.connect(partial(self._use, entry))
            self.uses.append(use)
            column.addWidget(use)
        if own:
            gone = Link("Remove from mine")
            gone.setAccessibleName(f"Remove from my published values: {entry.value_words}")
            gone.clicked.connect(partial(self._forget, entry))
            column.addWidget(gone)
            self.removes.append(gone)
        return made

    def _forget(self, entry: Published, _clicked: bool = False) -> None:
        try:
            forget(entry.key)
        except LibraryError as wrong:
            self._say(str(wrong))
        else:
            self._say("")
            self._again()

    def _use(self, entry: Published, _clicked: bool = False) -> None:
        problems = self._desk.document.try_edit(lambda case: borrow(case, self.path, entry))
        self._say(sentence_of(problems))

    def _keep(self) -> None:
        try:
            keep(entry_from(self._desk.document.case, self.path))
        except InvalidCase as wrong:
            self._say(sentence_of(wrong.problems))
        except LibraryError as wrong:
            self._say(str(wrong))
        else:
            self._say("")
            self._again()

    def _again(self) -> None:
        """Show the list anew, with what was kept."""
        self.uses.clear()
        self.removes.clear()
        while (item := self._column.takeAt(0)) is not None:
            if (shown := item.widget()) is not None and shown is not self.problem:
                shown.hide()
                shown.deleteLater()
        self._fill()

    def _say(self, sentence: str) -> None:
        self.problem.setText(f"⚠ {sentence}" if sentence else "")
        self.problem.setVisible(bool(sentence))
