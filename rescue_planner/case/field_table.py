"""The tables of every field and every measure of a case, in Markdown, from the definitions.

`python -m rescue_planner.case.field_table docs/file-format.md` renews them between their marks.
"""

from __future__ import annotations

import json
import sys
from collections.abc import Iterator
from pathlib import Path
from typing import Any, Literal, get_args, get_origin

from pydantic import BaseModel
from pydantic.fields import FieldInfo

from rescue_planner.case.document import Case
from rescue_planner.case.fields import alternatives, is_model, written
from rescue_planner.case.inputs import input_of
from rescue_planner.case.measures import MEASURES
from rescue_planner.case.quantity import FrozenMap, Quantity

_HEADER = "| path | what | unit | allowed | left out |\n|---|---|---|---|---|"


def field_table() -> str:
    """Return the table: path, what it is, unit, what is allowed, what holds where left out."""
    rows = [f"| {' | '.join(_cell(cell) for cell in row)} |" for row in _rows(Case, "")]
    return "\n".join([_HEADER, *rows])


def measure_table() -> str:
    """Return the table of measures: key, name, unit in the file, what it is."""
    head = "| key | name | unit in the file | what it is |\n|---|---|---|---|"
    return "\n".join([head, *(f"| {' | '.join(row)} |" for row in _measure_rows())])


def _measure_rows() -> Iterator[tuple[str, ...]]:
    for measure in MEASURES:
        each = f"`{measure.key}:<{measure.per} name>`" if measure.per else ""
        whole = f"`{measure.key}`" if measure.whole_too or not measure.per else ""
        key = " and ".join(word for word in (whole, each) if word)
        unit = f"share: 1 is 100 {measure.unit}" if measure.kind == "share" else measure.unit
        of = " …" if measure.per and not measure.whole_too else ""
        yield key, f"{measure.name}{of}", unit, measure.meaning


def renewed(page: str) -> str:
    """Return `page` with the tables between its marks made anew.

    Raises
    ------
    ValueError
        When a mark is missing.
    """
    for name, table in (("measures", measure_table()), ("fields", field_table())):
        begin, end = f"<!-- {name}: begin -->", f"<!-- {name}: end -->"
        before, _, rest = page.partition(begin)
        _, mark, after = rest.partition(end)
        if not mark:
            raise ValueError(f"the page lacks the marks of the table of {name}")
        page = f"{before}{begin}\n{table}\n{end}{after}"
    return page


def _cell(text: str) -> str:
    return text.replace("|", "\\|")


def _rows(model: type[BaseModel], prefix: str) -> Iterator[tuple[str, ...]]:
    for name, field in model.model_fields.items():
        path = f"{prefix}.{name}" if prefix else name
        inner = [(one, suffix) for one, suffix in _inside(field.annotation) if is_model(one)]
        if path == "donors[*].life_cycle":
            yield f"`{path}`", "Life cycle of the donor", "", '`"same"`, or as `life_cycle`', "none"
        elif inner:
            default = field.get_default(call_default_factory=True)
            if not field.is_required() and default in (None, ()):
                kind = "object" if default is None else "list of objects"
                yield f"`{path}`", "The whole part", "", kind, "none"
            for one, suffix in inner:
                yield from _rows(one, path + suffix)
        else:
            yield _row(model, name, path)


def _inside(annotation: Any) -> list[tuple[Any, str]]:  # noqa: ANN401 - a type expression
    """Return what a field holds, with `[*]` for lists and `.<name>` for mappings by name."""
    found = []
    for one in alternatives(annotation):
        suffix = {tuple: "[*]", FrozenMap: ".<name>"}.get(get_origin(one), "")
        entries = alternatives(get_args(one)[0]) if suffix else (one,)
        found += [(entry, suffix) for entry in entries]
    return found


def _row(model: type[BaseModel], name: str, path: str) -> tuple[str, ...]:
    field, definition = model.model_fields[name], input_of(model, name)
    held = [(one, suffix) for one, suffix in _inside(field.annotation) if one is not type(None)]
    suffix = held[0][1] if held else ""
    meaning = f"{definition.name}. {definition.meaning}" if definition else _words(name)
    unit = definition.unit if definition and definition.unit != "–" else ""
    allowed = _kind(field.annotation, held)
    if definition and (definition.bounds or definition.whole):
        whole = "whole number" if definition.whole else "number"
        allowed = ", ".join(word for word in (whole, definition.bounds) if word)
    return f"`{path}{suffix}`", meaning, unit, allowed, _default(field)


def _words(name: str) -> str:
    return (name[:1].upper() + name[1:]).replace("_", " ")


def _kind(annotation: Any, held: list[tuple[Any, str]]) -> str:  # noqa: ANN401
    choices = _choices(annotation)
    if choices:
        return ", ".join(f"`{json.dumps(one)}`" for one in choices)
    types = [one for one, _ in held]
    return "number" if Quantity in types else "true or false" if bool in types else "text"


def _choices(annotation: Any) -> list[Any]:  # noqa: ANN401
    if get_origin(annotation) is Literal:
        return list(get_args(annotation))
    return [one for inner in get_args(annotation) for one in _choices(inner)]


def _default(field: FieldInfo) -> str:
    if field.is_required():
        return "needed"
    default = written(field.get_default(call_default_factory=True))
    return "none" if default in (None, [], {}) else f"`{json.dumps(default, ensure_ascii=False)}`"


if __name__ == "__main__":
    page = Path(sys.argv[1])
    page.write_text(renewed(page.read_text(encoding="utf-8")), encoding="utf-8", newline="\n")
