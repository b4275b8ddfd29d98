"""The run record: what was computed, with what, from what, and which files hold it."""

from __future__ import annotations

import json
import os
import platform
from collections.abc import Mapping, Sequence
from dataclasses import dataclass
from datetime import UTC, datetime
from importlib.metadata import PackageNotFoundError, version
from typing import Any

from rescue_planner.advice.targets import not_checked
from rescue_planner.case.document import Case, WhatIf
from rescue_planner.case.raw import to_raw
from rescue_planner.case.remarks import Remark, answer_to
from rescue_planner.projection.results import Comparison

LIBRARIES = (
    "numpy",
    "scipy",
    "pandas",
    "numba",
    "pydantic",
    "matplotlib",
    "python-docx",
    "fonttools",
    "pillow",
)


@dataclass(frozen=True, slots=True)
class Occasion:
    """When a run began and ended (UTC), and how long it took in seconds."""

    started: datetime
    finished: datetime

    @property
    def seconds(self) -> float:
        """Seconds from start to end."""
        return (self.finished - self.started).total_seconds()


def versions() -> dict[str, str]:
    """Return the versions of Python and of the libraries that a result depends on."""
    found = {"python": platform.python_version()}
    for name in LIBRARIES:
        try:
            found[name] = version(name)
        except PackageNotFoundError:
            found[name] = "not installed"
    return found


def machine() -> dict[str, Any]:
    """Return what kind of machine this is; no name of a host, user or folder."""
    return {
        "system": platform.system(),
        "release": platform.release(),
        "architecture": platform.machine(),
        "processors": os.cpu_count(),
    }


def remark_rows(case: Case, remarks: Sequence[Remark]) -> list[dict[str, Any]]:
    """Return each remark with its answer, or nothing where none was given."""
    rows = []
    for remark in remarks:
        answer = answer_to(case, remark)
        rows.append(
            {
                "key": remark.key,
                "path": remark.path,
                "text": remark.text,
                "answer": None
                if answer is None
                else {"reason": answer.reason, "by": answer.by, "date": answer.date},
            }
        )
    return rows


def what_if_of(case: Case, name: str | None) -> WhatIf | None:
    """Return the what-if that was in force, as the case defines it."""
    return next((one for one in case.what_ifs if one.name == name), None)


def record_text(
    case: Case,
    comparison: Comparison,
    remarks: Sequence[Remark],
    occasion: Occasion,
    files: Mapping[str, str],
) -> str:
    """Return record.json.

    Parameters
    ----------
    files : mapping from a file's name in the folder to its SHA-256
    """
    record = {
        "format": "rescue run record",
        "version": 1,
        "program": {"name": "Rescue Planner", "version": comparison.program_version},
        "versions": versions(),
        "case": {
            "title": case.title,
            "hash": comparison.case_hash,
            "key": comparison.key,
            "what_if": _what_if(case, comparison),
            "seed": comparison.seed,
            "replicates": _replicates(case, comparison),
            "plans": list(comparison.plans),
            "depths": list(comparison.depths),
            "measures": list(comparison.measures),
            "start_year": comparison.start_year,
            "generation_years": comparison.generation_years,
            "steps": comparison.years.size - 1,
        },
        "machine": machine(),
        "started": _time(occasion.started),
        "finished": _time(occasion.finished),
        "seconds": round(occasion.seconds, 3),
        "remarks": remark_rows(case, remarks),
        "rule_events": [
            {
                "plan": event.plan,
                "rule": event.rule,
                "t": event.t,
                "year": event.year,
                "sentence": event.sentence,
            }
            for event in comparison.events
        ],
        "rules_not_applied": list(comparison.not_applied),
        "first_year_survival_capped_under": list(comparison.capped),
        "targets_not_checked": list(not_checked(case, comparison)),
        "files": dict(files),
    }
    return json.dumps(record, ensure_ascii=False, indent=2) + "\n"


def _what_if(case: Case, comparison: Comparison) -> dict[str, Any] | None:
    if comparison.what_if is None:
        return None
    found = what_if_of(case, comparison.what_if)
    if found is None:
        return {"name": comparison.what_if}
    raw = to_raw(case)["what_ifs"][case.what_ifs.index(found)]
    return dict(raw)


def _replicates(case: Case, comparison: Comparison) -> int | None:
    return int(case.run.replicates.best) if "simulated" in comparison.depths else None


def _time(moment: datetime) -> str:
    return moment.astimezone(UTC).isoformat(timespec="milliseconds").replace("+00:00", "Z")
