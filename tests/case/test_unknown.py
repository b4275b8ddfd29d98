"""Ways to a value that is not known: the arithmetic, what it enters, and what it refuses."""

from __future__ import annotations

import math

import numpy as np
import pytest

from rescue_planner import places
from rescue_planner.case.document import Case
from rescue_planner.case.edits import add_plan, add_release, set_value
from rescue_planner.case.faults import InvalidCase
from rescue_planner.case.fields import definition_at, is_number
from rescue_planner.case.known import Known, draft
from rescue_planner.case.paths import parse_path
from rescue_planner.case.unknown import _WAYS, entered, known_already, ways, worked
from rescue_planner.projection.compare import compare

NE, H = "recipient.effective_size", "recipient.gene_diversity"
FIRST_YEAR = "inbreeding_cost.lethal_equivalents_diploid.first_year"
SURVIVE = "plans[1].releases[0].afterwards.survive_to_breed"


@pytest.fixture(autouse=True)
def state(tmp_path, monkeypatch):
    monkeypatch.setattr(places, "user_state", lambda: tmp_path / "state")


@pytest.fixture
def case() -> Case:
    known = Known(46, 2027, years_isolated=60, generation_years=4, donor="North",
                  gene_diversity=0.42, reference_gene_diversity=0.68)  # fmt: skip
    made = add_plan(draft(known).case, "Pairs").case
    return add_release(made, "Pairs", "North", 2027, 2, 2).case


def _way(path: str, key: str):
    return next(one for one in ways(path) if one.key == key)


def _worked(case: Case, path: str, key: str, **answers):
    return worked(case, path, _way(path, key), answers)


def test_that_all_ways_lead_to_numbers_of_the_case() -> None:
    for path in _WAYS:
        assert is_number(parse_path(path)), path
        assert definition_at(parse_path(path)) is not None


def test_that_three_males_and_twenty_females_give_10_4(case) -> None:
    found = _worked(case, NE, "breeders", males=3.0, females=20.0)
    assert found.value.best == 10.4  # 240/23 = 10.43: Wright 1931
    assert found.said.startswith("4 · 3 · 20 / 23 = 10.4.")
    edit = entered(case, NE, found)
    assert edit.case.recipient.effective_size.origin == "measured"
    assert "4 · 3 · 20 / 23 = 10.4" in edit.case.recipient.effective_size.source


def test_that_the_ratio_shows_its_arithmetic_and_its_range(case) -> None:
    found = _worked(case, NE, "ratio")
    assert found.said.startswith("0.15 (0.1 to 0.2) of 46 adults = 6.9 (4.6 to 9.2).")
    assert (found.value.low, found.value.high, found.value.origin) == (4.6, 9.2, "borrowed")


def test_that_the_size_from_isolation_loses_just_the_diversity_that_was_lost(case) -> None:
    size = _worked(case, NE, "isolation", years=60.0).value.best
    # H/H_ref = (1 - 1/(2Ne))^(60/4), to the three digits the size is given with
    assert (1 - 1 / (2 * size)) ** 15 == pytest.approx(0.42 / 0.68, rel=2e-3)
    assert known_already(case, _way(NE, "isolation")) == {"years": 60.0}


def test_that_no_loss_tells_no_size(case) -> None:
    same = set_value(case, H, 0.68).case
    with pytest.raises(ValueError, match="not below its reference"):
        _worked(same, NE, "isolation", years=60.0)


def test_that_diversity_from_history_takes_its_range_from_that_of_ne(case) -> None:
    ranged = entered(case, NE, _worked(case, NE, "ratio")).case
    found = _worked(ranged, H, "isolation", years=60.0).value
    expected = [0.68 * (1 - 1 / (2 * n)) ** 15 for n in (6.9, 4.6, 9.2)]
    assert [found.best, found.low, found.high] == pytest.approx(expected, rel=5e-3)
    assert found.origin == "guessed"


def test_that_a_pedigree_or_a_ratio_gives_the_diversity_at_its_f(case) -> None:
    assert _worked(case, H, "pedigree", f=0.25).value.best == pytest.approx(0.51)
    found = _worked(case, H, "ratio", here=0.3, there=0.4)
    assert found.value.best == pytest.approx(0.51)
    assert "F = 0.25" in found.said


def test_that_haploid_or_diploid_and_the_span_must_be_chosen() -> None:
    asks = {ask.key: ask for ask in _way(FIRST_YEAR, "printed").asks}
    assert [value for value, _ in asks["convention"].choices] == ["haploid", "diploid"]
    assert asks["convention"].needed
    assert asks["span"].needed


def test_that_a_number_without_its_convention_is_refused(case) -> None:
    with pytest.raises(ValueError, match="haploid or per diploid"):
        _worked(case, FIRST_YEAR, "printed", best=3.5, span="maturity")
    with pytest.raises(ValueError, match="part of life"):
        _worked(case, FIRST_YEAR, "printed", best=3.5, convention="haploid")


def test_that_both_conventions_and_the_span_are_echoed_with_the_curve(case) -> None:
    found = _worked(case, FIRST_YEAR, "printed", best=3.5, convention="haploid", span="maturity")
    assert "3.5 haploid = 7 diploid lethal equivalents, covering survival to maturity" in found.said
    # exp(-3.5 F): Morton, Crow & Muller 1956
    assert f"{100 * math.exp(-3.5 * 0.125):.1f} %" in found.said
    assert "41.7 % at F = 0.25" in found.said
    assert "covers survival to maturity" in found.value.source


def test_that_3_5_haploid_and_7_diploid_give_identical_curves(case) -> None:
    courses = []
    for number, convention in ((3.5, "haploid"), (7.0, "diploid")):
        found = _worked(
            case, FIRST_YEAR, "printed", best=number, convention=convention, span="maturity"
        )
        made = compare(entered(case, FIRST_YEAR, found).case, depths=("expected",))
        courses.append([one for one in made.series if one.statistic == "mean"])
    assert any(one.measure == "relative_first_year_survival" for one in courses[0])
    for one, other in zip(*courses, strict=True):
        np.testing.assert_array_equal(one.values, other.values, err_msg=one.measure)


def test_that_a_printed_range_is_doubled_with_its_value(case) -> None:
    found = _worked(
        case, FIRST_YEAR, "printed", best=3.5, low=2, high=5, convention="haploid", span="life"
    )
    assert (found.value.low, found.value.best, found.value.high) == (4, 7, 10)
    assert "Leave young per female at 0" in found.said


def test_that_so_many_of_so_many_have_wilsons_interval(case) -> None:
    found = _worked(case, SURVIVE, "counted", released=28.0, bred=12.0, where="elsewhere").value
    # 12 of 28: 0.2651 to 0.6093 by Wilson's formula, statsmodels proportion_confint "wilson"
    assert (found.best, found.low, found.high) == (0.429, 0.265, 0.609)
    assert found.origin == "borrowed"
    assert found.source.startswith("source not stated; 12 of 28 = 0.429")
    here = _worked(case, SURVIVE, "counted", released=28.0, bred=12.0, where="here")
    held = entered(case, SURVIVE, here).case.plans[1].releases[0].afterwards.survive_to_breed
    assert held.origin == "measured"


@pytest.mark.parametrize(("bred", "released"), [(0.0, 9.0), (9.0, 9.0), (1.0, 3.0), (2.0, 3.0)])
def test_that_any_count_gives_a_value_within_its_own_range(case, bred, released) -> None:
    found = _worked(case, SURVIVE, "counted", released=released, bred=bred, where="here")
    entered(case, SURVIVE, found)
    assert found.value.high > found.value.low


def test_that_impossible_counts_are_refused_in_words(case) -> None:
    for bred, released in ((5.0, 3.0), (1.5, 3.0), (0.0, 0.0)):
        with pytest.raises(ValueError, match="whole numbers"):
            _worked(case, SURVIVE, "counted", released=released, bred=bred, where="here")


def test_that_an_unknown_removal_limit_is_left_out_and_not_called_unlimited(case) -> None:
    path = "donors[0].most_removed_per_year"
    limited = set_value(case, path, 8).case
    found = _worked(limited, path, "not stated")
    assert entered(limited, path, found).case.donors[0].most_removed_per_year is None
    assert "Not stated is not unlimited" in found.said


def test_that_more_than_the_adults_is_refused_by_the_case(case) -> None:
    found = _worked(case, NE, "breeders", males=40.0, females=40.0)
    with pytest.raises(InvalidCase):
        entered(case, NE, found)
