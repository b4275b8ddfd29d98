"""Small invented cases, built from a plain dictionary and changed by dotted paths."""

from __future__ import annotations

import copy
from collections.abc import Callable
from typing import Any

import pytest

from rescue_planner.case.document import Case

PLAIN: dict[str, Any] = {
    "format": "rescue case",
    "version": 1,
    "title": "Saltmarsh vole of Ness Holm",
    "time": {"start_year": 2027, "horizon_years": 40, "generation_years": 4},
    "recipient": {
        "name": "Ness Holm",
        "adults": 40,
        "effective_size": 16,
        "gene_diversity": 0.42,
        "reference_gene_diversity": 0.68,
        "breeding_females": 12,
        "breeding_males": 8,
    },
    "donors": [
        {"name": "Mainland", "gene_diversity": 0.64, "fst_to_recipient": 0.2, "adults": 500},
        {"name": "Far shore", "gene_diversity": 0.5, "fst_to_recipient": 0.3, "adults": 90},
    ],
    "plans": [{"name": "No releases"}],
}

LIFE: dict[str, Any] = {
    "first_breeding_age": {"female": 2, "male": 2},
    "last_age": 10,
    "yearly_survival": {"first_year": 0.5, "subadult": 0.75, "adult": 0.85},
    "share_of_females_breeding": 0.8,
    "young_per_breeding_female": {"mean": 2.4},
}

Build = Callable[..., Case]


@pytest.fixture
def build() -> Build:
    """Return a builder: `build(plans=[...], life_cycle=..., recipient={...})`.

    Dictionaries are merged into the plain case, anything else replaces its field; plans are put
    after `No releases`.
    """

    def _build(plans: list[dict[str, Any]] | None = None, **changes: Any) -> Case:
        raw = copy.deepcopy(PLAIN)
        for name, value in changes.items():
            if isinstance(value, dict) and isinstance(raw.get(name), dict):
                raw[name] = {**raw[name], **value}
            else:
                raw[name] = value
        raw["plans"] = [*raw["plans"], *(plans or [])]
        return Case.model_validate(raw)

    return _build


@pytest.fixture
def life() -> dict[str, Any]:
    """Return a life cycle as it stands in a file."""
    return copy.deepcopy(LIFE)
