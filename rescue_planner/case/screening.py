"""The screen of a donor: what bears on the risk of harm by mixing, in words with reasons.

The decision criteria are those of Frankham et al. 2011 (Conserv. Biol. 25:465). There are three
classes, low, elevated and cannot say, and never a probability. An unknown answer is its own state:
it never counts as safe.
"""

from __future__ import annotations

from dataclasses import dataclass
from typing import Literal

from rescue_planner.case.population import Donor, Screen

Class = Literal["low", "elevated", "cannot say"]
State = Literal["speaks for low", "raises the risk", "between", "unknown"]

SOURCE = "Frankham et al. 2011, Conserv. Biol. 25:465"
YEARS_APART = 500.0  # the published cut: no exchange within the last 500 years raises the risk
GENERATIONS_APART = 20.0  # about where different places begin to matter; from memory
UNKNOWN_IS_NOT_LOW = "Unknown is not low: a donor with an open question is never classed as low."
NOT_A_LAW = (
    "A screen, not a law: the 500 years are a precaution, and a population apart for over 20,000 "
    "years has been rescued (mountain pygmy-possum, Weeks et al. 2017). It gives no probability."
)
TRIAL = (
    "Elevated: the published advice is to avoid this donor or to try it on a limited scale first. "
    "The decision rests with the responsible authorities."
)
NO_PROOF = "Low does not mean none: watch the young of mixed pairs for more than one generation."


@dataclass(frozen=True, slots=True)
class Finding:
    """One question of the screen: what was answered, what that means, and why."""

    question: str
    answer: str
    state: State
    reason: str


@dataclass(frozen=True, slots=True)
class Screening:
    """A donor's class with the findings it rests on and the cautions that go with it."""

    risk: Class
    findings: tuple[Finding, ...]
    cautions: tuple[str, ...]

    @property
    def sentence(self) -> str:
        """The class in one sentence, with what it rests on."""
        raising = [f.question for f in self.findings if f.state == "raises the risk"]
        open_ = [f.question for f in self.findings if f.state in ("unknown", "between")]
        if self.risk == "elevated":
            return f"Risk of harm by mixing: elevated, because of {_listed(raising)}."
        if self.risk == "cannot say":
            return f"Risk of harm by mixing: cannot say, because of {_listed(open_)}."
        return "Risk of harm by mixing: low, as far as these four questions tell."


def screening(donor: Donor) -> Screening:
    """Return the class of a donor and its reasons; source: Frankham et al. 2011."""
    screen = donor.screen or Screen()
    findings = (_species(screen), _chromosomes(screen), _apart(screen), _places(screen))
    states = {finding.state for finding in findings}
    if "raises the risk" in states:
        risk: Class = "elevated"
    else:
        risk = "low" if states == {"speaks for low"} else "cannot say"
    cautions = [UNKNOWN_IS_NOT_LOW] if states & {"unknown", "between"} else []
    cautions += [{"elevated": TRIAL, "low": NO_PROOF, "cannot say": ""}[risk], NOT_A_LAW]
    return Screening(risk, findings, tuple(words for words in cautions if words))


def _species(screen: Screen) -> Finding:
    reasons: dict[str, tuple[State, str]] = {
        "yes": ("speaks for low", "mixing within a species is the usual case"),
        "no": ("raises the risk", "distinct species may not be able to mix without harm"),
    }
    unknown = "settle the taxonomy first"
    return _finding("species", screen.same_species, reasons, unknown, {"yes": "the same"})


def _chromosomes(screen: Screen) -> Finding:
    reasons: dict[str, tuple[State, str]] = {
        "no": ("speaks for low", "pairing of chromosomes is not disturbed"),
        "yes": ("raises the risk", "young of mixed pairs may be partly infertile"),
    }
    unknown = "a karyotype of both populations would tell"
    words = {"no": "no fixed difference", "yes": "fixed differences"}
    return _finding("chromosomes", screen.fixed_chromosome_differences, reasons, unknown, words)


def _apart(screen: Screen) -> Finding:
    held = screen.years_apart
    if held is None:
        return Finding("years apart", "not answered", "unknown", "ask for history or for genetics")
    low, high = held.spread or (float(held.best), float(held.best))
    answer = f"{held.best:g} years" if held.spread is None else f"{low:g} to {high:g} years"
    if held.best >= YEARS_APART:
        reason = "no exchange within 500 years; a precaution, not a finding of harm"
        return Finding("years apart", answer, "raises the risk", reason)
    if high >= YEARS_APART:
        reason = "the range reaches past the published 500 years"
        return Finding("years apart", answer, "between", reason)
    return Finding("years apart", answer, "speaks for low", "exchange within the last 500 years")


def _places(screen: Screen) -> Finding:
    reasons: dict[str, tuple[State, str]] = {
        "no": ("speaks for low", "little reason to have adapted apart"),
        "some": ("between", "neither similar nor clearly different: say which, with a reason"),
        "much": ("raises the risk", "each may be adapted to its own place"),
    }
    words = {"no": "alike", "some": "somewhat different", "much": "very different"}
    unknown = "compare climate, food, enemies and disease of both places"
    found = _finding("environment", screen.environment_differs, reasons, unknown, words)
    apart = screen.generations_apart
    if found.state != "raises the risk" or apart is None:
        return found
    few = float(apart.best) < GENERATIONS_APART
    more = "fewer than about 20, so less time to adapt" if few else "enough time to adapt"
    reason = f"{found.reason}; {apart.best:g} generations apart, {more} (from memory)"
    return Finding(found.question, found.answer, found.state, reason)


def _finding(
    question: str,
    answer: str | None,
    reasons: dict[str, tuple[State, str]],
    unknown: str,
    words: dict[str, str],
) -> Finding:
    if answer is None or answer not in reasons:
        said = "not answered" if answer is None else "unknown"
        return Finding(question, said, "unknown", unknown)
    state, reason = reasons[answer]
    return Finding(question, words.get(answer, answer), state, reason)


def _listed(names: list[str]) -> str:
    return names[0] if len(names) == 1 else f"{', '.join(names[:-1])} and {names[-1]}"
