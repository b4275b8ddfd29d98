"""Draws every page for each shipped case to PNG files, to be looked at.

`python -m rescue_planner.desk.gallery --to FOLDER [--scenario NAME] [--quick]`
"""

from __future__ import annotations

import argparse
import os
import sys
import tempfile
from collections.abc import Callable, Sequence
from functools import partial
from pathlib import Path

from rescue_planner import places

SIZE = (1280, 720)
SETTLE_MS = 120
CASE_SECTIONS = (
    "Recipient", "Donors", "Life cycle", "Inbreeding cost", "Tracked loci", "Trait", "Targets",
)  # fmt: skip


def main(argv: Sequence[str] | None = None) -> int:
    """Draw the gallery and return 0, or 2 where no shipped case has the name asked for."""
    parser = argparse.ArgumentParser(prog="gallery", description="Draw every page to PNG files.")
    parser.add_argument("--to", metavar="FOLDER", type=Path, required=True)
    parser.add_argument("--scenario", metavar="NAME", help="only cases whose file name holds NAME")
    parser.add_argument("--quick", action="store_true", help="light, usual text size only")
    asked = parser.parse_args(argv)
    cases = [
        path
        for path in sorted(places.scenarios().glob("*.json"))
        if asked.scenario is None or asked.scenario in path.stem
    ]
    if not cases:
        sys.stderr.write(f"No shipped case is called “{asked.scenario}”.\n")
        return 2
    os.environ.setdefault("QT_QPA_PLATFORM", "offscreen")
    places.prepare_numerics()
    with tempfile.TemporaryDirectory() as state:
        os.environ["XDG_STATE_HOME"] = state  # the gallery leaves no trace among recent files
        drawn = Gallery(asked.to, quick=asked.quick).draw(cases)
    sys.stdout.write(f"{drawn} pictures in {asked.to}\n")
    return 0


class Gallery:
    """One window, put through its states."""

    def __init__(self, folder: Path, *, quick: bool) -> None:
        from PySide6.QtWidgets import QApplication

        from rescue_planner.desk.settings import Settings
        from rescue_planner.desk.window import DeskWindow

        self._app = QApplication.instance() or QApplication(["gallery"])
        self._folder, self._quick, self._count = folder, quick, 0
        folder.mkdir(parents=True, exist_ok=True)
        self.window = DeskWindow(Settings(scheme="light"))
        self.window.resize(*SIZE)
        self.window.show()
        self._settle()

    def draw(self, cases: Sequence[Path]) -> int:
        """Draw all states; return the number of pictures."""
        self._empty_states()
        for path in cases:
            self.window.files.open_shipped(path)
            self._wait_for_comparison()
            self._looks(partial(self._pages, path.stem))
        self._error_states(cases[0])
        self.window.files.may_close = lambda: True  # type: ignore[method-assign]
        self.window.close()
        return self._count

    def _looks(self, draw: Callable[[str], None]) -> None:
        window = self.window
        draw("light")
        if self._quick:
            return
        window.choose_scheme("dark")
        draw("dark")
        window.choose_scheme("light")
        window.desk.view.set_text_scale(2.0)
        window.resize(*SIZE)
        draw("text-200")
        window.desk.view.set_text_scale(1.0)
        window.resize(*SIZE)

    def _pages(self, name: str, look: str) -> None:
        from rescue_planner.desk.pages.case import CasePage
        from rescue_planner.desk.pages.compare import ComparePage
        from rescue_planner.desk.rail import PAGES

        for page in PAGES:
            self.window.show_page(page.key)
            made = self.window.pages[page.key]
            if isinstance(made, CasePage):
                made.area.verticalScrollBar().setValue(0)
            self._settle()
            self._grab(f"{name}--{page.key}--{look}")
            if isinstance(made, ComparePage):
                made.body.grab().save(str(self._folder / f"{name}--compare-whole--{look}.png"))
                self._count += 1
        case_page = self.window.pages["case"]
        if not isinstance(case_page, CasePage):
            return
        self.window.show_page("case")
        self.window.activateWindow()
        for section in CASE_SECTIONS:
            case_page.go_to(section)
            self._settle()
            self._grab(f"{name}--case-{section.lower().replace(' ', '-')}--{look}")

    def _empty_states(self) -> None:
        from rescue_planner.desk.pages.known import KnownPage

        def start(look: str) -> None:
            self.window.show_start()
            self._settle()
            self._grab(f"empty--start--{look}")

        def known(look: str) -> None:
            self.window.show_known()
            self._settle()
            self._grab(f"empty--known--{look}")
            page = self.window.pages["known"]
            assert isinstance(page, KnownPage)
            for key, words in (("adults", "46"), ("breeding_males", "3"), ("trend", "0,9x")):
                page.questions[key].edit.setText(words)
            self._settle()
            self._grab(f"error--known--{look}")
            page.questions["trend"].edit.setText("0.97")
            self._settle()
            self._grab(f"filled--known--{look}")

        self._looks(start)
        self._looks(known)

    def _error_states(self, path: Path) -> None:
        from rescue_planner.desk.fields import NumberField
        from rescue_planner.desk.pages.case import CasePage

        self._unreadable()
        self.window.files.open_shipped(path)
        self.window.show_page("case")
        self._settle()
        page = self.window.pages["case"]
        assert isinstance(page, CasePage)
        page.go_to("Recipient")
        field = next(
            one for one in page.findChildren(NumberField) if one.path == "recipient.effective_size"
        )
        self.window.activateWindow()
        field.edit.setFocus()
        field.edit.setText("4000")
        field.edit.setModified(True)
        field.commit()
        self._settle()
        self._grab("error--field--light")
        self.window.desk.document.undo_stack.clear()

    def _unreadable(self) -> None:
        from PySide6.QtCore import QTimer
        from PySide6.QtWidgets import QApplication, QMessageBox

        broken = self._folder / "broken.rescue"
        broken.write_bytes(b"PK\x03\x04 cut off")

        def look() -> None:
            box = QApplication.activeModalWidget()
            if isinstance(box, QMessageBox):
                box.grab().save(str(self._folder / "error--unreadable-file--light.png"))
                self._count += 1
                box.reject()

        QTimer.singleShot(SETTLE_MS, look)
        self.window.files.open(broken)
        broken.unlink()

    def _wait_for_comparison(self) -> None:
        from PySide6.QtTest import QTest

        live = self.window.desk.live
        for _ in range(600):
            if live.comparison is not None and not live.runner.is_running:
                break
            QTest.qWait(20)
        QTest.qWait(700)  # remarks come a moment later

    def _settle(self) -> None:
        from PySide6.QtTest import QTest

        QTest.qWait(SETTLE_MS)

    def _grab(self, name: str) -> None:
        self.window.grab().save(str(self._folder / f"{name}.png"))
        self._count += 1


if __name__ == "__main__":
    raise SystemExit(main())
