"""Charts of one invented case."""

from __future__ import annotations

import json
from collections.abc import Callable, Iterator
from pathlib import Path
from typing import Any

import pytest

from rescue_planner.case.document import Case
from rescue_planner.case.problems import read_case
from rescue_planner.desk.charts.look import Look
from rescue_planner.desk.charts.multiples import SmallMultiples
from rescue_planner.desk.charts.shown import Shown, specs
from rescue_planner.projection.compare import compare
from rescue_planner.projection.results import Comparison

MARSH = Path(__file__).parents[2] / "projection" / "marsh.json"
KEYS = ("relative_first_year_survival", "gene_diversity_kept", "inbreeding", "adults", "cost")


@pytest.fixture
def marsh() -> Callable[..., Case]:
    """Return a builder of the case, parts replaced."""

    def build(**changes: Any) -> Case:
        return read_case({**json.loads(MARSH.read_text(encoding="utf-8")), **changes})

    return build


@pytest.fixture
def case(marsh: Callable[..., Case]) -> Case:
    return marsh()


@pytest.fixture
def comparison(case: Case) -> Comparison:
    return compare(case)


@pytest.fixture
def charts(qtbot) -> Iterator[SmallMultiples]:
    made = SmallMultiples("Charts")
    qtbot.addWidget(made)
    made.resize(900, 600)
    with qtbot.waitExposed(made):
        made.show()
    return made


@pytest.fixture
def draw(
    charts: SmallMultiples, case: Case, comparison: Comparison
) -> Callable[..., SmallMultiples]:
    """Return a function that draws now; keyword arguments replace parts of what is shown."""

    def _draw(**changes: Any) -> SmallMultiples:
        given = {
            "comparison": comparison,
            "case": case,
            "plans": comparison.plans,
            "specs": specs(KEYS),
            "strong": None,
            "look": Look(),
        }
        charts.show_all(Shown(**{**given, **changes}))
        charts.flush()
        return charts

    return _draw
