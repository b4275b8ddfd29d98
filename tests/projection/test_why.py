"""The parts of each step: they add up to the projection, and each is what its name says."""

from __future__ import annotations

import json
from pathlib import Path

import numpy as np
import pytest
from numpy.testing import assert_allclose

from rescue_planner import places
from rescue_planner.case.document import Case
from rescue_planner.projection.compare import compare
from rescue_planner.projection.why import why

SHIPPED = sorted(places.scenarios().glob("*.json"))
LOCUS = {
    "name": "coat",
    "role": "locally adapted",
    "fitness": [1.0, 0.95, 0.7],
    "frequency": 0.8,
    "donor_frequency": {"Mainland": 0.1, "Far shore": 0.3},
    "mutation_to": 0.001,
    "mutation_from": 0.01,
}
PULSE = {
    "name": "Pulse",
    "releases": [
        {"donor": "Mainland", "who": {"females": 4, "males": 2}, "when": {"first_year": 2027}},
        {"donor": "Far shore", "who": {"females": 1, "males": 3}, "when": {"first_year": 2028}},
    ],
}


@pytest.mark.parametrize("path", SHIPPED, ids=lambda path: path.stem)
def test_that_the_parts_of_every_step_of_shipped_cases_add_up(path: Path):
    case = Case.model_validate(json.loads(path.read_text(encoding="utf-8")))
    comparison = compare(case, depths=("expected",))
    for plan in comparison.plans:
        found = why(case, plan)
        h = comparison.get(plan, "expected", "gene_diversity").values
        parts = [one.kept + one.brought - one.lost for one in found.diversity]
        assert_allclose(parts, h[1:], rtol=0, atol=1e-12)
        assert [one.before for one in found.diversity] == h[:-1].tolist()
        for name, steps in found.loci.items():
            p = comparison.get(plan, "expected", f"allele_frequency:{name}").values
            parts = [one.before + one.flow + one.selection + one.mutation for one in steps]
            assert_allclose(parts, p[1:], rtol=0, atol=1e-12)


def test_that_two_donors_bring_what_the_pool_of_pairs_says(build):
    """Written out pair by pair, by hand, for the first step."""
    case = build([PULSE])
    f, m = np.array([4, 1]) / 17, np.array([2, 3]) / 13
    a, b = (f + m) / 2
    r = 1 - a - b
    h, ha, hb = 0.42, 0.64, 0.5
    ra, rb = (h + ha) / 2 / 0.8, (h + hb) / 2 / 0.7
    ab = max((ra + rb) / 2, (ha + hb) / 2)
    (first, *rest) = why(case, "Pulse").diversity
    assert first.kept == pytest.approx(r * r * h, abs=1e-15)
    assert first.brought_by[0] == pytest.approx(2 * a * r * ra + a * a * ha + a * b * ab)
    assert first.brought_by[1] == pytest.approx(2 * b * r * rb + b * b * hb + a * b * ab)
    assert first.brought == pytest.approx(sum(first.brought_by), abs=1e-15)
    assert first.lost == pytest.approx((first.kept + first.brought) / 32, abs=1e-15)
    assert first.newcomers == pytest.approx(a + b, abs=1e-15)
    assert all(one.brought == 0.0 and one.kept == one.before for one in rest)


def test_that_without_releases_only_drift_takes(build):
    for one in why(build(), "No releases").diversity:
        assert (one.brought, one.newcomers, one.effective_size) == (0.0, 0.0, 16.0)
        assert one.lost == pytest.approx(one.before / 32, abs=1e-15)


def test_that_flow_selection_and_mutation_each_get_their_own_change(build):
    case = build([PULSE], loci=[LOCUS])
    first, second, *_ = why(case, "Pulse").loci["coat"]
    a, b = (np.array([4, 1]) / 17 + np.array([2, 3]) / 13) / 2
    mixed = (1 - a - b) * 0.8 + 0.1 * a + 0.3 * b
    q = 1 - mixed
    selected = mixed * (mixed + 0.95 * q) / (mixed**2 + 1.9 * mixed * q + 0.7 * q * q)
    assert first.flow == pytest.approx(mixed - 0.8, abs=1e-15)
    assert first.selection == pytest.approx(selected - mixed, abs=1e-15)
    assert first.mutation == pytest.approx(0.001 * (1 - selected) - 0.01 * selected, abs=1e-15)
    assert second.flow == 0.0
    assert second.before == first.after


def test_that_without_selection_and_mutation_nothing_is_put_down_to_them(build):
    neutral = {**LOCUS, "fitness": [1, 1, 1], "mutation_to": 0, "mutation_from": 0}
    for one in why(build([PULSE], loci=[neutral]), "Pulse").loci["coat"]:
        assert one.mutation == 0.0
        assert abs(one.selection) < 1e-15


def test_that_drifts_spread_is_that_of_the_exact_depth(build):
    case = build(loci=[LOCUS])
    comparison = compare(case)
    sd = comparison.get("No releases", "exact", "allele_frequency:coat", "sd").values
    steps = why(case, "No releases", comparison).loci["coat"]
    assert [one.spread for one in steps] == sd[1:].tolist()
    assert all(one.spread is None for one in why(case, "No releases").loci["coat"])


def test_that_a_neutral_locus_spreads_as_drift_alone_says(build):
    """Wright 1931: Var = p (1-p) (1 - (1 - 1/(2Ne))^t)."""
    neutral = {**LOCUS, "fitness": [1, 1, 1], "mutation_to": 0, "mutation_from": 0}
    case = build(loci=[neutral])
    steps = why(case, "No releases", compare(case)).loci["coat"]
    wanted = np.sqrt(0.16 * (1 - (1 - 1 / 32) ** np.arange(1, 11)))
    assert_allclose([one.spread for one in steps], wanted, rtol=1e-9)


def test_that_a_plan_that_is_not_there_is_refused(build):
    with pytest.raises(KeyError):
        why(build(), "Never")
