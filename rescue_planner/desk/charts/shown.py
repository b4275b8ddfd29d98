"""Which charts are shown, and of what."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass

from rescue_planner.case.document import Case
from rescue_planner.desk.charts.look import Look
from rescue_planner.projection.results import Comparison

NORMAL = Look()


@dataclass(frozen=True, slots=True)
class PanelSpec:
    """Which chart: a measure, and the plan whose bands are drawn in it."""

    key: str
    fan_of: str | None = None


@dataclass(frozen=True, slots=True, eq=False)
class Shown:
    """All that the charts are drawn from."""

    comparison: Comparison
    case: Case
    plans: tuple[str, ...]
    specs: tuple[PanelSpec, ...]
    strong: str | None = None
    look: Look = NORMAL


def specs(keys: Sequence[str], fans: Sequence[str] = ()) -> tuple[PanelSpec, ...]:
    """Return a panel for each measure; a tracked locus gets one with bands for each plan."""
    found: list[PanelSpec] = []
    for key in keys:
        if key.startswith("allele_frequency:") and fans:
            found.extend(PanelSpec(key, plan) for plan in fans)
        else:
            found.append(PanelSpec(key))
    return tuple(found)
