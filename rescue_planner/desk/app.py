"""Starts the desk: application, window, crash hook, event loop."""

from __future__ import annotations

import sys
from pathlib import Path

from PySide6.QtCore import Qt, QTimer
from PySide6.QtWidgets import QApplication, QDialog, QDialogButtonBox, QPlainTextEdit, QVBoxLayout

from rescue_planner import __version__
from rescue_planner.desk import theme
from rescue_planner.desk.kernels import KernelLoader
from rescue_planner.desk.recovery import crash_hook
from rescue_planner.desk.widgets import text
from rescue_planner.desk.window import NAME, DeskWindow


def open_desk(case: Path | None = None, arguments: list[str] | None = None) -> int:
    """Run the desk until it is closed; return the exit code."""
    app = QApplication.instance()
    if not isinstance(app, QApplication):
        app = QApplication(arguments or [NAME])
    app.setApplicationName("rescue-planner")
    app.setApplicationDisplayName(NAME)
    app.setApplicationVersion(__version__)
    window = DeskWindow()
    sys.excepthook = crash_hook(window.recovery, lambda report: tell_defect(window, report))
    kernels = KernelLoader(window)
    window.show()
    QTimer.singleShot(0, kernels.start)
    if case is not None:
        QTimer.singleShot(0, lambda: window.files.open(case))
    code = app.exec()
    kernels.close()
    return code


def tell_defect(window: DeskWindow, report: str) -> None:
    """Show a report that can be copied; the program goes on."""
    dialog = QDialog(window)
    dialog.setWindowTitle("Something went wrong in the program")
    dialog.setAttribute(Qt.WidgetAttribute.WA_DeleteOnClose)
    dialog.resize(680, 420)
    column = QVBoxLayout(dialog)
    column.setContentsMargins(*[theme.UNIT * 2] * 4)
    column.addWidget(
        text(
            "This is a defect of the program, not a mistake of yours. A recovery copy of the case "
            "has been written. Save the case, and pass the report below on to those who look "
            "after the program."
        )
    )
    shown = QPlainTextEdit(report)
    shown.setReadOnly(True)
    shown.setAccessibleName("Report of the defect")
    column.addWidget(shown, 1)
    buttons = QDialogButtonBox(QDialogButtonBox.StandardButton.Close)
    copy = buttons.addButton("Copy the report", QDialogButtonBox.ButtonRole.ActionRole)
    copy.clicked.connect(lambda: QApplication.clipboard().setText(report))
    buttons.rejected.connect(dialog.reject)
    column.addWidget(buttons)
    dialog.show()
