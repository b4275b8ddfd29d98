"""Help: the keys, and what this program is."""

from __future__ import annotations

from PySide6.QtCore import Qt
from PySide6.QtWidgets import QDialog, QDialogButtonBox, QGridLayout, QVBoxLayout, QWidget

from rescue_planner import __version__
from rescue_planner.desk import theme
from rescue_planner.desk.help_keys import KEYS
from rescue_planner.desk.widgets import scrolled, text
from rescue_planner.desk.work_strip import CAUTION


def _dialog(parent: QWidget, title: str, inner: QWidget) -> QDialog:
    dialog = QDialog(parent)
    dialog.setWindowTitle(title)
    outer = QVBoxLayout(dialog)
    outer.setContentsMargins(*[theme.UNIT * 3] * 4)
    outer.setSpacing(theme.UNIT * 2)
    outer.addWidget(text(title, "title"))
    outer.addWidget(scrolled(inner, reachable=True), 1)
    buttons = QDialogButtonBox(QDialogButtonBox.StandardButton.Close)
    buttons.rejected.connect(dialog.reject)
    outer.addWidget(buttons)
    dialog.setAttribute(Qt.WidgetAttribute.WA_DeleteOnClose)
    return dialog


def keyboard_dialog(parent: QWidget) -> QDialog:
    """Return the list of keys."""
    inner = QWidget()
    grid = QGridLayout(inner)
    grid.setHorizontalSpacing(theme.UNIT * 3)
    for row, (keys, what) in enumerate(KEYS):
        grid.addWidget(text(keys, "section"), row, 0)
        grid.addWidget(text(what), row, 1)
    grid.setColumnStretch(0, 1)
    grid.setColumnStretch(1, 1)
    dialog = _dialog(parent, "Keyboard", inner)
    dialog.resize(760, 620)
    return dialog


def about_dialog(parent: QWidget) -> QDialog:
    """Return the words about the program."""
    inner = QWidget()
    column = QVBoxLayout(inner)
    column.setSpacing(theme.UNIT)
    for words in (
        f"Version {__version__}. Plans the genetic rescue of a small, isolated, inbred "
        "population: what each plan buys and what it costs.",
        CAUTION,
        "Compare plans with one another. Do not read a single line as a forecast of what will "
        "happen.",
        "Moving, holding or releasing animals may need several approvals. Ask the competent "
        "authority before any step.",
        "Disease risk is not assessed by this projection. A disease risk analysis led by "
        "qualified veterinarians is needed and may rule out a plan.",
        "Consent of the indigenous peoples concerned is sought early, freely and with full "
        "information. No plan here presumes it.",
        "The program works offline and sends nothing anywhere.",
    ):
        column.addWidget(text(words))
    column.addStretch(1)
    dialog = _dialog(parent, "About Rescue Planner", inner)
    dialog.resize(560, 460)
    return dialog
