"""The help window: contents and search at the left, a page at the right. Nothing leaves it."""

from __future__ import annotations

from PySide6.QtCore import QEvent, Qt, QUrl
from PySide6.QtGui import QKeySequence, QShortcut
from PySide6.QtWidgets import (
    QApplication,
    QHBoxLayout,
    QLineEdit,
    QListWidget,
    QListWidgetItem,
    QSplitter,
    QVBoxLayout,
    QWidget,
)

from rescue_planner.desk import help_pages, theme
from rescue_planner.desk.help_browser import HelpBrowser
from rescue_planner.desk.view import ViewState
from rescue_planner.desk.widgets import button, text

HERE = {
    "start": "start",
    "known": "new-case",
    "case": "case",
    "plans": "plans",
    "compare": "compare",
}
BY_NAME = (("Export", "export"), ("remark", "remarks"))  # part of an accessible name, page
PLACE = Qt.ItemDataRole.UserRole  # (page, anchor) of a row
FIRST = "contents"
ROWS = f"QListWidget::item {{ padding: 3px 0; min-height: {theme.TARGET - 6}px; }}"


class HelpWindow(QWidget):
    """Contents, search, a page, back and forward."""

    def __init__(self, view: ViewState, parent: QWidget | None = None) -> None:
        super().__init__(parent, Qt.WindowType.Window)
        self._view = view
        self.here = ("", "")
        self._back: list[tuple[str, str]] = []
        self._forward: list[tuple[str, str]] = []
        self.search = QLineEdit()
        self.search.setAccessibleName("Search all pages of the help")
        self.search.setClearButtonEnabled(True)
        self.rows = QListWidget()
        self.rows.setWordWrap(True)
        self.rows.setStyleSheet(ROWS)
        self.rows.setHorizontalScrollBarPolicy(Qt.ScrollBarPolicy.ScrollBarAlwaysOff)
        self.found = text("", "note")
        self.found.hide()
        self.browser = HelpBrowser()
        self.back = button("Back")
        self.forward = button("Forward")
        self.close_button = button("Close", said="Close the help")
        self._lay_out()
        self._connect()
        self._fill_contents()

    def _lay_out(self) -> None:
        left, right = QWidget(), QWidget()
        column = QVBoxLayout(left)
        column.setContentsMargins(theme.UNIT, theme.UNIT, theme.UNIT, theme.UNIT)
        column.setSpacing(theme.UNIT)
        asked = text("Search all pages", "note")
        asked.setBuddy(self.search)
        column.addWidget(asked)
        column.addWidget(self.search)
        column.addWidget(self.found)
        column.addWidget(self.rows, 1)
        tools = QHBoxLayout()
        tools.setSpacing(theme.UNIT)
        tools.addWidget(self.back)
        tools.addWidget(self.forward)
        tools.addStretch(1)
        tools.addWidget(self.close_button)
        page = QVBoxLayout(right)
        page.setContentsMargins(theme.UNIT, theme.UNIT, theme.UNIT, theme.UNIT)
        page.setSpacing(theme.UNIT)
        page.addLayout(tools)
        page.addWidget(self.browser, 1)
        self._split = QSplitter(Qt.Orientation.Horizontal)
        self._split.setChildrenCollapsible(False)
        self._split.addWidget(left)
        self._split.addWidget(right)
        self._split.setStretchFactor(1, 1)
        whole = QVBoxLayout(self)
        whole.setContentsMargins(0, 0, 0, 0)
        whole.addWidget(self._split)
        self._fit()

    def _fit(self) -> None:
        """Take the room that the text size asks for, as far as the screen has it."""
        room = self.screen().availableGeometry().size()
        self._scale = self._view.text_scale
        self.resize(min(round(940 * self._scale), room.width()), min(700, room.height() - 40))
        left = min(round(280 * self._scale), self.width() * 2 // 5)
        self._split.setSizes([left, self.width() - left])

    def _connect(self) -> None:
        self.search.textChanged.connect(self._searched)
        self.search.returnPressed.connect(self._open_first)
        self.rows.itemActivated.connect(self._open_row)
        self.rows.itemClicked.connect(self._open_row)
        self.browser.anchorClicked.connect(self._follow)
        self.back.clicked.connect(self.go_back)
        self.forward.clicked.connect(self.go_forward)
        self.close_button.clicked.connect(self.close)
        self._view.changed.connect(self._redraw)
        keys = (
            ("Alt+Left", self.go_back),
            ("Alt+Right", self.go_forward),
            ("Ctrl+F", self._to_search),
            ("Escape", self.close),
        )
        for combination, do in keys:
            QShortcut(QKeySequence(combination), self, do)

    # rows at the left

    def _fill_contents(self) -> None:
        self.rows.clear()
        self.rows.setAccessibleName("Contents of the help")
        for entry in help_pages.contents():
            row = QListWidgetItem(entry.title, self.rows)
            if entry.key:
                row.setData(PLACE, (entry.key, ""))
            else:
                row.setFlags(Qt.ItemFlag.NoItemFlags)
                row.setFont(theme.font(theme.NOTE, self._view.text_scale, bold=True))
        self._mark_row()

    def _searched(self, asked: str) -> None:
        self.found.setVisible(bool(asked.strip()))
        if not asked.strip():
            self._fill_contents()
            return
        hits = help_pages.search(asked)
        self.rows.clear()
        self.rows.setAccessibleName("What the search found")
        for hit in hits:
            one = hit.section
            where = f"{one.heading} — {one.page_title}" if one.anchor else one.heading
            row = QListWidgetItem(f"▸ {where}\n{hit.snippet}", self.rows)
            row.setData(PLACE, (one.page, one.anchor))
        many = "place" if len(hits) == 1 else "places"
        said = f"Found in {len(hits)} {many}. Enter opens the first."
        self.rows.scrollToTop()
        self.found.setText(said if hits else "Nothing found. Try one word, or part of a word.")

    def _open_first(self) -> None:
        if self.search.text().strip() and self.rows.count():
            self.rows.setCurrentRow(0)
            self._open_row(self.rows.item(0))
            self.browser.setFocus(Qt.FocusReason.OtherFocusReason)

    def _open_row(self, row: QListWidgetItem) -> None:
        place = row.data(PLACE)
        if place:
            self.show_page(*place)

    def _mark_row(self) -> None:
        if self.search.text().strip():
            return
        for at in range(self.rows.count()):
            place = self.rows.item(at).data(PLACE)
            if place and place[0] == self.here[0]:
                self.rows.setCurrentRow(at)

    # pages

    def show_page(self, key: str, anchor: str = "") -> None:
        """Show a page, at a heading where one is given."""
        if self.here[0] and (key, anchor) != self.here:
            self._back.append(self.here)
            self._forward.clear()
        self._show(key, anchor)

    def _show(self, key: str, anchor: str) -> None:
        if key != self.here[0]:
            self.browser.show_text(help_pages.page(key), self._view.text_scale)
        self.here = (key, anchor)
        if not (anchor and self.browser.go_to_heading(anchor)):
            self.browser.verticalScrollBar().setValue(0)
        self.setWindowTitle(f"{help_pages.title(key)} — Help of Rescue Planner")
        self.back.setEnabled(bool(self._back))
        self.forward.setEnabled(bool(self._forward))
        self._mark_row()

    def _follow(self, url: QUrl) -> None:
        """Go where a link of the page leads; any address that is no page of ours is ignored."""
        key, anchor = help_pages.target(self.here[0], url.toString())
        if key in help_pages.page_keys():
            self.show_page(key, anchor)

    def go_back(self) -> None:
        """Show the page before this one."""
        if self._back:
            self._forward.append(self.here)
            self._show(*self._back.pop())

    def go_forward(self) -> None:
        """Show the page that `go_back` left."""
        if self._forward:
            self._back.append(self.here)
            self._show(*self._forward.pop())

    def _to_search(self) -> None:
        self.search.setFocus(Qt.FocusReason.ShortcutFocusReason)
        self.search.selectAll()

    def _redraw(self) -> None:
        """Put on new colours and text sizes."""
        key, anchor = self.here
        self.here = ("", "")
        if self._scale != self._view.text_scale:
            self._fit()
        if not self.search.text().strip():
            self._fill_contents()
        if key:
            self._show(key, anchor)

    def changeEvent(self, event: QEvent) -> None:
        super().changeEvent(event)
        if event.type() == QEvent.Type.PaletteChange and self.here[0]:
            self._redraw()


class HelpDesk:
    """Opens the one help window of a desk at the page that has the focus."""

    def __init__(self, owner: QWidget, commands: object) -> None:
        self._owner, self._commands = owner, commands
        self._made: HelpWindow | None = None

    @property
    def window(self) -> HelpWindow:
        """The help window, made when it is first asked for."""
        if self._made is None:
            view: ViewState = self._commands.desk.view  # type: ignore[attr-defined]
            self._made = HelpWindow(view, self._owner)
        return self._made

    def topic(self) -> str:
        """Return the help page of what has the focus."""
        focused = QApplication.focusWidget()
        name = focused.accessibleName() if focused is not None else ""
        for start, key in BY_NAME:
            if start in name:
                return key
        return HERE.get(str(self._commands.current), FIRST)  # type: ignore[attr-defined]

    def show_here(self) -> None:
        """Open the help at the page that has the focus."""
        self.show_page(self.topic())

    def show_page(self, key: str) -> None:
        """Open the help at a page."""
        window = self.window
        window.show_page(key)
        window.show()
        window.raise_()
        window.activateWindow()
        window.browser.setFocus(Qt.FocusReason.OtherFocusReason)
