"""Published values: what each must say, what borrowing one does, and the user's own file."""

from __future__ import annotations

import json
from pathlib import Path

import pytest

from rescue_planner import places
from rescue_planner.case.document import Case
from rescue_planner.case.edits import set_source, set_value
from rescue_planner.case.faults import InvalidCase
from rescue_planner.case.fields import definition_at, is_number
from rescue_planner.case.known import (
    LETHAL_EQUIVALENTS,
    REFERENCE_DIVERSITY,
    SHARE_OF_ADULTS,
    Known,
    draft,
)
from rescue_planner.case.library import (
    LibraryError,
    Published,
    borrow,
    entry_from,
    forget,
    keep,
    library,
    own_file,
)
from rescue_planner.case.paths import parse_path
from rescue_planner.theory.sample_size import wilson_interval

FIRST_YEAR = "inbreeding_cost.lethal_equivalents_diploid.first_year"
SURVIVE = "plans[1].releases[0].afterwards.survive_to_breed"


@pytest.fixture(autouse=True)
def state(tmp_path, monkeypatch):
    monkeypatch.setattr(places, "user_state", lambda: tmp_path / "state")


@pytest.fixture
def case() -> Case:
    return draft(Known(46, 2027, donor="North")).case


def _entry(key: str) -> Published:
    return next(one for one in library().shipped if one.key == key)


def _own(**more) -> Published:
    given = {"key": "mine", "fits": (FIRST_YEAR,), "name": "Ours", "best": 5, "taxon": "vole",
             "source": "report 7", "caveat": "one year"}  # fmt: skip
    return Published.model_validate({**given, **more})


def test_that_every_shipped_value_fits_an_input_and_lies_within_its_bounds() -> None:
    for one in library().shipped:
        for path in one.fits:
            steps = parse_path(path)
            definition = definition_at(steps)
            assert definition is not None, path
            assert is_number(steps), path
            if one.usable and one.times is None:
                for held in (one.best, one.low, one.high):
                    assert held is None or definition.complaint(held) is None, one.key


def test_that_every_lethal_equivalent_says_haploid_and_diploid_and_the_two_agree() -> None:
    entries = [one for one in library().fitting(FIRST_YEAR) if one.usable]
    assert len(entries) >= 4
    for one in entries:
        numbers = {
            word: float(number)
            for number, word in (part.rsplit(" ", 1) for part in one.convention.split(" = "))
        }
        assert numbers["diploid"] == one.best == 2 * numbers["haploid"], one.key


def test_that_the_swift_fox_ranges_are_wilson_intervals_of_their_counts() -> None:
    for key, met, runs in (
        ("survive-swift-fox-wild", 12, 28),
        ("survive-swift-fox-captive", 2, 27),
    ):
        one = _entry(key)
        low, high = wilson_interval(met, runs)
        assert (one.best, one.low, one.high) == pytest.approx((met / runs, low, high), abs=5e-4)


def test_that_borrowing_sets_value_range_origin_and_source_in_one_step(case) -> None:
    edit = borrow(case, FIRST_YEAR, _entry("lethals-wild-life"))
    held = edit.case.inbreeding_cost.lethal_equivalents_diploid.first_year
    assert (held.best, held.low, held.high, held.origin) == (12, 4, 20, "borrowed")
    assert "O’Grady" in held.source
    assert "12 diploid = 6 haploid" in held.source
    assert edit.sentence.startswith("Borrow a published value: set lethal equivalents")


def test_that_a_ratio_is_a_multiple_of_the_adults_counted_with_its_arithmetic(case) -> None:
    edit = borrow(case, "recipient.effective_size", _entry("ne-ratio-assumed"))
    held = edit.case.recipient.effective_size
    assert (held.best, held.low, held.high) == (6.9, 4.6, 9.2)  # 0.15, 0.1, 0.2 of 46
    assert "0.15 of 46" in held.source


def test_that_a_ratio_needs_the_adults_it_is_a_share_of(case) -> None:
    with pytest.raises(InvalidCase) as wrong:
        borrow(case, "donors[0].effective_size", _entry("ne-ratio-donor"))
    assert "enter adults (donor “North”) first" in wrong.value.problems[0].text
    counted = set_value(case, "donors[0].adults", 400).case
    edit = borrow(counted, "donors[0].effective_size", _entry("ne-ratio-donor"))
    assert edit.case.donors[0].effective_size.best == 60


def test_that_a_value_for_reading_cannot_be_entered(case) -> None:
    with pytest.raises(InvalidCase, match="for reading only"):
        borrow(case, FIRST_YEAR, _entry("ibex-growth"))


def test_that_values_to_borrow_stand_before_those_to_read() -> None:
    usable = [one.usable for one in library().fitting(SURVIVE)]
    assert usable == sorted(usable, reverse=True)
    assert any(usable)
    assert not all(usable)


def test_that_a_value_without_taxon_source_or_caveat_is_refused() -> None:
    for name in ("taxon", "source", "caveat"):
        with pytest.raises(ValueError, match=name):
            _own(**{name: ""})
    with pytest.raises(ValueError, match="in order"):
        _own(low=6, high=9)


def test_that_an_own_value_stands_first_and_is_there_the_next_time() -> None:
    keep(_own())
    keep(_own(best=6))
    found = library()
    assert [one.best for one in found.own] == [6]
    assert found.fitting(FIRST_YEAR)[0].key == "mine"
    keep(_own(key="another"))
    forget("mine")
    assert [one.key for one in library().own] == ["another"]


def test_that_a_disk_that_refuses_is_said_and_the_own_values_stay(monkeypatch) -> None:
    keep(_own())

    def refuse(*_args):
        raise OSError(28, "No space left on device")

    monkeypatch.setattr(Path, "replace", refuse)
    with pytest.raises(LibraryError, match="No space left"):
        keep(_own(best=6))
    assert [one.best for one in library().own] == [5]


def test_that_an_own_file_of_an_earlier_program_is_still_read() -> None:
    # the file as version 0.1 wrote it: it must be read by every later version
    own_file().parent.mkdir(parents=True)
    text = (
        '{"format": "published values", "version": 1, "entries": [{"key": "k", '
        f'"fits": ["{FIRST_YEAR}"], "name": "n", "best": 4.5, "unit": "diploid", '
        '"taxon": "hare", "source": "s", "caveat": "c"}]}'
    )
    own_file().write_text(text, encoding="utf-8")
    assert [one.best for one in library().own] == [4.5]


@pytest.mark.parametrize(
    "text",
    ["{", "[]", '{"format": "x"}', '{"format": "published values", "version": 2}', "[" * 100_000,
     '{"format": "published values", "version": 1, "entries": [{"key": "k"}]}'],
)  # fmt: skip
def test_that_a_bad_own_file_is_named_and_the_shipped_values_stay(text) -> None:
    own_file().parent.mkdir(parents=True)
    own_file().write_text(text, encoding="utf-8")
    found = library()
    assert found.shipped
    assert found.own == ()
    assert "cannot be read" in found.complaint
    with pytest.raises(LibraryError):
        keep(_own())
    assert own_file().read_text("utf-8") == text


def test_that_a_value_of_the_case_is_kept_with_its_source_only(case) -> None:
    path = "recipient.adults"
    with pytest.raises(InvalidCase, match="source"):
        entry_from(case, path)
    stated = set_source(case, path, source="count of 2026", origin="measured").case
    keep(entry_from(stated, path))
    assert library().fitting(path)[0].best == 46
    assert json.loads(own_file().read_text("utf-8"))["entries"][0]["source"] == "count of 2026"


def test_that_a_first_case_borrows_what_the_published_values_say() -> None:
    # a case begun from what is known, and a value borrowed later, must not differ
    ratio, reference = _entry("ne-ratio-assumed"), _entry("reference-mammals")
    assert (ratio.best, ratio.low, ratio.high) == SHARE_OF_ADULTS
    assert (reference.best, reference.low, reference.high) == REFERENCE_DIVERSITY
    wild, captive, life = (
        _entry(f"lethals-{one}").best for one in ("wild-maturity", "captive-juvenile", "wild-life")
    )
    assert (wild, captive, life) == LETHAL_EQUIVALENTS
