"""A first case from what is known."""

from __future__ import annotations

import math

import pytest
from hypothesis import given
from hypothesis import strategies as st

from rescue_planner.case.faults import InvalidCase
from rescue_planner.case.known import Known, draft
from rescue_planner.case.problems import read_case
from rescue_planner.case.raw import to_raw


def test_that_three_males_and_twenty_females_give_an_effective_size_of_10_4() -> None:
    made = draft(Known(46, 2027, breeding_females=20, breeding_males=3))
    assert made.case.recipient.effective_size.best == 10.4  # 240 / 23 = 10.43, to three digits
    assert any("4 · 3 · 20 / 23 = 10.4" in words for words in made.workings)


def test_that_a_new_case_says_who_is_counted() -> None:
    counted = draft(Known(46, 2027)).case.recipient.who_is_counted
    assert counted == "adults alive at one time, before breeding"


def test_that_unknown_breeders_borrow_a_tenth_to_a_fifth_of_the_adults() -> None:
    size = draft(Known(40, 2027)).case.recipient.effective_size
    assert (size.low, size.best, size.high) == (4.0, 6.0, 8.0)
    assert size.origin == "borrowed"
    assert "Frankham 1995" in (size.source or "")


def test_that_gene_diversity_follows_from_isolation() -> None:
    known = Known(
        46,
        2027,
        breeding_females=20,
        breeding_males=3,
        generation_years=5,
        years_isolated=50,
        reference_gene_diversity=0.68,
    )
    held = draft(known).case.recipient.gene_diversity
    # H_ref (1 - 1/(2 Ne))^(years / T) by hand: Ne 10.4, ten generations
    by_hand = 0.68 * math.exp(10 * math.log1p(-1 / 20.8))
    assert held.best == pytest.approx(by_hand, abs=5e-4)  # three digits are kept
    assert held.origin == "guessed"


def test_that_an_unknown_reference_is_worked_back_from_isolation_where_that_is_known() -> None:
    known = Known(40, 2027, gene_diversity=0.3, years_isolated=25, generation_years=5)
    held = draft(known).case.recipient.reference_gene_diversity
    assert held.best == pytest.approx(0.3 / (1 - 1 / 12) ** 5, abs=5e-4)
    assert held.origin == "guessed"


def test_that_a_borrowed_reference_is_never_below_what_is_here_today() -> None:
    held = draft(Known(40, 2027, gene_diversity=0.75)).case.recipient.reference_gene_diversity
    assert held.best >= 0.75
    assert held.origin == "borrowed"
    assert "Garner" in (held.source or "")


def test_that_no_donor_is_needed() -> None:
    made = draft(Known(40, 2027))
    assert made.case.donors == ()
    assert [plan.name for plan in made.case.plans] == ["No releases"]


def test_that_a_donor_of_unknown_distance_gets_a_marked_guess() -> None:
    donor = draft(Known(40, 2027, donor="North", years_isolated=30)).case.donors[0]
    assert donor.fst_to_recipient.origin == "guessed"
    assert donor.fst_to_recipient.spread is not None
    assert donor.gene_diversity.origin == "guessed"


def test_that_what_is_known_stands_in_the_case_as_it_was_given() -> None:
    known = Known(
        46,
        2027,
        breeding_females=20,
        breeding_males=3,
        generation_years=5,
        trend=0.97,
        years_isolated=60,
        gene_diversity=0.44,
        reference_gene_diversity=0.7,
        donor="North",
        donor_fst=0.2,
        donor_gene_diversity=0.66,
    )
    case = draft(known).case
    recipient, donor = case.recipient, case.donors[0]
    assert recipient.gene_diversity.best == 0.44
    assert recipient.reference_gene_diversity.best == 0.7
    assert recipient.yearly_trend is not None
    assert recipient.yearly_trend.best == 0.97
    assert recipient.isolated_since is not None
    assert recipient.isolated_since.best == 1967
    assert (donor.fst_to_recipient.best, donor.gene_diversity.best) == (0.2, 0.66)
    assert case.time.generation_years.best == 5


def test_that_every_value_that_was_not_given_says_where_it_comes_from() -> None:
    raw = to_raw(draft(Known(40, 2027, donor="North")).case)
    worked_out = [
        raw["time"]["generation_years"],
        raw["recipient"]["effective_size"],
        raw["recipient"]["gene_diversity"],
        raw["recipient"]["reference_gene_diversity"],
        raw["donors"][0]["gene_diversity"],
        raw["donors"][0]["fst_to_recipient"],
        raw["inbreeding_cost"]["lethal_equivalents_diploid"]["first_year"],
    ]
    assert all(held["origin"] in ("borrowed", "guessed") for held in worked_out)
    assert all(held["source"] for held in worked_out)


def test_that_seven_diploid_lethal_equivalents_leave_42_percent_at_a_quarter() -> None:
    # exp(-7/2 * 0.25) = 0.417: Morton, Crow & Muller 1956
    assert any("survive 42 % as well" in words for words in draft(Known(40, 2027)).workings)


def test_that_a_larger_animal_is_guessed_to_have_longer_generations() -> None:
    lengths = [
        draft(Known(40, 2027, body=body)).case.time.generation_years.best
        for body in ("small", "medium", "large")
    ]
    assert lengths == sorted(lengths)
    assert len(set(lengths)) == 3


def test_that_no_adults_are_refused_with_a_sentence() -> None:
    with pytest.raises(InvalidCase) as wrong:
        draft(Known(0, 2027))
    assert any(problem.path == "recipient.adults" for problem in wrong.value.problems)


def test_that_no_breeding_male_is_refused() -> None:
    with pytest.raises(InvalidCase) as wrong:
        draft(Known(40, 2027, breeding_females=10, breeding_males=0))
    assert any("breeding_males" in problem.path for problem in wrong.value.problems)


share = st.floats(0.01, 0.99)


numbers = st.floats(1, 500)
answers = st.fixed_dictionaries(
    {"adults": st.floats(2, 5000), "start_year": st.just(2027)},
    optional={
        "breeding_females": numbers,
        "breeding_males": numbers,
        "generation_years": st.floats(0.5, 40),
        "years_isolated": st.floats(0, 300),
        "gene_diversity": share,
        "reference_gene_diversity": share,
        "donor": st.just("North"),
        "donor_fst": share,
    },
)


@given(answers)
def test_that_any_plausible_answers_give_a_valid_case_that_reads_back(answer) -> None:
    case = draft(Known(**answer)).case
    assert read_case(to_raw(case)) == case
    assert 1 <= case.recipient.effective_size.best <= max(answer["adults"], 1)
