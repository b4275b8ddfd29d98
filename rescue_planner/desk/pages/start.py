"""The start page: shipped cases, open, recent files, recovered work, a new case."""

from __future__ import annotations

import json
from collections.abc import Callable
from pathlib import Path

from PySide6.QtWidgets import QHBoxLayout, QVBoxLayout, QWidget

from rescue_planner import places
from rescue_planner.desk import theme
from rescue_planner.desk.file_actions import FileActions
from rescue_planner.desk.flow import FlowLayout
from rescue_planner.desk.recovery import Leftover, leftovers
from rescue_planner.desk.settings import Settings
from rescue_planner.desk.widgets import Column, button, rule, scrolled, text

LETTERS = 108  # of the column
LEAD = (
    "Bring in animals or not, from where, how many, how often, and when to stop: describe a small, "
    "isolated population, put plans side by side, and see what each buys and what it costs."
)


def shipped() -> list[tuple[Path, str, str, str]]:
    """Return (file, title, species, question) of each shipped case."""
    found = []
    for path in sorted(places.scenarios().glob("*.json")):
        raw = json.loads(path.read_text(encoding="utf-8"))
        question = (raw.get("decision") or {}).get("question") or ""
        found.append((path, str(raw["title"]), str(raw.get("species") or ""), str(question)))
    return found


class StartPage(QWidget):
    """Where a session begins."""

    def __init__(
        self, files: FileActions, settings: Settings, new_case: Callable[[], None]
    ) -> None:
        super().__init__()
        self._files, self._settings = files, settings
        inner = QWidget()
        self._column = QVBoxLayout(inner)
        self._column.setContentsMargins(*[theme.UNIT * 4] * 4)
        self._column.setSpacing(theme.UNIT)
        self._column.addWidget(text("Rescue Planner", "title"))
        self._column.addWidget(text(LEAD))
        self._add_begin(new_case)
        self._add_recovered()
        self._add_recent()
        self._add_shipped()
        self._column.addStretch(1)
        outer = QVBoxLayout(self)
        outer.setContentsMargins(0, 0, 0, 0)
        outer.addWidget(scrolled(Column(inner, LETTERS)))

    def _section(self, words: str) -> None:
        self._column.addSpacing(theme.UNIT * 2)
        self._column.addWidget(text(words, "section"))
        self._column.addWidget(rule())

    def _add_begin(self, new_case: Callable[[], None]) -> None:
        self.new = button("A new case from what you know", kind="primary")
        self.open = button("Open a case…")
        self.new.clicked.connect(new_case)
        self.open.clicked.connect(self._files.open_dialog)
        holder = QWidget()
        flow = FlowLayout(holder)
        flow.addWidget(self.new)
        flow.addWidget(self.open)
        self._column.addSpacing(theme.UNIT)
        self._column.addWidget(holder)
        self._column.addWidget(
            text("About ten questions; “I don’t know” is an answer to all but the first.", "soft")
        )

    def _add_recovered(self) -> None:
        found = leftovers()
        if not found:
            return
        self._section("Work that was not saved")
        for left in found:
            self._column.addWidget(self._recovered_row(left))

    def _recovered_row(self, left: Leftover) -> QWidget:
        row = QWidget()
        line = QHBoxLayout(row)
        line.setContentsMargins(0, 0, 0, 0)
        line.setSpacing(theme.UNIT)
        where = f" ({left.original.name})" if left.original else ""
        line.addWidget(text(f"{left.title}{where}, last changed {left.changed:%Y-%m-%d %H:%M}"), 1)
        recover = button("Recover", said=f"Recover {left.title}")
        discard = button("Delete this copy", said=f"Delete the copy of {left.title}")
        recover.clicked.connect(lambda: self._files.recover(left))
        discard.clicked.connect(left.discard)
        discard.clicked.connect(row.hide)
        line.addWidget(recover)
        line.addWidget(discard)
        return row

    def _add_recent(self) -> None:
        recent = [Path(name) for name in self._settings.recent if Path(name).is_file()]
        if not recent:
            return
        self._section("Recent")
        for path in recent:
            link = button(path.name, kind="link", said=f"Open {path.name}")
            link.setToolTip(str(path))
            link.clicked.connect(lambda _=False, path=path: self._files.open(path))
            line = QHBoxLayout()
            line.addWidget(link)
            line.addWidget(text(str(path.parent), "soft", wrap=False), 1)
            self._column.addLayout(line)

    def _add_shipped(self) -> None:
        self._section("Shipped cases, all invented, to look around in")
        self.links = []
        for path, title, species, question in shipped():
            link = button(title, kind="link", said=f"Open the shipped case: {title}")
            link.clicked.connect(lambda _=False, path=path: self._files.open_shipped(path))
            self.links.append(link)
            self._column.addWidget(link)
            if species:
                self._column.addWidget(text(species, "soft"))
            if question:
                self._column.addWidget(text(question))
            self._column.addSpacing(theme.UNIT)
