"""Edits of what is asked: targets, what-ifs, and answers to remarks."""

from __future__ import annotations

from collections.abc import Iterable, Mapping
from typing import Any

from rescue_planner.case.document import Answer, Case, Change
from rescue_planner.case.edits.base import Edit, append, done, given, index_of, plain, removed
from rescue_planner.case.measures import title
from rescue_planner.case.paths import drop, get, put
from rescue_planner.case.quantity import Quantity
from rescue_planner.case.raw import to_raw

Number = float | Quantity


def add_target(case: Case, measure: str, by_year: Number, **more: Number | str | None) -> Edit:
    """Add a target; `more` holds at_least or at_most, owner and reason.

    Raises
    ------
    InvalidCase
        When the measure is unknown, no bound is given or the year is before the start.
    """
    target = {"measure": measure, "by_year": plain(by_year), **given(more)}
    sentence = f"Add a target for {_measure_name(measure)}"
    return done(sentence, append(to_raw(case), "targets", target))


def _measure_name(key: str) -> str:
    try:
        return title(key)
    except KeyError:
        return f"“{key}”"


def remove_target(case: Case, index: int) -> Edit:
    """Remove a target.

    Raises
    ------
    KeyError
        When there is no such target.
    """
    raw = to_raw(case)
    name = _measure_name(get(raw, ("targets", index, "measure")))
    return done(f"Remove the target for {name}", removed(raw, "targets", index))


def add_what_if(
    case: Case,
    name: str,
    changes: Iterable[Change | Mapping[str, Any]],
    asked_by: str | None = None,
    date: str | None = None,
) -> Edit:
    """Add a what-if; each change has a path and times or set.

    Raises
    ------
    InvalidCase
        When a path finds nothing, a change says neither or both, or the name is taken.
    """
    about = given({"asked_by": asked_by, "date": date})
    what_if = {"name": name, **about, "changes": plain([*changes])}
    return done(f"Add what-if “{name}”", append(to_raw(case), "what_ifs", what_if))


def remove_what_if(case: Case, name: str) -> Edit:
    """Remove a what-if.

    Raises
    ------
    KeyError
        When there is no such what-if.
    """
    raw = to_raw(case)
    place = index_of(raw, "what_ifs", name)
    return done(f"Remove what-if “{name}”", removed(raw, "what_ifs", place))


def answer_remark(
    case: Case, remark: str, reason: str | None, by: str | None = None, date: str | None = None
) -> Edit:
    """Keep a person's reason beside a remark; without a reason the answer is taken back.

    `remark` is the remark's `name`: its key and its path.
    """
    raw = to_raw(case)
    held = [answer for answer in raw.get("answers") or () if answer["remark"] != remark]
    if reason:
        answer = Answer(**given({"remark": remark, "reason": reason, "by": by, "date": date}))
        return done(f"Answer the remark “{remark}”", put(raw, "answers", [*held, plain(answer)]))
    sentence = f"Take back the answer to the remark “{remark}”"
    if held:
        return done(sentence, put(raw, "answers", held))
    return done(sentence, drop(raw, "answers") if "answers" in raw else raw)
