"""Lines beside the fields, checked without widgets."""

from __future__ import annotations

from rescue_planner import places
from rescue_planner.annex.inputs import input_rows
from rescue_planner.case.edits import set_source, set_value
from rescue_planner.case.file import load
from rescue_planner.case.paths import parse_path
from rescue_planner.desk.evidence import (
    KINDS,
    PARTS,
    evidence,
    generations_in_words,
    inbreeding_cost_in_words,
    lethal_source_in_words,
    ratio_in_words,
    screen_cautions,
    screen_class,
    screen_in_words,
    tally,
    tally_in_words,
    target_in_words,
)


def test_that_numbers_are_counted_by_origin(small) -> None:
    # three of the time; adults, two breeders, Ne, two diversities; four of the donor; 3 + 1 + 1 of
    # the locus; B
    assert evidence(small) == {"measured": 1, "borrowed": 0, "guessed": 0, "not stated": 18}
    assert tally_in_words(small, "Recipient") == (
        "1 measured  ·  0 borrowed  ·  0 guessed  ·  5 not stated"
    )
    assert tally_in_words(small, "Life cycle") == ""
    assert tally_in_words(small, "Decision") == ""


def test_that_each_tally_is_the_count_in_the_inputs_table_of_the_annex() -> None:
    cases = sorted(places.scenarios().glob("*.json"))
    assert len(cases) >= 4
    for path in cases:
        case = load(path).case
        for section, part in PARTS.items():
            rows = [row for row in input_rows(case) if parse_path(row.path)[0] == part]
            printed = {kind: sum(row.origin == kind for row in rows) for kind in KINDS}
            assert tally(case, section) == printed, (path.stem, section)
        assert sum(evidence(case).values()) > 0


def test_that_effective_size_and_census_stand_side_by_side(small) -> None:
    assert ratio_in_words(small) == (
        "Ne is 0.40 of the adults counted.  Inbreeding today: F = 1 − 0.42/0.68 = 0.38."
    )


def test_that_fifty_years_of_four_are_twelve_and_a_half_generations(small) -> None:
    case = set_value(small, "time.horizon_years", 50).case
    assert generations_in_words(case) == "2027 to 2077: 50 years are 12.5 generations."


def test_that_seven_diploid_are_three_and_a_half_haploid(small) -> None:
    # exp(-3.5 * 0.125) = 0.646 and exp(-3.5 * 0.25) = 0.417 (Morton, Crow & Muller 1956)
    assert inbreeding_cost_in_words(small).startswith(
        "7 diploid (3.5 haploid) in the first year: young of half sibs (F = 0.125) survive 65 %, "
        "of full sibs (F = 0.25) 42 % as well as outbred young."
    )


def test_that_the_source_of_lethal_equivalents_is_echoed(small) -> None:
    assert lethal_source_in_words(small) == "Not stated; source: not stated."
    path = "inbreeding_cost.lethal_equivalents_diploid.first_year"
    about = {"origin": "borrowed", "source": "Report 12; covers survival to maturity"}
    stated = set_source(small, path, **about).case
    assert lethal_source_in_words(stated) == (
        "Borrowed; source: Report 12; covers survival to maturity."
    )


def test_that_an_unanswered_screen_is_not_called_low(small) -> None:
    words = screen_in_words(small.donors[0])
    assert screen_class(small.donors[0]).startswith("Risk of harm by mixing: cannot say")
    assert words.count("unknown;") == 4
    assert "Unknown is not low" in screen_cautions(small.donors[0])


def test_that_answers_that_raise_the_risk_are_named(small) -> None:
    raised = set_value(
        small,
        "donors[0].screen",
        {
            "same_species": "yes",
            "fixed_chromosome_differences": "yes",
            "years_apart": 700,
            "environment_differs": "much",
        },
    ).case
    words = screen_in_words(raised.donors[0])
    assert "Chromosomes: fixed differences – raises the risk" in words
    assert "Years apart: 700 years – raises the risk; no exchange within 500 years" in words
    assert "Environment: very different – raises the risk" in words


def test_that_a_clean_screen_is_still_no_proof(small) -> None:
    clean = set_value(
        small,
        "donors[0].screen",
        {
            "same_species": "yes",
            "fixed_chromosome_differences": "no",
            "years_apart": 80,
            "environment_differs": "no",
        },
    ).case
    assert "mixing: low, as far as these four questions tell" in screen_class(clean.donors[0])
    assert "Low does not mean none" in screen_cautions(clean.donors[0])


def test_that_a_target_typed_as_a_share_is_told_in_the_per_cent_of_its_chart(small) -> None:
    assert target_in_words(small, 0) == (
        "Wanted: Gene diversity kept at least 90 % of today’s in 2067."
    )
    both = set_value(small, "targets[0].at_most", 1.2).case
    assert "at least 90 % of today’s and at most 120 % of today’s" in target_in_words(both, 0)
    assert target_in_words(small, 1) == ""
