"""Target checks as a table: a row a target, a column a plan."""

from __future__ import annotations

from rescue_planner.advice.targets import TargetCheck, not_checked, target_checks
from rescue_planner.case.document import Case
from rescue_planner.case.measures import measure_of, split, title
from rescue_planner.projection import reading
from rescue_planner.projection.results import DEPTH_NAMES, Comparison
from rescue_planner.projection.value_table import ValueTable, wrapped

GOAL, NARROW = 40, 12  # letters in a line of a cell
MET, MISSED = "✓ met", "✗ not met"


def target_table(case: Case, comparison: Comparison, plans: tuple[str, ...]) -> ValueTable:
    """Return what each plan gives for each target, at each depth that has the measure."""
    checks = target_checks(case, comparison)
    rows: dict[tuple[int, str], dict[str, TargetCheck]] = {}
    for check in checks:
        rows.setdefault((check.target, check.depth), {})[check.plan] = check
    names = [wrapped(f"{reading.letter(comparison, plan)} {plan}") for plan in plans]
    body = tuple(
        (
            wrapped(_goal(case, number, next(iter(found.values()))), GOAL),
            wrapped(case.targets[number - 1].owner or "not stated"),
            wrapped(DEPTH_NAMES[depth], NARROW),
            *(_cell(comparison, found.get(plan)) for plan in plans),
        )
        for (number, depth), found in rows.items()
    )
    header = ("Target", "Owner", "Depth", *names)
    return ValueTable(header, 3, body, not_checked(case, comparison))


def _goal(case: Case, number: int, check: TargetCheck) -> str:
    times = reading.scale(check.measure)
    bounds = [
        f"at least {check.at_least * times:g}" if check.at_least is not None else "",
        f"at most {check.at_most * times:g}" if check.at_most is not None else "",
    ]
    words = " and ".join(bound for bound in bounds if bound)
    unit = measure_of(check.measure).unit
    by = reading.year_text(check.by_year)
    read = "" if abs(check.year - check.by_year) < 0.05 else f" (as of {check.year:g})"
    reason = case.targets[number - 1].reason
    why = f"\n{reason}" if reason else "\nno reason stated"
    return f"{title(check.measure)}: {words} ({unit}) by {by}{read}{why}"


def _cell(comparison: Comparison, check: TargetCheck | None) -> str:
    if check is None:
        return "–"
    gone = comparison.gone_after(check.plan)
    late = gone is not None and float(comparison.years[gone]) <= check.year + 1e-9
    if late and split(check.measure)[0] not in reading.GO_ON_WHEN_GONE:
        return f"{MISSED}\npopulation gone"
    value = check.value * reading.scale(check.measure)
    digits = reading.column_places(comparison, check.measure, comparison.plans)
    shown = reading.shown(check.measure, value, digits)
    if check.runs is not None and check.share is not None:
        count = round(check.share * check.runs)
        return f"{count} of {check.runs} runs\n{shown}"
    return f"{MET if check.met else MISSED}\n{shown}"
