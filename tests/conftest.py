"""One screen, no network, the same random examples each time."""

from __future__ import annotations

import atexit
import json
import os
import shutil
import tempfile
from pathlib import Path

import pytest
from hypothesis import settings
from pytest_socket import disable_socket

# Offscreen, the default screen is 800 by 800 and clamps windows and menus.
_SCREEN = {
    "screens": [
        {
            "name": "test",
            "x": 0,
            "y": 0,
            "width": 1920,
            "height": 1200,
            "logicalDpi": 96,
            "logicalBaseDpi": 96,
            "dpr": 1,
        }
    ]
}

settings.register_profile("repeatable", derandomize=True, deadline=None)
settings.load_profile("repeatable")


def _use_test_screen() -> None:
    if os.environ.get("QT_QPA_PLATFORM", "offscreen") != "offscreen":
        return  # somebody wants to see the windows
    folder = Path(tempfile.mkdtemp(prefix="rescue-planner-screen-"))
    atexit.register(shutil.rmtree, folder, ignore_errors=True)
    file = folder / "screen.json"
    file.write_text(json.dumps(_SCREEN), encoding="utf-8")
    os.environ["QT_QPA_PLATFORM"] = f"offscreen:configfile={file}"


_use_test_screen()


@pytest.hookimpl(tryfirst=True)
def pytest_runtest_setup() -> None:
    """Block the network; local sockets, which child processes talk through, stay allowed."""
    disable_socket(allow_unix_socket=True)
