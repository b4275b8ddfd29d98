"""The annex as sections, ready for a word processor's file or a page."""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass

from rescue_planner.advice.targets import not_checked, target_checks
from rescue_planner.annex import cautions
from rescue_planner.annex.blocks import Block, Bullets, Illustration, Report, Section, Table, Text
from rescue_planner.annex.captions import SHORT_HASH
from rescue_planner.annex.input_tables import input_blocks
from rescue_planner.annex.methods import assumptions, methods, not_included
from rescue_planner.annex.record import Occasion, remark_rows, versions, what_if_of
from rescue_planner.annex.schedule import action_sentences, rule_sentences, schedule_table
from rescue_planner.annex.tables import (
    course_tables,
    horizon_table,
    target_table,
    target_words,
)
from rescue_planner.annex.wording import clean, listed, one_line, plan_label
from rescue_planner.case.document import Case, Change, WhatIf
from rescue_planner.case.fields import definition_at
from rescue_planner.case.paths import parse_path
from rescue_planner.case.raw import to_raw
from rescue_planner.case.remarks import Remark
from rescue_planner.case.spoken import spoken_part
from rescue_planner.projection.results import DEPTH_NAMES, Comparison


@dataclass(frozen=True, slots=True, eq=False)
class Content:
    """What a report is written from; `figures` in the order of the pictures."""

    case: Case
    comparison: Comparison
    measures: tuple[str, ...]
    nothing_entered: tuple[str, ...]
    figures: tuple[Illustration, ...]
    remarks: tuple[Remark, ...]
    occasion: Occasion


def report(content: Content) -> Report:
    """Return the whole annex."""
    case = content.case
    return Report(
        title=one_line(case.title),
        subtitle=_subtitle(case),
        authority=one_line(case.authority or ""),
        sections=(
            _decision(content),
            Section("Standing caution", _standing()),
            *_plans(content),
            *_compared(content),
            _targets(content),
            *_inputs(content),
            Section("Methods", tuple(Text(words) for words in methods(case, content.comparison))),
            _assumptions(content),
            _limits(content),
            _remarks(content),
            Section("Cautions", (Bullets(cautions.EVERY),)),
            _run(content),
        ),
    )


def _subtitle(case: Case) -> str:
    species = f", {one_line(case.species)}" if case.species else ""
    return f"Genetic rescue of {one_line(case.recipient.name)}{species}: plans compared"


def _standing() -> tuple[Block, ...]:
    return tuple(
        Text(words, "caution")
        for words in (cautions.AUTHORITY, cautions.UNCERTAINTY, cautions.DISEASE)
    )


def _decision(content: Content) -> Section:
    decision = content.case.decision
    if decision is None:
        return Section("Decision asked", (Text("The case does not describe the decision."),))
    rows = tuple(
        (name, clean(held) if held else "not stated")
        for name, held in (
            ("Question", decision.question),
            ("Goal", decision.goal),
            ("Decided by", decision.decided_by),
            ("Decision by", decision.by_date),
            ("Other causes of decline", decision.other_causes_of_decline),
        )
    )
    table = Table("What is to be decided", ("Matter", "As stated in the case"), rows)
    return Section("Decision asked", (table, *_what_if(content)))


def _what_if(content: Content) -> tuple[Block, ...]:
    name = content.comparison.what_if
    if name is None:
        return ()
    found = what_if_of(content.case, name)
    told = f"All results are under the what-if “{one_line(name)}”, for all plans at once."
    changes = () if found is None else tuple(_change(change) for change in found.changes)
    asked = "" if found is None else _asked(found)
    return Text(f"{told}{asked}", "caution"), *((Bullets(changes),) if changes else ())


def _asked(what_if: WhatIf) -> str:
    known = [one_line(part) for part in (what_if.asked_by, what_if.date) if part]
    return f" Asked by {', '.join(known)}." if what_if.asked_by else ""


def _change(change: Change) -> str:
    parts = []
    if change.times is not None:
        parts.append(f"times {change.times.best:g}")
    if change.set is not None:
        parts.append(f"set to {change.set.best:g}")
    definition = definition_at(parse_path(change.path))
    name = change.path if definition is None else f"{definition.name} ({change.path})"
    return f"{name}: {listed(parts)}"


def _plans(content: Content) -> tuple[Section, ...]:
    case = content.case
    intro = [Text(cautions.PERMITS, "caution"), Text(cautions.WELFARE, "caution")]
    if case.donors:
        intro.append(Text(cautions.DONOR, "caution"))
    parts = [Section("Plans", tuple(intro))]
    for name in content.comparison.plans:
        plan = case.plan(name)
        label = plan_label(content.comparison, name)
        table = schedule_table(case, plan, label)
        none = "No animals are released."
        if any(rule.then == "release" for rule in plan.rules):
            none = "No release has a year of its own: animals come when a rule says so."
        blocks: list[Block] = [Text(none)] if table is None else [table]
        rules, actions = rule_sentences(case, plan), action_sentences(case, plan)
        if rules:
            blocks += [Text("Rules:"), Bullets(rules)]
        events = tuple(
            f"{one_line(event.rule)}: {event.sentence}"
            for event in content.comparison.events
            if event.plan == name
        )
        if events:
            blocks += [Text("When rules acted on the average course:"), Bullets(events)]
        if actions:
            blocks += [Text("Other actions:"), Bullets(actions)]
        parts.append(Section(f"Plan {label}", tuple(blocks), 2))
    return tuple(parts)


def _compared(content: Content) -> tuple[Section, ...]:
    comparison, measures = content.comparison, content.measures
    gone = [
        f"Under {plan_label(comparison, plan)} fewer than one adult is left on the average course "
        f"from {comparison.years[end]:g} on: the population is gone, and what describes living "
        "animals ends there."
        for plan in comparison.plans
        if (end := comparison.gone_after(plan)) is not None
    ]
    capped = (
        [
            f"First-year survival reached its cap of 1 under {listed(comparison.capped)}: gains "
            "are understated there."
        ]
        if comparison.capped
        else []
    )
    # what to do about it belongs on a screen, not in a report
    missing = [words.partition(" Add ")[0] for words in content.nothing_entered]
    words = tuple(Text(one) for one in [*gone, *capped, *missing])
    ranges = any(series.statistic == "q05" for series in comparison.series)
    note = "Brackets hold the 5 % to 95 % range where a depth gives one."
    notes = (Text(note, "note"),) if ranges else ()
    return (
        Section("Plans compared", (*words, horizon_table(comparison, measures), *notes)),
        Section("Figures", content.figures, 2),
        Section("Comparison over time", course_tables(comparison, measures), 2),
    )


def _targets(content: Content) -> Section:
    case, comparison = content.case, content.comparison
    table = target_table(case, comparison, target_checks(case, comparison))
    blocks: list[Block] = []
    if not case.targets:
        blocks.append(Text("The case sets no targets."))
    reasons = tuple(
        f"{target_words(case, number, target)}. Reason: {clean(target.reason or 'not stated')}"
        for number, target in enumerate(case.targets, start=1)
    )
    if reasons:
        blocks.append(Bullets(reasons))
    if table is not None:
        blocks.append(
            Text(
                "Without simulated animals a target is checked on one expected value, which says "
                "nothing on how likely it is to be met.",
                "note",
            )
        )
        blocks.append(table)
    blocks += [Text(words) for words in not_checked(case, comparison)]
    return Section("Target checks", tuple(blocks))


def _inputs(content: Content) -> tuple[Section, ...]:
    words = (
        "Every value as entered, with its range in brackets. Origin reads “not stated” where the "
        "case gives none, “choice” and “text” where the input is not a number. What the case "
        "leaves out stands under each table with what the program takes instead. Shares are "
        "written as in the case file: 0.3 is 30 %."
    )
    return (Section("Inputs and their origins", (Text(words), *input_blocks(content.case))),)


def _assumptions(content: Content) -> Section:
    blocks: list[Block] = []
    for name, sentences in assumptions(content.case, content.comparison):
        blocks += [Text(f"What “{name}” holds fixed or leaves out:"), Bullets(sentences)]
    return Section("Assumptions", tuple(blocks))


def _limits(content: Content) -> Section:
    comparison = content.comparison
    blocks: list[Block] = [Text(cautions.scope(not_included(content.case, comparison)))]
    rules = tuple(f"Rule not applied: {one_line(name)}." for name in comparison.not_applied)
    missing = rules + not_checked(content.case, comparison)
    if missing:
        blocks.append(Bullets(missing))
    return Section("Limits", tuple(blocks))


def _remarks(content: Content) -> Section:
    rows = remark_rows(content.case, content.remarks)
    if not rows:
        return Section("Remarks", (Text("The program made no remark on this case."),))
    table = Table(
        "Remarks of the program and the answers given",
        ("Where", "Remark", "Answer", "By, date"),
        tuple(
            (
                _where(content.case, row["path"]),
                clean(row["text"]),
                "not answered" if row["answer"] is None else clean(row["answer"]["reason"]),
                "–" if row["answer"] is None else _by(row["answer"]),
            )
            for row in rows
        ),
    )
    return Section("Remarks and answers", (table,))


def _where(case: Case, path: str) -> str:
    """Return a remark's place in words; a donor named behind a plan follows it."""
    part, _, also = path.partition(":")
    try:
        words = spoken_part(to_raw(case), parse_path(part)) if part else "case"
    except ValueError:
        words = part
    words = f"{words}, {also}" if also else words
    return one_line(words[:1].upper() + words[1:])


def _by(answer: Mapping[str, str | None]) -> str:
    held = [clean(answer[key] or "") for key in ("by", "date")]
    return ", ".join(one for one in held if one) or "not stated"


def _run(content: Content) -> Section:
    comparison, found = content.comparison, versions()
    depths = listed([DEPTH_NAMES[depth] for depth in comparison.depths])
    rows = [
        ("Program", f"Rescue Planner {comparison.program_version}"),
        ("Libraries", ", ".join(f"{name} {held}" for name, held in found.items())),
        ("Case", one_line(comparison.title)),
        ("Hash of the inputs (SHA-256)", comparison.case_hash),
        ("Short hash in captions", comparison.case_hash[:SHORT_HASH]),
        ("Seed", str(comparison.seed)),
        ("Depths", depths),
        ("What-if", one_line(comparison.what_if or "none")),
        ("Plans", listed([plan_label(comparison, plan) for plan in comparison.plans])),
        ("Run begun (UTC)", f"{content.occasion.started:%Y-%m-%d %H:%M:%S}"),
    ]
    return Section(
        "Run record", (Table("What made these results", ("Matter", "Value"), tuple(rows)),)
    )
