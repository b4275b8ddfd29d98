"""Numbers as they are typed, stepped and shown."""

from __future__ import annotations

import pytest
from hypothesis import given
from hypothesis import strategies as st

from rescue_planner.case.fields import definition_at
from rescue_planner.case.paths import parse_path
from rescue_planner.desk.numbers import range_in_words, read_number, stepped, value_at, written


@pytest.mark.parametrize(
    ("typed", "value"),
    [("16", 16), (" 0.42 ", 0.42), ("0,42", 0.42), ("−3", -3), ("1e3", 1000), ("12 000", 12000),
     (".5", 0.5), ("2027", 2027)],
)  # fmt: skip
def test_that_numbers_are_read_as_people_type_them(typed: str, value: float) -> None:
    assert read_number(typed) == value


@pytest.mark.parametrize(
    "typed", ["", "abc", "1,000", "12%", "1.2.3", "1e999", "nan", "inf", "--1"]
)
def test_that_what_is_no_number_is_refused_with_a_sentence(typed: str) -> None:
    with pytest.raises(ValueError, match=r"[a-z].*\.$"):
        read_number(typed)


@given(st.floats(-1e12, 1e12) | st.integers(-(10**12), 10**12))
def test_that_a_written_number_reads_back_the_same(value: float) -> None:
    assert read_number(written(value)) == value


@pytest.mark.parametrize(
    ("path", "value", "by", "after"),
    [
        ("recipient.gene_diversity", 0.42, 1, 0.43),
        ("recipient.gene_diversity", 0.42, -10, 0.32),
        ("recipient.gene_diversity", 0.995, 1, 1.0),
        ("recipient.gene_diversity", 0.005, -100, 0.005),  # 0 itself is out of bounds
        ("recipient.effective_size", 16, 1, 17),
        ("recipient.effective_size", 1, -1, 1),
        ("time.start_year", 2027, 1, 2028),
        ("time.generation_years", 4, 1, 4.1),
        ("plans[0].releases[0].who.females", 0, -1, 0),
    ],
)
def test_that_steps_are_sensible_and_stay_within_bounds(path, value, by, after) -> None:
    assert stepped(value, by, definition_at(parse_path(path))) == pytest.approx(after, abs=1e-12)


def test_that_a_value_is_found_by_its_path_with_its_default(small) -> None:
    assert value_at(small, "plans[1].releases[0].who.males").best == 2
    assert value_at(small, "plans[1].releases[0].afterwards.survive_to_breed").best == 1
    assert value_at(small, 'loci[0].donor_frequency["High Meadow"]').best == 0.1
    assert value_at(small, "recipient.carrying_capacity") is None
    assert value_at(small, "donors[7].adults") is None


def test_that_a_range_is_shown_in_words(small) -> None:
    assert range_in_words(small.recipient.adults) == "34 to 49"
    assert range_in_words(small.recipient.effective_size) == ""
