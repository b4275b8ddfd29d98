"""The first window comes without the heavy libraries; the commands come without Qt."""

from __future__ import annotations

import subprocess
import sys

import pytest

from rescue_planner import __main__ as entry
from rescue_planner import __version__

HEAVY = ("pandas", "numba", "matplotlib", "docx", "scipy", "pyqtgraph", "openpyxl")

FIRST_WINDOW = """
import sys, pathlib
from rescue_planner import places
places.prepare_numerics()
places.user_state = lambda: pathlib.Path(sys.argv[1])
from PySide6.QtWidgets import QApplication
app = QApplication([])
from rescue_planner.desk.window import DeskWindow
painted = []
class Watched(DeskWindow):
    def paintEvent(self, event):
        super().paintEvent(event)
        if not painted:
            painted.append([name for name in sys.argv[2:] if name in sys.modules])
window = Watched()
window.show()
for _ in range(50):
    app.processEvents()
window.files.may_close = lambda: True
window.close()
print("painted with", painted)
print("start page with", [name for name in sys.argv[2:] if name in sys.modules])
"""


def test_that_the_empty_window_loads_nothing_heavy(tmp_path) -> None:
    said = subprocess.run(
        [sys.executable, "-c", FIRST_WINDOW, str(tmp_path), *HEAVY],
        capture_output=True,
        text=True,
        check=True,
    ).stdout
    assert "painted with [[]]" in said
    assert "start page with []" in said


def test_that_commands_import_no_qt() -> None:
    script = (
        "import sys\n"
        "from rescue_planner.__main__ import main\n"
        "code = main(['examples'])\n"
        "assert code == 0, code\n"
        "assert not [m for m in sys.modules if m.startswith(('PySide6', 'pyqtgraph'))]\n"
    )
    done = subprocess.run([sys.executable, "-c", script], capture_output=True, text=True)
    assert (done.returncode, done.stderr) == (0, "")


def test_that_version_and_help_need_no_window(capsys) -> None:
    assert entry.main(["--version"]) == 0
    assert __version__ in capsys.readouterr().out
    assert entry.main(["--help"]) == 0
    assert "rescue-planner" in capsys.readouterr().out


def test_that_a_missing_qt_is_said_in_one_sentence(monkeypatch, capsys) -> None:
    monkeypatch.setattr(entry, "find_spec", lambda _name: None)
    assert entry.main([]) == 1
    said = capsys.readouterr().err
    assert "PySide6" in said
    assert said.count("\n") == 1


def test_that_two_cases_at_a_time_are_refused(capsys) -> None:
    assert entry.main(["a.rescue", "b.rescue"]) == 2
    assert "One case at a time" in capsys.readouterr().err


@pytest.mark.parametrize("name", ["OMP_NUM_THREADS", "OPENBLAS_NUM_THREADS", "MKL_NUM_THREADS"])
def test_that_numeric_libraries_are_held_to_one_thread(monkeypatch, name) -> None:
    import os

    monkeypatch.delenv(name, raising=False)
    entry.main(["--version"])
    assert os.environ[name] == "1"
