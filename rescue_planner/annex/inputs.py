"""The inputs of a case as rows: value, range, unit and origin of every one, those left out too."""

from __future__ import annotations

import re
from collections.abc import Iterator
from dataclasses import dataclass, replace

from pydantic import BaseModel

from rescue_planner.annex.left_out import taken
from rescue_planner.annex.numerals import given
from rescue_planner.annex.wording import clean, one_line
from rescue_planner.case.document import Case
from rescue_planner.case.inputs import Input, input_of
from rescue_planner.case.measures import measure_of, title, unit
from rescue_planner.case.paths import Path, format_path
from rescue_planner.case.quantity import FrozenMap, Quantity
from rescue_planner.projection.table import shortest

NOT_STATED = "not stated"
DEFAULT = "default"
LEFT_OUT = "left out"
CHOICE = "choice"
TEXT = "text"
# Shown elsewhere in the annex, not as inputs.
_ELSEWHERE = frozenset({"format", "version", "answers"})
_PROSE = frozenset(
    {"title", "name", "donor", "species", "authority", "prepared_by", "currency", "who_is_counted"}
    | {"question", "decided_by", "by_date", "goal", "other_causes_of_decline", "disease_status"}
    | {"what", "owner", "reason", "asked_by", "date", "path", "unit"}
)


@dataclass(frozen=True, slots=True)
class InputRow:
    """One input as the annex prints it."""

    path: str
    name: str
    value: str
    spread: str
    unit: str
    origin: str
    source: str
    date: str
    by: str


@dataclass(frozen=True, slots=True)
class _Around:
    """What a field's words depend on: the case, the measure of its rule or target."""

    case: Case
    measure: str | None = None
    set_here: bool = True


def input_rows(case: Case) -> tuple[InputRow, ...]:
    """Return every input of `case` in the order of the file."""
    return tuple(_part(case, (), _Around(case)))


def _part(part: BaseModel, at: Path, around: _Around) -> Iterator[InputRow]:
    measure = getattr(part, "when", None) if "then" in type(part).model_fields else None
    measure = measure or getattr(part, "measure", None) or around.measure
    for name in type(part).model_fields:
        if not at and name in _ELSEWHERE:
            continue
        held = getattr(part, name)
        known = around.set_here and name in part.model_fields_set and held is not None
        here = replace(around, measure=measure, set_here=known)
        yield from _field(held, input_of(type(part), name), (*at, name), here)


def _field(held: object, what: Input | None, at: Path, around: _Around) -> Iterator[InputRow]:
    if isinstance(held, Quantity):
        yield _number(held, what, at, around)
    elif isinstance(held, BaseModel):
        yield from _part(held, at, around)
    elif isinstance(held, tuple) and held:
        for index, one in enumerate(held):
            yield from _field(one, what, (*at, index), around)
    elif isinstance(held, FrozenMap) and len(held):
        for key, one in held.items():
            yield from _field(one, what, (*at, key), around)
    elif held is None or isinstance(held, tuple | FrozenMap):
        yield from _nothing(what, at, around)
    else:
        yield _plain(held, what, at, around)


def _number(held: Quantity, what: Input | None, at: Path, around: _Around) -> InputRow:
    value = shortest(float(held.best)) if _last(at) == "seed" else given(held.best)
    value = value if around.set_here else f"{LEFT_OUT}; taken as {value}"
    return InputRow(
        path=format_path(at),
        name=_name(what, at),
        value=value,
        spread=_spread(held),
        unit=_unit(what, around),
        origin=(held.origin or NOT_STATED) if around.set_here else DEFAULT,
        source=clean(held.source or ""),
        date=clean(held.date or ""),
        by=clean(held.by or ""),
    )


def _spread(held: Quantity) -> str:
    if held.spread is None:
        return ""
    low, high = held.spread
    shape = f", {held.shape}" if held.shape else ""
    return f"{given(low)} to {given(high)}{shape}"


def _nothing(what: Input | None, at: Path, around: _Around) -> Iterator[InputRow]:
    words = taken(around.case, at)
    if words is None:
        return
    value = f"{LEFT_OUT}; {words}" if words else LEFT_OUT
    yield _row(at, _name(what, at), value, _unit(what, around), DEFAULT)


def _plain(held: object, what: Input | None, at: Path, around: _Around) -> InputRow:
    prose = _last(at) in _PROSE
    text = clean(str(held)) if prose else _choice(held, _last(at))
    text = text if around.set_here else f"{LEFT_OUT}; taken as {text}"
    origin = (TEXT if prose else CHOICE) if around.set_here else DEFAULT
    return _row(at, _name(what, at), text, "", origin)


def _choice(held: object, field: str) -> str:
    if isinstance(held, bool):
        return "yes" if held else "no"
    if field in ("measure", "when"):
        try:
            return one_line(title(str(held)))
        except KeyError:
            return clean(str(held))
    return str(held).replace("_", " ")


def _row(at: Path, name: str, value: str, unit_text: str, origin: str) -> InputRow:
    return InputRow(format_path(at), name, value, "", unit_text, origin, "", "", "")


def _last(at: Path) -> str:
    return next(step for step in reversed(at) if isinstance(step, str))


def _name(what: Input | None, at: Path) -> str:
    field = _last(at)
    if what is None:
        return field.replace("_", " ").capitalize()
    name = what.name
    if at[-1] == field and len(at) > 1 and _is_key(what, at):
        name = f"{name}: {field}"
    if name == "Share":  # a share of a class: the field says which
        name = f"Share lost, {field.replace('_', ' ')}"
    if isinstance(at[-1], int):
        of = ("AA", "Aa", "aa") if field == "fitness" else ("first", "second", "third")
        return f"{name.partition(' of ')[0]}, {of[at[-1]]}"
    return name


_BY_NAME = frozenset({"donor_ancestry_at_start", "fst_to_donors", "donor_frequency", "counts"})


def _is_key(what: Input, at: Path) -> bool:
    """Return whether the last step is a key of a mapping by name, not a field."""
    return len(at) > 1 and at[-2] in _BY_NAME


def _unit(what: Input | None, around: _Around) -> str:
    text = "" if what is None else what.unit
    if text.startswith("currency"):
        return around.case.currency or "currency not named"
    if "measure’s unit" in text and around.measure is not None:
        return text.replace("measure’s unit", _measure_unit(around.measure, around.case))
    return re.sub("^–$", "", text)


def _measure_unit(measure: str, case: Case) -> str:
    try:
        kind = measure_of(measure).kind
    except KeyError:
        return "unknown measure"
    told = unit(measure, case.currency)
    return f"share (1 = 100 {told})" if kind == "share" else told
