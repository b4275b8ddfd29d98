"""The screen of a donor: three classes with reasons; unknown never counts as safe."""

from __future__ import annotations

import itertools

import pytest

from rescue_planner.case.population import Donor
from rescue_planner.case.screening import UNKNOWN_IS_NOT_LOW, screening

CLEAN = {
    "same_species": "yes",
    "fixed_chromosome_differences": "no",
    "years_apart": 80,
    "environment_differs": "no",
}
ANSWERS = {
    "same_species": ("yes", "no", "unknown", None),
    "fixed_chromosome_differences": ("no", "yes", "unknown", None),
    "years_apart": (80, 700, None),
    "environment_differs": ("no", "some", "much", "unknown", None),
}
RAISING = {("same_species", "no"), ("fixed_chromosome_differences", "yes"),
           ("years_apart", 700), ("environment_differs", "much")}  # fmt: skip


def _screening(**answers):
    given = {name: held for name, held in answers.items() if held is not None}
    return screening(
        Donor.model_validate(
            {"name": "North", "gene_diversity": 0.6, "fst_to_recipient": 0.1, "screen": given}
        )
    )


def test_that_all_answers_speaking_for_low_are_low() -> None:
    found = _screening(**CLEAN)
    assert found.risk == "low"
    assert UNKNOWN_IS_NOT_LOW not in found.cautions
    assert any("does not mean none" in words for words in found.cautions)


def test_that_every_combination_of_answers_falls_into_the_published_class() -> None:
    # Frankham et al. 2011: elevated if at least one criterion holds, low only if all speak for it
    for held in itertools.product(*ANSWERS.values()):
        answers = dict(zip(ANSWERS, held, strict=True))
        if RAISING & set(answers.items()):
            expected = "elevated"
        else:
            expected = "low" if answers == CLEAN else "cannot say"
        assert _screening(**answers).risk == expected, answers


@pytest.mark.parametrize("name", CLEAN)
def test_that_one_unanswered_question_is_never_low(name) -> None:
    found = _screening(**{**CLEAN, name: None})
    assert found.risk == "cannot say"
    assert UNKNOWN_IS_NOT_LOW in found.cautions
    assert [finding.state for finding in found.findings].count("unknown") == 1


def test_that_a_donor_without_a_screen_cannot_be_classed() -> None:
    donor = Donor.model_validate({"name": "N", "gene_diversity": 0.6, "fst_to_recipient": 0.1})
    assert screening(donor).risk == "cannot say"
    assert all(finding.answer == "not answered" for finding in screening(donor).findings)


def test_that_just_500_years_without_exchange_raise_the_risk() -> None:
    assert _screening(**{**CLEAN, "years_apart": 500}).risk == "elevated"
    assert _screening(**{**CLEAN, "years_apart": 499}).risk == "low"


def test_that_a_range_of_years_past_500_is_not_low() -> None:
    apart = {"best": 300, "low": 100, "high": 900}
    assert _screening(**{**CLEAN, "years_apart": apart}).risk == "cannot say"


def test_that_no_screen_gives_a_probability() -> None:
    for held in itertools.product(*ANSWERS.values()):
        found = _screening(**dict(zip(ANSWERS, held, strict=True)))
        words = " ".join([found.sentence, *(f.reason for f in found.findings)])
        assert "%" not in words
        assert "probab" not in words


def test_that_generations_apart_are_told_beside_a_different_place() -> None:
    found = _screening(**{**CLEAN, "environment_differs": "much", "generations_apart": 8})
    assert found.risk == "elevated"
    assert "8 generations apart, fewer than about 20" in found.findings[3].reason


def test_that_the_sentence_names_what_it_rests_on() -> None:
    found = _screening(**{**CLEAN, "same_species": "no", "years_apart": 700})
    assert found.sentence.endswith("elevated, because of species and years apart.")
