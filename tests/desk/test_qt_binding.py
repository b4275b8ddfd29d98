"""The binding must not lose references to None (one release did, on Python 3.11)."""

from __future__ import annotations

import sys

from PySide6.QtCore import QObject, QTimer
from PySide6.QtWidgets import QWidget

CALLS = 2000


def _lost(call) -> int:
    call()
    before = sys.getrefcount(None)
    for _ in range(CALLS):
        call()
    return before - sys.getrefcount(None)


def test_that_a_method_that_returns_nothing_loses_no_reference(qtbot) -> None:
    widget, timer, plain = QWidget(), QTimer(), QObject()
    qtbot.addWidget(widget)
    # a binding that drops one a call would lose 2,000; chance changes of other threads are few
    assert _lost(widget.update) < CALLS / 10
    assert _lost(timer.stop) < CALLS / 10
    assert _lost(lambda: plain.setObjectName("x")) < CALLS / 10
