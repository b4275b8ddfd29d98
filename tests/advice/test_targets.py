from __future__ import annotations

import csv
import io

import numpy as np
import pytest

from rescue_planner.advice.targets import (
    COLUMNS,
    not_checked,
    target_checks,
    target_checks_csv,
)
from rescue_planner.case.document import Case
from rescue_planner.projection.compare import compare
from rescue_planner.projection.results import Comparison, Series

RAW = {
    "format": "rescue case",
    "version": 1,
    "title": "Marsh shrew",
    "time": {"start_year": 2027, "horizon_years": 21, "generation_years": 0.7},
    "recipient": {
        "name": "Low Marsh",
        "adults": 40,
        "effective_size": 10,
        "gene_diversity": 0.4,
        "reference_gene_diversity": 0.6,
    },
    "loci": [{"name": "scent", "frequency": 0.2}],
    "plans": [{"name": "No releases"}],
}


def _case(*targets: dict) -> Case:
    return Case.model_validate({**RAW, "targets": list(targets)})


def _checks(*targets: dict):
    case = _case(*targets)
    return target_checks(case, compare(case))


def test_that_the_value_is_the_last_reached_by_the_year():
    (check,) = _checks({"measure": "gene_diversity_kept", "at_least": 0.5, "by_year": 2030})
    # 2030 is 3 / 0.7 = 4.28 steps on: t = 4, reached in 2029.8
    assert check.year == pytest.approx(2029.8, abs=1e-9)
    assert check.value == pytest.approx((1 - 1 / 20) ** 4, rel=1e-12)
    assert check.met is True


def test_that_a_year_on_a_step_is_read_at_that_step_in_spite_of_rounding():
    (check,) = _checks({"measure": "gene_diversity_kept", "at_least": 0.5, "by_year": 2048})
    assert check.value == pytest.approx((1 - 1 / 20) ** 30, rel=1e-12)


@pytest.mark.parametrize(
    ("bounds", "met"),
    [
        ({"at_least": 1.0}, True),
        ({"at_least": 1.0000001}, False),
        ({"at_most": 1.0}, True),
        ({"at_most": 0.9999999}, False),
        ({"at_least": 0.9, "at_most": 1.1}, True),
        ({"at_least": 0.5, "at_most": 0.9}, False),
        ({"at_least": 1.1, "at_most": 1.2}, False),
    ],
)
def test_that_bounds_include_their_own_value_and_both_must_hold(bounds, met):
    (check,) = _checks({"measure": "gene_diversity_kept", "by_year": 2027, **bounds})
    assert check.value == 1.0
    assert check.met is met


def test_that_an_allele_is_checked_on_its_share_and_its_frequency_on_both_depths():
    checks = _checks(
        {"measure": "allele_kept:scent", "at_least": 0.9, "by_year": 2048},
        {"measure": "allele_frequency:scent", "at_least": 0.1, "by_year": 2048},
    )
    assert [(c.target, c.depth) for c in checks] == [(1, "exact"), (2, "expected"), (2, "exact")]
    assert checks[0].value < 0.9
    assert checks[0].met is False
    # nothing but drift: the mean stays
    assert checks[2].value == pytest.approx(0.2, abs=1e-12)


def test_that_rows_come_by_target_plan_and_depth_with_the_binding_columns():
    case = _case({"measure": "inbreeding", "at_most": 0.5, "by_year": 2040})
    text = target_checks_csv(target_checks(case, compare(case)))
    rows = list(csv.reader(io.StringIO(text)))
    assert tuple(rows[0]) == COLUMNS
    assert rows[1][:7] == ["1", "inbreeding", "", "0.5", "2040", "No releases", "expected"]
    assert rows[1][9:] == ["no", "", "", "", ""]
    assert "\r" not in text


def test_that_numbers_read_back_the_same():
    (check,) = _checks({"measure": "inbreeding", "at_most": 0.1 + 0.2, "by_year": 2040})
    row = next(csv.DictReader(io.StringIO(target_checks_csv((check,)))))
    assert float(row["value"]) == check.value
    assert float(row["year"]) == check.year
    assert float(row["at_most"]) == 0.1 + 0.2


def test_that_no_number_meets_no_target():
    case = _case({"measure": "inbreeding", "at_most": 0.9, "by_year": 2040})
    whole = compare(case)
    empty = Series("No releases", "expected", "inbreeding", "mean", np.full(31, np.nan))
    fields = {n: getattr(whole, n) for n in Comparison.__dataclass_fields__ if n[0] != "_"}
    (check,) = target_checks(case, Comparison(**{**fields, "series": (empty,)}))
    assert check.met is False


def test_that_a_target_no_depth_computes_is_named_with_the_reason():
    case = _case(
        {"measure": "persists", "at_least": 0.9, "by_year": 2048},
        {"measure": "adults", "at_least": 20, "by_year": 2048},
        {"measure": "inbreeding", "at_most": 0.2, "by_year": 2048},
    )
    comparison = compare(case)
    said = not_checked(case, comparison)
    assert len(said) == 2
    assert said[0].startswith("Target 1 (Persists by 2048)")
    assert "simulated animals" in said[0]
    assert said[1].startswith("Target 2 (Adults by 2048)")
    assert "lacks the inputs" in said[1]
    assert {check.target for check in target_checks(case, comparison)} == {3}


def test_that_no_targets_give_a_file_with_its_head_only():
    case = _case()
    assert target_checks_csv(target_checks(case, compare(case))) == ",".join(COLUMNS) + "\n"
