"""Words for a place in the case and for a value, as the undo menu and the edit trail show them."""

from __future__ import annotations

from typing import Any

from rescue_planner.case import fields
from rescue_planner.case.paths import Path, get
from rescue_planner.case.quantity import Quantity

_HOLDERS = {
    "plans": "plan",
    "donors": "donor",
    "loci": "tracked locus",
    "what_ifs": "what-if",
    "releases": "release",
    "steady": "steady flow",
    "rules": "rule",
    "other_actions": "other action",
    "targets": "target",
    "die_offs": "die-off",
    "changes": "change",
    "answers": "answer",
}
_OF = {"releases", "steady", "rules", "other_actions", "changes"}  # of a plan or what-if


def spoken_place(raw: Any, path: Path) -> str:  # noqa: ANN401 - whatever the file holds
    """Return words for a place, as in `females (release 1 of plan “Trickle”)`."""
    definition = fields.definition_at(path)
    names = [step for step in path if isinstance(step, str)]
    name = names[-1].replace("_", " ")
    if definition is not None and definition.name:
        name = lowered(definition.name)
        if path[-1] in Quantity.model_fields and fields.model_at(path[:-1]) is None:
            name = f"{path[-1]} of {name}"
        elif fields.is_number(path) and fields.model_at(path[:-1]) is None:
            name = f"{name}, {_entry(path[-1])}"
    holders = _holders(raw, path)
    return f"{name} ({holders})" if holders else name


def spoken_part(raw: Any, path: Path) -> str:  # noqa: ANN401
    """Return words for an entry of a list, as in `release 1 of plan “Trickle”`."""
    return _holders(raw, path) or spoken_place(raw, path)


def _entry(step: object) -> str:
    return f"entry {step + 1}" if isinstance(step, int) else f"“{step}”"


def _holders(raw: Any, path: Path) -> str:  # noqa: ANN401
    found: list[str] = []
    for at, step in enumerate(path):
        kind = path[at - 1] if at else None
        if not isinstance(step, int) or kind not in _HOLDERS:
            continue
        word = _HOLDERS[str(kind)]
        try:
            held = get(raw, path[: at + 1])
        except KeyError:
            held = None
        name = held.get("name", held.get("what")) if isinstance(held, dict) else None
        found.insert(0, f"{word} “{name}”" if isinstance(name, str) else f"{word} {step + 1}")
    return " of ".join(found)


def lowered(name: str) -> str:
    """Return a name for the middle of a sentence: `adults`, but `FST to the recipient`."""
    return name[:1].lower() + name[1:] if name[1:2].islower() or name[1:2] == " " else name


def spoken_value(value: Any) -> str:  # noqa: ANN401 - whatever the file may hold
    """Return words for a value, as in `14 (9 to 30)`."""
    if isinstance(value, Quantity):
        spread = value.spread
        shown = f"{value.best:.12g}"
        return shown if spread is None else f"{shown} ({spread[0]:.12g} to {spread[1]:.12g})"
    if isinstance(value, bool):
        return "yes" if value else "no"
    if isinstance(value, int | float):
        return f"{value:.12g}"
    if isinstance(value, str):
        return f"“{value if len(value) <= 60 else value[:59] + '…'}”"
    return "a new description"


def counted(animals: float, one: str) -> str:
    """Return a number with its noun, as in `1 female` and `2 females`."""
    return f"{animals:.12g} {one}" if animals == 1 else f"{animals:.12g} {one}s"
