"""What the explainer says of a measure, checked without widgets."""

from __future__ import annotations

import pytest

from rescue_planner.case.edits import set_value
from rescue_planner.case.measures import keys
from rescue_planner.desk.case_page.living import _new_life
from rescue_planner.desk.measure_words import COUNTED, measure_words
from rescue_planner.projection.compare import compare


@pytest.fixture
def comparison(small):
    return compare(small)


def test_that_the_depth_and_what_it_leaves_out_are_told(small, comparison) -> None:
    assert measure_words(small, comparison, "inbreeding").depth.startswith(
        "Average course. Ne is held at 16"
    )
    assert measure_words(small, comparison, "allele_kept:winter coat").depth.startswith(
        "One-locus odds. Ne is held at 16"
    )


def test_that_a_target_is_told_with_its_owner_and_year(small, comparison) -> None:
    assert measure_words(small, comparison, "gene_diversity_kept").targets == (
        "Target: ≥ 90, office, by 2067."
    )
    assert measure_words(small, comparison, "inbreeding").targets == ""


def test_that_every_measure_of_genetics_that_is_computed_names_its_source(small) -> None:
    case = set_value(_new_life(small).case, "trait", {"heritability": 0.3}).case
    shown = [key for key in keys(case) if key in compare(case).measures]
    unsourced = {key for key in shown if COUNTED in measure_words(case, None, key).source}
    assert unsourced == {"released", "cost"}


def test_that_without_a_case_only_the_source_is_told() -> None:
    told = measure_words(None, None, "inbreeding")
    assert (told.depth, told.targets) == ("", "")
    assert told.source.startswith("Source: Wright 1931")
