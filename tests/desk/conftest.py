"""A desk in a window, a small case, one font, and a state folder of its own for each test."""

from __future__ import annotations

import json
from collections.abc import Callable, Iterator
from pathlib import Path

import matplotlib
import pytest
from PySide6.QtCore import QCoreApplication, QEvent
from PySide6.QtGui import QFont, QFontDatabase
from PySide6.QtWidgets import QApplication

from rescue_planner import places
from rescue_planner.case.document import Case
from rescue_planner.case.problems import read_case
from rescue_planner.desk import theme
from rescue_planner.desk.context import Desk
from rescue_planner.desk.settings import Settings
from rescue_planner.desk.window import DeskWindow

SMALL = {
    "format": "rescue case",
    "version": 1,
    "title": "Two meadows",
    "species": "marsh vole (invented)",
    "time": {"start_year": 2027, "horizon_years": 40, "generation_years": 4},
    "recipient": {
        "name": "Low Meadow",
        "adults": {"best": 40, "low": 34, "high": 49, "origin": "measured", "source": "count"},
        "breeding_females": 12,
        "breeding_males": 6,
        "effective_size": 16,
        "gene_diversity": 0.42,
        "reference_gene_diversity": 0.68,
    },
    "donors": [
        {
            "name": "High Meadow",
            "adults": 900,
            "gene_diversity": 0.66,
            "fst_to_recipient": 0.2,
            "most_removed_per_year": 8,
        }
    ],
    "loci": [
        {
            "name": "winter coat",
            "role": "locally adapted",
            "fitness": [1.0, 0.98, 0.9],
            "frequency": 0.8,
            "donor_frequency": {"High Meadow": 0.1},
        }
    ],
    "inbreeding_cost": {"lethal_equivalents_diploid": {"first_year": 7}},
    "plans": [
        {"name": "No releases"},
        {
            "name": "Pairs",
            "releases": [
                {
                    "donor": "High Meadow",
                    "who": {"females": 2, "males": 2, "age": 1},
                    "when": {"first_year": 2027, "every_years": 4, "times": 3},
                }
            ],
        },
    ],
    "targets": [
        {"measure": "gene_diversity_kept", "at_least": 0.9, "by_year": 2067, "owner": "office"}
    ],
}


USUAL = "light 1.0"  # the look as the window keeps it in mind


@pytest.fixture(scope="session", autouse=True)
def one_font(qapp: QApplication) -> None:
    """Fix the font: what is clipped must not depend on the machine."""
    file = Path(matplotlib.get_data_path()) / "fonts" / "ttf" / "DejaVuSans.ttf"
    QFontDatabase.addApplicationFont(str(file))
    qapp.setFont(QFont("DejaVu Sans"))
    theme.apply(qapp, "light", 1.0)


@pytest.fixture(autouse=True)
def state_folder(tmp_path: Path, monkeypatch: pytest.MonkeyPatch) -> Path:
    """Keep recent files and recovery copies of tests apart from the user's."""
    folder = tmp_path / "state"
    monkeypatch.setattr(places, "user_state", lambda: folder)
    return folder


@pytest.fixture
def small() -> Case:
    return read_case(json.loads(json.dumps(SMALL)))


@pytest.fixture
def small_file(tmp_path: Path) -> Path:
    path = tmp_path / "two meadows.json"
    path.write_text(json.dumps(SMALL), encoding="utf-8")
    return path


@pytest.fixture
def desk(qapp: QApplication) -> Iterator[Desk]:
    """A desk without a window."""
    made = Desk.build()
    yield made
    made.close()


@pytest.fixture
def make_window(qtbot, qapp: QApplication) -> Iterator[Callable[[], DeskWindow]]:
    made: list[DeskWindow] = []

    def make() -> DeskWindow:
        window = DeskWindow(Settings(scheme="light"))
        window.resize(1280, 720)
        qtbot.addWidget(window, before_close_func=_let_go)
        with qtbot.waitExposed(window):
            window.show()
        window.activateWindow()
        qtbot.waitUntil(window.isActiveWindow)
        made.append(window)
        return window

    yield make
    for window in made:
        window.finder.close()
        window.desk.close()
    # pytest-qt has closed them by now; once they are gone, restyling the program costs little
    QCoreApplication.sendPostedEvents(None, QEvent.Type.DeferredDelete.value)
    if qapp.property("look") != USUAL:
        theme.apply(qapp, "light", 1.0)
        qapp.setProperty("look", USUAL)


def _let_go(window: DeskWindow) -> None:
    window.files.may_close = lambda: True  # type: ignore[method-assign]


@pytest.fixture
def window(make_window: Callable[[], DeskWindow], small_file: Path) -> DeskWindow:
    """A window with the small case open on the Case page."""
    made = make_window()
    assert made.files.open(small_file)
    return made
