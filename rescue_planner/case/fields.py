"""What may stand at a path of the case: the field, its definition and its default."""

from __future__ import annotations

from collections.abc import Iterator
from typing import Any, get_args, get_origin

from pydantic import BaseModel

from rescue_planner.case.document import Case
from rescue_planner.case.inputs import Input, input_of
from rescue_planner.case.paths import ANY, Path, Step, get, put
from rescue_planner.case.quantity import FrozenMap, Quantity


def alternatives(annotation: Any) -> tuple[Any, ...]:  # noqa: ANN401 - a type expression
    """Return the types that a field may hold; lists and mappings by name stay whole."""
    if get_origin(annotation) in (tuple, FrozenMap) or isinstance(annotation, type):
        return (annotation,)
    return tuple(a for inner in get_args(annotation) for a in alternatives(inner))


def is_model(annotation: Any) -> bool:  # noqa: ANN401 - a type expression
    """Return whether a type is a part of the case with fields of its own."""
    return (
        isinstance(annotation, type)
        and issubclass(annotation, BaseModel)
        and annotation is not Quantity
    )


def _after(annotation: Any, step: Step) -> Any | None:  # noqa: ANN401 - a type expression
    """Return the type reached from `annotation` by one step, or nothing."""
    for one in alternatives(annotation):
        origin = get_origin(one)
        if origin is tuple and not isinstance(step, str):
            return get_args(one)[0]
        if origin is FrozenMap and not isinstance(step, int):
            return get_args(one)[0]
        if is_model(one) and isinstance(step, str) and step in one.model_fields:
            return one.model_fields[step].annotation
    return None


def model_at(path: Path) -> type[BaseModel] | None:
    """Return the part of the case that stands at `path`, or nothing where there is none."""
    annotation: Any = Case
    for step in path:
        annotation = _after(annotation, step)
        if annotation is None:
            return None
    return next((one for one in alternatives(annotation) if is_model(one)), None)


def definition_at(path: Path) -> Input | None:
    """Return the definition of the input at `path`, or nothing where it is not an input."""
    cut = len(path)
    while cut and not isinstance(path[cut - 1], str):
        cut -= 1
    for end in (cut, cut - 1):  # the last name is a field, or an entry of a mapping by name
        name = path[end - 1] if end > 0 else ANY
        model = model_at(path[: end - 1]) if end > 0 else None
        if model is not None and isinstance(name, str) and name in model.model_fields:
            return input_of(model, name)
    return None


def is_number(path: Path) -> bool:
    """Return whether a number of the case stands, or may stand, at `path`."""
    annotation: Any = Case
    for step in path:
        annotation = _after(annotation, step)
        if annotation is None:
            return False
    return Quantity in alternatives(annotation)


def default_at(path: Path) -> Any:  # noqa: ANN401 - whatever the file may hold
    """Return what holds where the field at `path` is left out, as the file would write it."""
    model, name = model_at(path[:-1]), path[-1]
    if model is None or not isinstance(name, str) or name not in model.model_fields:
        return None
    field = model.model_fields[name]
    if field.is_required():
        return None
    default = field.get_default(call_default_factory=True)
    return written(default)


def written(default: Any) -> Any:  # noqa: ANN401 - whatever a field may hold
    """Return a default as the file would write it."""
    if isinstance(default, BaseModel):
        return default.model_dump(mode="json", exclude_unset=True)
    if isinstance(default, FrozenMap):
        return {}
    return [written(one) for one in default] if isinstance(default, tuple) else default


def filled_at(raw: Any, path: Path) -> Any:  # noqa: ANN401 - whatever the file holds
    """Return what holds at `path`: what stands there, or the default of the part or the field."""
    for end in range(1, len(path) + 1):
        step = path[end - 1]
        if isinstance(raw, dict):
            raw = raw.get(step)
        elif isinstance(raw, list) and isinstance(step, int) and step < len(raw):
            raw = raw[step]
        else:
            return None
        raw = default_at(path[:end]) if raw is None else raw
    return raw


def put_filled(raw: Any, path: Path, value: Any) -> Any:  # noqa: ANN401 - whatever the file holds
    """Return `raw` with `value` at `path`; parts on the way that were left out get their defaults.

    Raises
    ------
    KeyError
        When the path leads nowhere.
    """
    for end in range(1, len(path)):
        default = default_at(path[:end])
        if default and _left_out(raw, path[:end]):
            raw = put(raw, path[:end], default)
    return put(raw, path, value)


def _left_out(raw: Any, path: Path) -> bool:  # noqa: ANN401
    try:
        return get(raw, path) is None
    except KeyError:
        return True


def matches(raw: Any, pattern: Path) -> Iterator[Path]:  # noqa: ANN401 - whatever the file holds
    """Yield the path of every number of a case that `pattern` names.

    A field that was left out counts where the part that holds it is there or has a default.
    """
    if is_number(pattern):
        yield from _matches(raw, pattern, ())


def _matches(node: Any, rest: Path, done: Path) -> Iterator[Path]:  # noqa: ANN401
    if not rest:
        yield done
        return
    step = rest[0]
    if step is ANY:
        inner = (
            node if isinstance(node, dict) else range(len(node) if isinstance(node, list) else 0)
        )
        for one in inner:
            yield from _matches(node[one], rest[1:], (*done, one))
    elif isinstance(node, list) and isinstance(step, int) and step < len(node):
        yield from _matches(node[step], rest[1:], (*done, step))
    elif isinstance(node, dict) and isinstance(step, str):
        if step not in node and model_at(done) is None:
            return  # no such entry in a mapping by name
        held = node.get(step)
        yield from _matches(
            default_at((*done, step)) if held is None else held, rest[1:], (*done, step)
        )
