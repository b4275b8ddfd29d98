from __future__ import annotations

import math

import pytest

from rescue_planner.annex.numerals import decimal, given, value_text, year_text
from rescue_planner.annex.wording import clean, listed, neutral, one_line, stems


@pytest.mark.parametrize(
    ("value", "decimals", "text"),
    [
        (1234567.8, 0, "1\u202f234\u202f568"),
        (-0.004, 2, "0.00"),
        (-0.04, 2, "−0.04"),
        (math.nan, 2, "–"),
        (math.inf, 2, "∞"),
        (-math.inf, 2, "−∞"),
    ],
)
def test_that_decimals_are_set_as_print_sets_them(value, decimals, text):
    assert decimal(value, decimals) == text


@pytest.mark.parametrize(
    ("key", "value", "text"),
    [
        ("gene_diversity_kept", 0.9134, "91.3"),
        ("inbreeding", 0.1234, "0.123"),
        ("inbreeding", -0.061, "−0.061"),
        ("allele_kept:winter coat", 0.99999, "> 99.9"),
        ("adults", 0.3, "0.3"),
        ("gene_diversity", 0.42, "0.420"),
        ("adults", 40.0, "40"),
        ("adults", 3.04, "3.0"),
        ("cost", 54000.0, "54\u202f000"),
        ("allele_kept:winter coat", 0.95, "95.0"),
        ("yearly_growth", 1.0184, "1.018"),
    ],
)
def test_that_a_measure_is_printed_by_its_kind(key, value, text):
    assert value_text(key, value) == text


@pytest.mark.parametrize(
    ("value", "text"),
    [
        (0.1, "0.1"),
        (2500, "2500"),
        (40000, "40\u202f000"),
        (-0.4, "−0.4"),
        (1e-6, "1e−06"),
        (0.30000000000000004, "0.30000000000000004"),
    ],
)
def test_that_an_input_keeps_every_digit(value, text):
    assert given(value) == text


def test_that_years_carry_no_thousands_mark():
    assert year_text(2087.0) == "2087"
    assert year_text(2029.8000000000002) == "2029.8"


@pytest.mark.parametrize("text", ["=1+1", "+A1", "-2 animals", "@x", "\tx"])
def test_that_a_spreadsheet_takes_no_name_for_a_formula(text):
    assert neutral(text) == f"'{text}"
    assert neutral("North Fell") == "North Fell"


def test_that_signs_no_document_may_hold_are_left_out():
    assert clean("a\x00b\x07c\ud800d") == "abcd"
    assert one_line("  a\n b\t c ") == "a b c"


def test_that_file_names_are_plain_and_differ():
    found = stems(["allele_kept:a/b", "allele_kept:a:b", "allele_kept:狐", "inbreeding"])
    assert list(found.values()) == [
        "allele_kept_a-b",
        "allele_kept_a-b_2",
        "allele_kept",
        "inbreeding",
    ]


def test_that_words_are_listed_as_in_a_sentence():
    assert listed([]) == ""
    assert listed(["a"]) == "a"
    assert listed(["a", "b", "c"]) == "a, b and c"
