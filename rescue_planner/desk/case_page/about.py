"""Decision, time and targets."""

from __future__ import annotations

from functools import partial

from rescue_planner.case import measures
from rescue_planner.case.document import Case
from rescue_planner.case.edits import Edit, add_target, remove_target
from rescue_planner.desk.case_page.section import Section, SectionPlan
from rescue_planner.desk.evidence import generations_in_words, target_in_words


def _decision(section: Section, _case: Case) -> None:
    section.text("title", "Title of the case")
    section.text("species", "Species")
    section.text("decision.question", "Question", lines=2)
    section.text("decision.goal", "Goal", lines=2)
    section.text("decision.decided_by", "Decided by")
    section.text("decision.by_date", "By which date")
    section.text("decision.other_causes_of_decline", "Other causes of decline", lines=3)
    section.caution(
        "What else is wrong, and what is being done about it? Where the cause of decline stays, "
        "the gain fades."
    )
    section.text("authority", "Authority")
    section.text("prepared_by", "Prepared by")
    section.text("currency", "Currency of costs")


def _time(section: Section, _case: Case) -> None:
    section.numbers("time.start_year", "time.horizon_years", "time.generation_years")
    section.line(generations_in_words)


def _targets(section: Section, case: Case) -> None:
    choices = [
        (key, f"{measures.title(key)} ({measures.unit(key, case.currency)})")
        for key in measures.keys(case)
    ]
    for i, target in enumerate(case.targets):
        section.part(
            f"Target {i + 1}",
            partial(_without, index=i),
            f"Remove target {i + 1}, {_title(target.measure)}",
        )
        section.choice(f"targets[{i}].measure", "Measure", choices)
        unit = _unit(case, target.measure)
        section.number(f"targets[{i}].at_least", unit=unit)
        section.number(f"targets[{i}].at_most", unit=unit)
        section.number(f"targets[{i}].by_year", "Checked in")
        section.line(partial(target_in_words, index=i))
        section.text(f"targets[{i}].owner", "Who wants it")
        section.text(f"targets[{i}].reason", "Reason", lines=2)
    section.buttons(("Add a target", _new_target))


def _without(case: Case, index: int) -> Edit:
    return remove_target(case, index)


def _unit(case: Case, key: str) -> str:
    """Return the unit a bound is typed in: shares from 0 to 1, the rest as they are shown."""
    if measures.measure_of(key).kind == "share":
        return "share, 0 to 1"
    return measures.unit(key, case.currency)


def _title(key: str) -> str:
    return measures.title(key)


def _new_target(case: Case) -> Edit:
    by_year = int(case.time.start_year.best + case.time.horizon_years.best)
    return add_target(case, "gene_diversity_kept", by_year, at_least=0.9)


DECISION = SectionPlan(
    "Decision", "What is to be decided, by whom, and why.", lambda _: 0, _decision
)
TIME = SectionPlan("Time", "", lambda _: 0, _time)
TARGETS = SectionPlan(
    "Targets",
    "A bound on a measure that somebody wants met by a year. Shares are entered from 0 to 1. "
    "Say who wants it and why: a bound is a choice of people, not a result.",
    lambda case: (
        tuple(target.measure for target in case.targets),
        tuple(measures.keys(case)),
        case.currency,
    ),
    _targets,
)
