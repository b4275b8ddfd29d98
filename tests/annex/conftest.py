"""The sample case, projected and written once for all tests of this room."""

from __future__ import annotations

import importlib.util
from datetime import UTC, datetime
from pathlib import Path
from types import ModuleType

import pytest

from rescue_planner.annex.export import Written, write_run
from rescue_planner.case.document import Case
from rescue_planner.projection.compare import compare
from rescue_planner.projection.remarks import every_remark
from rescue_planner.projection.results import Comparison

STARTED = datetime(2027, 1, 5, 9, 30, tzinfo=UTC)


def _sample() -> ModuleType:
    path = Path(__file__).with_name("sample.py")
    spec = importlib.util.spec_from_file_location("annex_sample", path)
    assert spec is not None
    assert spec.loader is not None
    module = importlib.util.module_from_spec(spec)
    spec.loader.exec_module(module)
    return module


@pytest.fixture(scope="session")
def sample() -> ModuleType:
    """The module that holds the invented case."""
    return _sample()


@pytest.fixture(scope="session")
def case(sample: ModuleType) -> Case:
    """The invented case."""
    found: Case = sample.case()
    return found


@pytest.fixture(scope="session")
def comparison(case: Case) -> Comparison:
    """Its plans, projected."""
    return compare(case)


@pytest.fixture(scope="session")
def written(
    case: Case, comparison: Comparison, tmp_path_factory: pytest.TempPathFactory
) -> Written:
    """A whole run of it, written once."""
    folder = tmp_path_factory.mktemp("runs") / "a run"
    return write_run(case, comparison, folder, remarks=every_remark(case), started=STARTED)
