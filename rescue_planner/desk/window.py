"""The one window: strip, rail, pages, explainer and work strip around a document."""

from __future__ import annotations

from PySide6.QtCore import QByteArray, QEvent, QSize, Qt, QTimer
from PySide6.QtGui import QCloseEvent, QDragEnterEvent, QDropEvent
from PySide6.QtWidgets import (
    QApplication,
    QHBoxLayout,
    QMainWindow,
    QStackedWidget,
    QVBoxLayout,
    QWidget,
)

from rescue_planner.desk import theme
from rescue_planner.desk.context import Desk
from rescue_planner.desk.explainer import WIDTH, Explainer
from rescue_planner.desk.file_actions import FileActions
from rescue_planner.desk.menus import Menus
from rescue_planner.desk.plan_strip import PlanStrip
from rescue_planner.desk.rail import PAGES, Rail
from rescue_planner.desk.recovery import Recovery
from rescue_planner.desk.remark_list import RemarkDialog, RemarkFinder, answered
from rescue_planner.desk.settings import Settings
from rescue_planner.desk.view import TEXT_SCALES, Scheme
from rescue_planner.desk.widgets import bring_into_view, rule
from rescue_planner.desk.work_strip import WorkStrip

NAME = "Rescue Planner"
FRAME = 32  # what a title bar takes


class DeskWindow(QMainWindow):
    """Builds the desk; pages are made when they are first shown, after the first paint."""

    def __init__(self, settings: Settings | None = None) -> None:
        super().__init__()
        self.settings = settings or Settings.load()
        self.desk = Desk.build(self)
        self.recovery = Recovery(self.desk.document, self)
        self.finder = RemarkFinder(self.desk, self)
        self.files = FileActions(self.desk, self.settings, self)
        self.pages: dict[str, QWidget] = {}
        self.current = ""
        self.setAcceptDrops(True)
        self._set_view()
        self._lay_out()
        self.menus = Menus(self, self)
        self._connect()
        self._say_title()
        self._show_state()
        QTimer.singleShot(0, self._first_page)

    # building

    def _set_view(self) -> None:
        view, settings = self.desk.view, self.settings
        view.set_axis("generations" if settings.axis == "generations" else "years")
        if settings.text_scale in TEXT_SCALES:
            view.set_text_scale(settings.text_scale)
        view.set_scheme(self._scheme())
        self._apply_look()

    def _lay_out(self) -> None:
        self.strip, self.rail = PlanStrip(self.desk), Rail(self.desk.view)
        self.stack = QStackedWidget()
        self.explainer = Explainer(self.desk)
        self.work = WorkStrip(self.desk)
        middle = QHBoxLayout()
        middle.setSpacing(0)
        middle.addWidget(self.rail)
        middle.addWidget(rule(upright=True))
        middle.addWidget(self.stack, 1)
        self.explainer_rule = rule(upright=True)
        middle.addWidget(self.explainer_rule)
        middle.addWidget(self.explainer)
        whole = QWidget()
        column = QVBoxLayout(whole)
        column.setContentsMargins(0, 0, 0, 0)
        column.setSpacing(0)
        column.addWidget(self.strip)
        column.addWidget(rule())
        column.addLayout(middle, 1)
        column.addWidget(rule())
        column.addWidget(self.work)
        self.setCentralWidget(whole)
        self._fit_sides()
        self.resize(self._roomy())
        if self.settings.geometry:
            self.restoreGeometry(QByteArray.fromHex(self.settings.geometry.encode()))

    def _roomy(self) -> QSize:
        """Return the size the window opens with: whole on a small screen, frame included."""
        room = self.screen().availableGeometry().size() - QSize(0, FRAME)
        return QSize(1280, 760).boundedTo(room)

    def _connect(self) -> None:
        document, view = self.desk.document, self.desk.view
        self.rail.chosen.connect(self.show_page)
        document.state_changed.connect(self._say_title)
        document.changed.connect(self._say_title)
        document.replaced.connect(self._show_state)
        view.changed.connect(self._view_changed)
        self.files.opened.connect(self._case_opened)
        self.files.said.connect(self.work.say)
        self.recovery.failed.connect(self.work.say)
        self.finder.found.connect(self._remarks_found)
        document.changed.connect(self._remarks_found)
        self.work.remarks_asked.connect(self.show_remarks)
        self.work.problems_asked.connect(self._to_first_problem)

    # pages

    def _first_page(self) -> None:
        if not self.current:
            self.show_start()

    def show_page(self, key: str) -> None:
        """Show a page, making it first if need be."""
        if key not in self.pages:
            self.pages[key] = self._made(key)
            self.stack.addWidget(self.pages[key])
        came = key != self.current
        if came:
            entry = next((page for page in PAGES if page.key == key), None)
            if entry is None:
                self.explainer.clear()
            else:
                self.explainer.show_page(entry.question, entry.about)
        self.current = key
        self.stack.setCurrentWidget(self.pages[key])
        self.rail.mark(key)
        self._show_explainer()
        if came and self.isVisible():
            target = _first_focusable(self.pages[key])
            if target is not None:  # whoever works by keys goes on from here
                target.setFocus(Qt.FocusReason.ShortcutFocusReason)

    def _made(self, key: str) -> QWidget:
        if key == "start":
            from rescue_planner.desk.pages.start import StartPage

            return StartPage(self.files, self.settings, self.show_known)
        if key == "known":
            from rescue_planner.desk.pages.known import KnownPage

            return KnownPage(self.start_case)
        return next(page for page in PAGES if page.key == key).make(self.desk)

    def show_start(self) -> None:
        """Show the start page, with what has changed on it since."""
        self._forget("start")
        self.show_page("start")

    def show_known(self) -> None:
        """Show the questions of a new case."""
        self._forget("known")
        self.show_page("known")

    def _forget(self, key: str) -> None:
        page = self.pages.pop(key, None)
        if page is not None:
            self.stack.removeWidget(page)
            page.deleteLater()

    def start_case(self, case: object) -> bool:
        """Begin a case that no file holds yet."""
        from rescue_planner.case.document import Case

        if not isinstance(case, Case) or not self.files.may_close():
            return False
        self.desk.problems_shown.clear()
        self.desk.document.new(case)
        self.show_page("compare")
        return True

    def close_case(self) -> None:
        """Close the case, asking about unsaved changes."""
        if self.files.may_close():
            self.recovery.discard()
            self.desk.document.close()
            self.show_start()

    def _case_opened(self) -> None:
        self.show_page("case" if self.current in ("", "start", "known") else self.current)

    def export(self) -> None:
        """Go to the page that exports."""
        self.show_page("compare")
        ask = getattr(self.pages["compare"], "export", None)
        if ask is not None:
            ask()

    # state

    def _say_title(self, _case: object = None) -> None:
        document = self.desk.document
        if not document.has_case:
            self.setWindowTitle(NAME)
        else:
            held = "" if document.path is None else f" — {document.path.name}"
            self.setWindowTitle(f"[*]{document.case.title}{held} — {NAME}")
        self.setWindowModified(document.is_modified)

    def _show_state(self) -> None:
        is_open = self.desk.document.has_case
        self.rail.set_open(is_open)
        self.strip.setVisible(is_open)
        self._show_explainer()
        if not is_open:
            for page in PAGES:
                self._forget(page.key)

    def _show_explainer(self) -> None:
        explained = self.current in {page.key for page in PAGES}
        shown = self.settings.explainer and explained and self.desk.document.has_case
        self.explainer.setVisible(shown)
        self.explainer_rule.setVisible(shown)

    def toggle_explainer(self) -> None:
        """Hide or show the explainer."""
        self.settings.explainer = not self.settings.explainer
        self._show_explainer()
        self.menus.refresh()

    def _scheme(self) -> Scheme:
        if self.settings.scheme in ("light", "dark"):
            return self.settings.scheme  # type: ignore[return-value]
        hints = QApplication.styleHints()
        return "dark" if hints.colorScheme() == Qt.ColorScheme.Dark else "light"

    def choose_scheme(self, scheme: str) -> None:
        """Choose light, dark or the system's."""
        self.settings.scheme = scheme
        self.desk.view.set_scheme(self._scheme())
        self.menus.refresh()

    def resize_text(self, by: int) -> None:
        """Take the next larger or smaller text size."""
        at = TEXT_SCALES.index(self.desk.view.text_scale) + by
        if 0 <= at < len(TEXT_SCALES):
            self.desk.view.set_text_scale(TEXT_SCALES[at])

    def _view_changed(self) -> None:
        view = self.desk.view
        self.settings.text_scale, self.settings.axis = view.text_scale, view.axis
        self._apply_look()
        self._fit_sides()

    def _apply_look(self) -> None:
        app, view = QApplication.instance(), self.desk.view
        if isinstance(app, QApplication) and app.property("look") != (look := _look(view)):
            theme.apply(app, view.scheme, view.text_scale)
            app.setProperty("look", look)

    def _fit_sides(self) -> None:
        scale = self.desk.view.text_scale
        self.rail.setFixedWidth(round(108 * scale) + 8)
        self.explainer.setFixedWidth(round(WIDTH * (0.6 + 0.4 * scale)))

    def _remarks_found(self, _what: object = None) -> None:
        found = self.finder.remarks
        if found is None or not self.desk.document.has_case:
            self.work.say_remarks(None, 0)
            return
        done = answered(self.desk.document.case, found)
        self.work.say_remarks(len(found), len(found) - done)

    def show_remarks(self) -> None:
        """Show the remarks, where each can be answered."""
        found = self.finder.remarks or ()
        dialog = RemarkDialog(self.desk, found, self)
        dialog.exec()
        dialog.deleteLater()
        if dialog.wanted:
            self.go_to(dialog.wanted)

    def _to_first_problem(self) -> None:
        self.go_to(next(iter(self.desk.problems_shown.shown), ""))

    def go_to(self, path: str) -> None:
        """Show the field at `path` of the case, or the first one below it, and focus it."""
        home = "plans" if path.startswith("plans") else "case"
        here = self.pages[self.current]
        if not any(one.property("path") == path for one in here.findChildren(QWidget)):
            self.show_page(home)
        found = [
            one
            for one in self.pages[self.current].findChildren(QWidget)
            if path and str(one.property("path") or "").startswith(path) and not one.isHidden()
        ]
        for field in sorted(found, key=lambda one: one.property("path") != path)[:1]:
            field.setFocus(Qt.FocusReason.ShortcutFocusReason)
            bring_into_view(field)

    def next_region(self) -> None:
        """Move the focus to the next part of the window."""
        regions = [
            one
            for one in (self.strip, self.rail, self.stack, self.explainer, self.work)
            if one.isVisible()
        ]
        focused = QApplication.focusWidget()
        at = next((i for i, one in enumerate(regions) if focused and one.isAncestorOf(focused)), -1)
        for step in range(1, len(regions) + 1):
            target = _first_focusable(regions[(at + step) % len(regions)])
            if target is not None:
                target.setFocus(Qt.FocusReason.TabFocusReason)
                return

    def show_keyboard(self) -> None:
        """List the keys."""
        from rescue_planner.desk.help_dialogs import keyboard_dialog

        keyboard_dialog(self).exec()

    def show_about(self) -> None:
        """Say what this is."""
        from rescue_planner.desk.help_dialogs import about_dialog

        about_dialog(self).exec()

    # events

    def changeEvent(self, event: QEvent) -> None:
        super().changeEvent(event)
        if event.type() == QEvent.Type.ThemeChange and self.settings.scheme == "system":
            self.desk.view.set_scheme(self._scheme())

    def dragEnterEvent(self, event: QDragEnterEvent) -> None:
        if any(url.isLocalFile() for url in event.mimeData().urls()):
            event.acceptProposedAction()

    def dropEvent(self, event: QDropEvent) -> None:
        from pathlib import Path

        for url in event.mimeData().urls():
            if url.isLocalFile():
                self.files.open(Path(url.toLocalFile()))
                return

    def closeEvent(self, event: QCloseEvent) -> None:
        if not self.files.may_close():
            event.ignore()
            return
        self.recovery.discard()
        self.settings.geometry = bytes(self.saveGeometry().toHex().data()).decode()
        self.settings.save()
        self.finder.close()
        self.desk.close()
        event.accept()


def _look(view: object) -> str:
    return f"{view.scheme} {view.text_scale}"  # type: ignore[attr-defined]


def _first_focusable(region: QWidget) -> QWidget | None:
    for one in region.findChildren(QWidget):
        reachable = bool(one.focusPolicy() & Qt.FocusPolicy.TabFocus)
        if reachable and one.isVisible() and one.isEnabled() and one.focusProxy() is None:
            return one
    return None
