"""The offline help as text: complete, no dead link, none that leads outside, plain to read."""

from __future__ import annotations

import math
import re
from collections.abc import Callable
from typing import Any

import pytest

from rescue_planner import places
from rescue_planner.case.document import Case
from rescue_planner.case.file import load
from rescue_planner.case.inputs import every_input
from rescue_planner.case.measures import MEASURES
from rescue_planner.case.problems import read_case
from rescue_planner.case.raw import to_raw
from rescue_planner.case.what_if import applied
from rescue_planner.desk import help_pages
from rescue_planner.desk.help_keys import KEYS
from rescue_planner.projection import reading
from rescue_planner.projection.compare import LIVE_DEPTHS, compare
from rescue_planner.projection.results import DEPTH_NAMES, Comparison
from rescue_planner.theory.inbreeding import survival_factor
from rescue_planner.theory.size import from_sexes, retained

WALKS = {
    "ground-bird": "ground-bird-on-an-island",
    "carnivore": "carnivore-with-two-donors",
    "marsupial": "marsupial-and-a-moving-climate",
    "amphibian": "amphibian-with-a-protective-allele",
    "stream-fish": "stream-fish-with-few-numbers",
}
MOST_WORDS = 25  # of a sentence that most people read at once; common practice of plain writing
WRITTEN = [k for k in help_pages.page_keys() if k not in ("inputs", "measures", "keyboard")]
CAUTIONS = (
    "These results describe what would follow if the stated assumptions held. The decision rests "
    "with the responsible authorities.",
    "Moving, holding or releasing animals may need several approvals. Ask the competent authority "
    "before any step.",
    "The legal status of translocated animals and of their offspring must be settled with counsel "
    "and the listing authority.",
    "Disease risk is not assessed by this projection. A disease risk analysis led by qualified "
    "veterinarians is needed and may rule out a plan.",
    "Expected losses shown here are estimates. Handling, transport and release need an "
    "animal-welfare review and approved protocols.",
    "Cross-border movement may need findings and permits from each country's authorities.",
    "Consent of the indigenous peoples concerned is sought early, freely and with full "
    "information. No plan here presumes it.",
    "Genetic data and knowledge shared by communities are used only under their conditions.",
    "Removal limits are set by those responsible for the donor population.",
    "Compare plans with one another. Do not read a single line as a forecast of what will happen.",
)


# what is there


def test_that_every_file_of_the_help_is_in_the_contents_and_every_entry_has_a_page() -> None:
    files = {path.stem for path in (places.resources() / "help").glob("*.md")}
    keys = help_pages.page_keys()
    assert len(keys) == len(set(keys))
    assert set(keys) - files == {"inputs", "measures", "keyboard"}
    assert files <= set(keys)
    for key in keys:
        assert help_pages.page(key).startswith("# ")


def test_that_a_page_has_the_title_by_which_the_contents_list_it() -> None:
    listed = {entry.key: entry.title for entry in help_pages.contents() if entry.key}
    assert {key: help_pages.title(key) for key in listed} == listed


def test_that_there_is_a_walk_through_of_every_shipped_case() -> None:
    assert sorted(WALKS.values()) == sorted(p.stem for p in places.scenarios().glob("*.json"))
    assert set(WALKS) <= set(help_pages.page_keys())


@pytest.mark.parametrize("key", help_pages.page_keys())
def test_that_every_link_leads_to_a_page_and_a_heading_of_the_help(key: str) -> None:
    for page, anchor in help_pages.links(key):
        assert page in help_pages.page_keys(), f"{key} links to {page}"
        if anchor:
            assert anchor in {one.anchor for one in help_pages.sections(page)}, f"{page}#{anchor}"


@pytest.mark.parametrize("key", help_pages.page_keys())
def test_that_no_page_names_an_address_outside_or_shows_a_picture_or_raw_html(key: str) -> None:
    text = help_pages.page(key)
    assert not re.search(r"https?:|www\.|mailto:|file:|ftp:|!\[|<\w", text)


@pytest.mark.parametrize("key", [k for k in help_pages.page_keys() if k != "inputs"])
def test_that_two_headings_of_a_page_do_not_share_an_anchor(key: str) -> None:
    """Two inputs may share a name, and nothing links into their page."""
    anchors = [one.anchor for one in help_pages.sections(key)]
    assert len(anchors) == len(set(anchors))


def test_that_every_key_is_on_the_keyboard_page() -> None:
    page = help_pages.page("keyboard")
    assert all(what in page for _, what in KEYS)


def test_that_the_cautions_stand_word_for_word() -> None:
    page = help_pages.page("cautions")
    assert [line for line in CAUTIONS if f"**{line}**" not in page] == []


def test_that_a_caution_used_on_another_page_is_not_reworded() -> None:
    """Bold sentences elsewhere are cautions, or the one about numbers of shipped cases."""
    bold = {
        words
        for key in WRITTEN
        for words in re.findall(r"\*\*([^*]+\.)\*\*", help_pages.page(key))
        if len(words.split()) > 7
    }
    ours = {"Do not use any number of a shipped case for a real population."}
    assert bold - set(CAUTIONS) - ours == set()


# search


def test_that_the_search_finds_every_input_by_its_name() -> None:
    names = {one.name for _, one in every_input(Case)}
    lost = [name for name in names if not _in_headings(name)]
    assert lost == []


def test_that_the_search_finds_every_measure_by_its_name() -> None:
    assert [m.name for m in MEASURES if not _in_headings(m.name.removesuffix(" of"))] == []


def _in_headings(name: str) -> bool:
    return any(hit.section.heading.casefold() == name.casefold() for hit in help_pages.search(name))


def test_that_the_search_puts_a_heading_before_a_mention() -> None:
    first = help_pages.search("fst")[0].section
    assert (first.page, first.anchor) == ("glossary", "fst")


def test_that_the_search_wants_all_words_in_any_case_and_order() -> None:
    found = {hit.section.page for hit in help_pages.search("DIPLOID haploid")}
    assert "inbreeding-cost" in found
    assert help_pages.search("diploid zzzz") == ()
    assert help_pages.search("   ") == ()


def test_that_a_snippet_shows_the_word_that_was_asked_for() -> None:
    hits = [hit for hit in help_pages.search("trickle") if hit.section.page == "ground-bird"]
    assert "trickle" in hits[0].snippet


def test_that_marks_of_checked_numbers_are_not_seen_by_readers() -> None:
    for key in help_pages.page_keys():
        assert "[[" not in help_pages.page(key)
        assert " :: " not in help_pages.page(key)


# reading


def _sentences(key: str) -> list[str]:
    found = []
    for paragraph in help_pages.page(key).splitlines():  # an entry of a list is its own
        lines = re.split(r"(?<=[.!?:;])\s+(?=[A-Z“*0-9])", help_pages.plain(paragraph))
        found += [line for line in lines if len(line.split()) > 2]
    return found


@pytest.mark.parametrize("key", [k for k in WRITTEN if k not in ("contents", "cautions")])
def test_that_nine_sentences_in_ten_are_short(key: str) -> None:
    sentences = _sentences(key)
    long = [one for one in sentences if len(one.split()) > MOST_WORDS]
    assert len(long) <= max(1, 0.1 * len(sentences)), long


def test_that_each_term_of_the_glossary_is_told_in_a_sentence_or_two() -> None:
    for one in list(help_pages.sections("glossary"))[1:]:
        plain = re.sub(r"\([^)]*\)", "", one.body)
        count = len(re.findall(r"[.?](?:\s|$)", plain))
        assert 1 <= count <= 3, f"{one.heading}: {one.body}"


def test_that_the_glossary_is_in_order_of_the_alphabet_and_holds_what_the_screen_says() -> None:
    terms = [one.heading.casefold() for one in help_pages.sections("glossary")][1:]
    assert terms == sorted(terms)
    asked = {
        "effective size", "gene diversity", "f", "kinship", "fst", "lethal equivalents",
        "heritability", "lag", "donor ancestry", "newcomers that breed", "recipient", "donor",
        "plan", "release", "target", "what-if", "remark", "one-locus odds", "average course",
        "observed heterozygosity", "additive genetic variance", "annex", "projection", "measure",
    }  # fmt: skip
    assert asked <= set(terms)


def test_that_the_page_of_depths_names_all_depths_and_the_two_that_the_desk_shows() -> None:
    """Once the desk shows simulated animals, depths.md and the glossary have to say so."""
    headings = {one.heading.casefold() for one in help_pages.sections("depths")}
    assert set(DEPTH_NAMES.values()) <= headings
    assert LIVE_DEPTHS == ("expected", "exact")
    assert "The desk of this version does not show it." in help_pages.page("depths")


# numbers


def _marks(key: str) -> list[tuple[str, list[str]]]:
    found = help_pages.MARK.finditer(help_pages.source(key))
    return [(one["shown"], one["what"].split(" :: ")) for one in found]


def _agrees(shown: str, value: float) -> bool:
    """Whether `value` is printed as `shown` at the digits shown."""
    digits = len(shown.partition(".")[2])
    return abs(float(shown) - value) <= 0.5 * 0.1**digits + 1e-9


class Answers:
    """Values of one shipped case, under changes as a reader makes them."""

    def __init__(self, name: str) -> None:
        self._case = load(places.scenarios() / f"{name}.json").case
        self._kept: dict[str, Comparison] = {}

    def _compared(self, change: str) -> Comparison:
        if change not in self._kept:
            case = self._case
            if change:
                path, number = change.split(" = ")
                raw = to_raw(case)
                edit = {"path": path, "set": float(number)}
                raw["what_ifs"] = [{"name": "asked", "changes": [edit]}]
                case = applied(read_case(raw), "asked")
            self._kept[change] = compare(case)
        return self._kept[change]

    def value(self, plan: str, measure: str, year: str, change: str = "") -> float:
        result = self._compared(change)
        series = result.best(plan, measure)
        assert series is not None, f"{plan} has no {measure}"
        return float(series.values[result.index_at(float(year))]) * reading.scale(measure)

    def entered(self, path: str) -> float:
        at: Any = to_raw(self._case)
        for step in re.findall(r"[^.\[\]]+", path):
            at = at[int(step)] if isinstance(at, list) else at[step]
        return float(at["best"] if isinstance(at, dict) else at)


@pytest.mark.parametrize("key", WALKS)
def test_that_every_number_of_a_walk_through_is_what_the_case_gives(key: str) -> None:
    answers, wrong = Answers(WALKS[key]), []
    for shown, what in _marks(key):
        value = answers.entered(what[1]) if what[0] == "input" else answers.value(*what)
        if not _agrees(shown, value):
            wrong.append((shown, what, value))
    assert len(_marks(key)) >= 6
    assert wrong == []


@pytest.mark.parametrize("key", WALKS)
def test_that_no_decimal_of_a_walk_through_goes_unchecked(key: str) -> None:
    """Numbers that a reader is told to type are the changes of the marks."""
    source = help_pages.source(key)
    changes = {what[3].split(" = ")[1] for _, what in _marks(key) if len(what) == 4}
    bare = help_pages.MARK.sub("", source)
    assert changes
    assert set(re.findall(r"\d+\.\d+", bare)) <= changes


@pytest.mark.parametrize("key", WALKS)
def test_that_a_walk_through_names_the_years_and_plans_it_reads(key: str) -> None:
    text = help_pages.page(key)
    case = load(places.scenarios() / f"{WALKS[key]}.json").case
    plans = {plan.name for plan in case.plans}
    assert set(re.findall(r"\*([A-Z][^*]+)\*", re.sub(r"\*\*[^*]+\*\*", "", text))) <= plans
    last = case.time.start_year.best + case.time.horizon_years.best
    for _, what in _marks(key):
        if what[0] != "input":
            assert case.time.start_year.best <= float(what[2]) <= last


def test_that_the_numbers_of_the_other_pages_follow_from_the_formulas() -> None:
    formulas: dict[str, Callable[..., float]] = {
        "sexes": lambda males, females: float(from_sexes(males, females)),
        "survival": lambda b, f: 100 * float(survival_factor(f, b)),
        "drift": lambda ne: 100 * (1 - float(retained(ne))),
        "product": lambda *numbers: math.prod(numbers),
    }
    checked, wrong = 0, []
    for key in set(WRITTEN) - set(WALKS):
        for shown, (name, *numbers) in _marks(key):
            value = formulas[name](*(float(one) for one in numbers))
            checked += 1
            if not _agrees(shown, value):
                wrong.append((key, shown, value))
    assert checked >= 10
    assert wrong == []
