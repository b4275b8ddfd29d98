"""The menu bar; every action has a key or can be reached by Alt."""

from __future__ import annotations

from collections.abc import Callable
from functools import partial
from pathlib import Path
from typing import TYPE_CHECKING, Protocol

from PySide6.QtCore import QObject
from PySide6.QtGui import QAction, QActionGroup, QKeySequence
from PySide6.QtWidgets import QMainWindow, QMenu

from rescue_planner import places
from rescue_planner.desk.context import Desk
from rescue_planner.desk.file_actions import FileActions
from rescue_planner.desk.settings import Settings
from rescue_planner.desk.view import TEXT_SCALES

if TYPE_CHECKING:
    from rescue_planner.desk.help_window import HelpDesk


class Commands(Protocol):
    """What the menus ask of the window."""

    desk: Desk
    files: FileActions
    settings: Settings
    current: str  # key of the page shown

    def show_start(self) -> None: ...
    def show_known(self) -> None: ...
    def show_remarks(self) -> None: ...
    def show_keyboard(self) -> None: ...
    def show_about(self) -> None: ...
    def export(self) -> None: ...
    def close_case(self) -> None: ...
    def close(self) -> bool: ...
    def choose_scheme(self, scheme: str, /) -> None: ...
    def resize_text(self, by: int, /) -> None: ...
    def toggle_explainer(self) -> None: ...
    def next_region(self) -> None: ...


def action(
    menu: QMenu, words: str, do: Callable[[], object], keys: QKeySequence | str | None = None
) -> QAction:
    """Add an entry to a menu."""
    made = QAction(words, menu)
    if keys is not None:
        made.setShortcut(QKeySequence(keys))
    made.triggered.connect(lambda _checked=False: do())
    menu.addAction(made)
    return made


class Menus(QObject):
    """Builds the menus of a window and keeps their state."""

    def __init__(self, window: QMainWindow, commands: Commands) -> None:
        super().__init__(window)
        self._bar, self._window = window.menuBar(), commands
        self.needs_case: list[QAction] = []
        self._help_desk: HelpDesk | None = None
        self._file()
        self._edit()
        self._view()
        self._help()
        commands.desk.document.state_changed.connect(self.refresh)
        commands.desk.view.changed.connect(self.refresh)
        self.refresh()

    def _menu(self, words: str) -> QMenu:
        menu = QMenu(words, self._bar)
        self._bar.addMenu(menu)
        return menu

    def _file(self) -> None:
        window, files, menu = self._window, self._window.files, self._menu("&File")
        keys = QKeySequence.StandardKey
        action(menu, "&New case from what you know…", window.show_known, "Ctrl+N")
        action(menu, "&Open…", files.open_dialog, "Ctrl+O")
        self.shipped = menu.addMenu("Open a &shipped case")
        self.shipped.aboutToShow.connect(self._fill_shipped)
        self.recent = menu.addMenu("Open &recent")
        self.recent.aboutToShow.connect(self._fill_recent)
        action(menu, "S&tart page", window.show_start)
        menu.addSeparator()
        saved = action(menu, "&Save", files.save, "Ctrl+S")
        as_ = action(menu, "Save &as…", files.save_as, "Ctrl+Shift+S")
        export = action(menu, "&Export…", window.export, "Ctrl+E")
        menu.addSeparator()
        action(menu, "&Close case", window.close_case, "Ctrl+W")
        quit_ = action(menu, "&Quit", window.close, "Ctrl+Q")
        both = [QKeySequence("Ctrl+Q"), QKeySequence(keys.Quit)]
        quit_.setShortcuts(both[:1] if both[1] in (both[0], QKeySequence()) else both)
        quit_.setMenuRole(QAction.MenuRole.QuitRole)
        self.needs_case += [saved, as_, export, menu.actions()[-2]]

    def _fill_shipped(self) -> None:
        self.shipped.clear()
        for path in sorted(places.scenarios().glob("*.json")):
            words = path.stem.replace("-", " ").capitalize()
            action(self.shipped, words, partial(self._window.files.open_shipped, path))

    def _fill_recent(self) -> None:
        self.recent.clear()
        for name in self._window.settings.recent:
            path = Path(name)
            action(self.recent, path.name, partial(self._window.files.open, path))
        if not self._window.settings.recent:
            self.recent.addAction("none yet").setEnabled(False)

    def _edit(self) -> None:
        menu, stack = self._menu("&Edit"), self._window.desk.document.undo_stack
        self.undo = stack.createUndoAction(self, "Undo:")
        self.undo.setShortcuts([QKeySequence("Ctrl+Z")])
        self.redo = stack.createRedoAction(self, "Redo:")
        self.redo.setShortcuts([QKeySequence("Ctrl+Y"), QKeySequence("Ctrl+Shift+Z")])
        menu.addActions([self.undo, self.redo])
        menu.addSeparator()
        remarks = action(menu, "&Remarks…", self._window.show_remarks, "Ctrl+R")
        self.needs_case.append(remarks)

    def _view(self) -> None:
        menu, view = self._menu("&View"), self._window.desk.view
        self.schemes = QActionGroup(self)
        for scheme, words in (("light", "&Light"), ("dark", "&Dark"), ("system", "As the &system")):
            made = action(menu, words, partial(self._window.choose_scheme, scheme))
            made.setCheckable(True)
            made.setData(scheme)
            self.schemes.addAction(made)
        menu.addSeparator()
        sizes = menu.addMenu("&Text size")
        self.sizes = QActionGroup(self)
        for scale in TEXT_SCALES:
            words = f"{scale:.0%}".replace("%", " %")
            made = action(sizes, words, partial(view.set_text_scale, scale))
            made.setCheckable(True)
            made.setData(scale)
            self.sizes.addAction(made)
        action(menu, "&Larger text", lambda: self._window.resize_text(1), "Ctrl++")
        action(menu, "S&maller text", lambda: self._window.resize_text(-1), "Ctrl+-")
        menu.addSeparator()
        self.axes = QActionGroup(self)
        for axis, words in (("years", "Time in &years"), ("generations", "Time in &generations")):
            made = action(menu, words, partial(view.set_axis, axis))  # type: ignore[arg-type]
            made.setCheckable(True)
            made.setData(axis)
            self.axes.addAction(made)
        self.plans = menu.addMenu("&Plans shown")
        self.plans.aboutToShow.connect(self._fill_plans)
        menu.addSeparator()
        self.explainer = action(menu, "&Explainer", self._window.toggle_explainer, "F9")
        self.explainer.setCheckable(True)
        action(menu, "Next &region of the window", self._window.next_region, "F6")

    def _fill_plans(self) -> None:
        self.plans.clear()
        desk = self._window.desk
        if not desk.document.has_case:
            return
        for plan in desk.document.case.plans:
            shown = plan.name not in desk.view.hidden
            made = action(
                self.plans,
                plan.name,
                partial(desk.view.set_hidden, plan.name, shown),
            )
            made.setCheckable(True)
            made.setChecked(shown)

    def _help(self) -> None:
        menu = self._menu("&Help")
        action(menu, "Help on this &page", lambda: self.helper().show_here(), "F1")
        action(menu, "&First ten minutes", lambda: self.helper().show_page("first-ten-minutes"))
        action(menu, "&Glossary", lambda: self.helper().show_page("glossary"))
        action(menu, "&Contents and search", lambda: self.helper().show_page("contents"))
        menu.addSeparator()
        action(menu, "&Keyboard", self._window.show_keyboard, "Shift+F1")
        about = action(menu, "&About Rescue Planner", self._window.show_about)
        about.setMenuRole(QAction.MenuRole.AboutRole)

    def helper(self) -> HelpDesk:
        """Return what opens the help; made when it is first asked for."""
        if self._help_desk is None:
            from rescue_planner.desk.help_window import HelpDesk

            self._help_desk = HelpDesk(self._bar.window(), self._window)
        return self._help_desk

    def refresh(self) -> None:
        """Grey what needs an open case; tick what is chosen."""
        has_case = self._window.desk.document.has_case
        for one in self.needs_case:
            one.setEnabled(has_case)
        view, settings = self._window.desk.view, self._window.settings
        chosen = {settings.scheme, view.text_scale, view.axis}
        for group in (self.schemes, self.sizes, self.axes):
            for one in group.actions():
                one.setChecked(one.data() in chosen)
        self.explainer.setChecked(settings.explainer)
