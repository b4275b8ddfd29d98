"""The one definition of an input: its name, unit, bounds, meaning, published range, source.

A definition stands beside its field in the case types. Validation, the JSON schema, the forms,
the explainer, the annex's input table and the manual all read it from there.
"""

from __future__ import annotations

from collections.abc import Iterator
from dataclasses import dataclass
from types import UnionType
from typing import Annotated, Any, Union, get_args, get_origin

from pydantic import BaseModel, GetCoreSchemaHandler, GetJsonSchemaHandler
from pydantic_core import PydanticCustomError, core_schema

from rescue_planner.case.quantity import FrozenMap, Quantity


@dataclass(frozen=True, slots=True)
class Input:
    """What an input is; `Annotated[Quantity, Input(...)]` beside the field.

    `at_least` and `at_most` are inclusive bounds, `above` and `below` exclusive ones, in `unit`.
    """

    name: str
    unit: str
    meaning: str
    at_least: float | None = None
    at_most: float | None = None
    above: float | None = None
    below: float | None = None
    whole: bool = False
    published: str = ""
    source: str = ""
    caution: str = ""

    @property
    def bounds(self) -> str:
        """The bounds in words, empty where there are none."""
        words = [
            f"at least {self.at_least:.12g}" if self.at_least is not None else "",
            f"above {self.above:.12g}" if self.above is not None else "",
            f"at most {self.at_most:.12g}" if self.at_most is not None else "",
            f"below {self.below:.12g}" if self.below is not None else "",
        ]
        return ", ".join(word for word in words if word)

    def complaint(self, value: float) -> str | None:
        """Return what is wrong with `value`, or nothing."""
        if self.whole and value != int(value):
            return f"must be a whole number, got {value:.12g}"
        outside = (
            (self.at_least is not None and value < self.at_least)
            or (self.at_most is not None and value > self.at_most)
            or (self.above is not None and value <= self.above)
            or (self.below is not None and value >= self.below)
        )
        unit = "" if self.unit in ("", "–") else f" ({self.unit})"
        return f"must be {self.bounds}{unit}, got {value:.12g}" if outside else None

    def __get_pydantic_core_schema__(
        self,
        source: Any,  # noqa: ANN401 - pydantic's own protocol
        handler: GetCoreSchemaHandler,
    ) -> core_schema.CoreSchema:
        inside = self._inside(source)
        if inside is not source:  # each entry is checked, so that a problem names its own path
            return handler(inside)
        return core_schema.no_info_after_validator_function(self._checked, handler(source))

    def _inside(self, source: Any) -> Any:  # noqa: ANN401 - a type expression
        """Return `source` with this definition put on the entries of lists and mappings."""
        origin, entries = get_origin(source), get_args(source)
        if origin is tuple:
            kept = (e if e is Ellipsis else Annotated[e, self] for e in entries)
            return tuple.__class_getitem__(tuple(kept))
        if origin is FrozenMap:
            mapping: Any = FrozenMap
            return mapping[Annotated[entries[0], self]]
        if origin in (Union, UnionType) and any(self._inside(e) is not e for e in entries):
            return Union.__getitem__(tuple(self._inside(e) for e in entries))
        return source

    def __get_pydantic_json_schema__(
        self, core: core_schema.CoreSchema, handler: GetJsonSchemaHandler
    ) -> dict[str, Any]:
        schema = dict(handler(core))
        unit = f" Unit: {self.unit}." if self.unit not in ("", "–") else ""
        bounds = f" Bounds: {self.bounds}." if self.bounds else ""
        one_number = not _holds_many(schema)
        if one_number and self._limits:  # a plain number, and each number of the long form
            numbers = {part: dict(self._limits) for part in ("best", "low", "high")}
            schema |= self._limits | {"properties": numbers}
        schema["title"] = self.name
        schema["description"] = f"{self.meaning}{unit}{bounds}"
        return schema

    @property
    def _limits(self) -> dict[str, Any]:
        """The bounds as JSON Schema words them; they bind numbers only."""
        words = {
            "minimum": self.at_least,
            "maximum": self.at_most,
            "exclusiveMinimum": self.above,
            "exclusiveMaximum": self.below,
            "multipleOf": 1 if self.whole else None,
        }
        return {word: bound for word, bound in words.items() if bound is not None}

    def _checked(self, value: Any) -> Any:  # noqa: ANN401
        if isinstance(value, Quantity):
            held = [("best", value.best), ("low", value.low), ("high", value.high)]
            for part, one in held:
                complaint = None if one is None else self.complaint(one)
                if complaint:
                    text = complaint if part == "best" else f"its {part} {complaint}"
                    raise PydanticCustomError("bounds", "{text}", {"text": text})
        return value


def _holds_many(schema: dict[str, Any]) -> bool:
    """Return whether a schema is that of a list or a mapping by name, not of one number."""
    shapes = [schema, *schema.get("anyOf", ())]
    return any(shape.get("type") in ("array", "object") for shape in shapes)


def input_of(model: type[BaseModel], field: str) -> Input | None:
    """Return the definition beside one field, or nothing where the field is not an input."""
    found = [m for m in model.model_fields[field].metadata if isinstance(m, Input)]
    return found[0] if found else None


def every_input(model: type[BaseModel]) -> Iterator[tuple[str, Input]]:
    """Yield (path pattern, definition) for every input below `model`, in the order of the file.

    Lists read `[*]`, mappings by name read `<name>`, as in `plans[*].releases[*].who.females`.
    """
    yield from _walk(model, "")


def _walk(model: type[BaseModel], prefix: str) -> Iterator[tuple[str, Input]]:
    for name, field in model.model_fields.items():
        path = f"{prefix}.{name}" if prefix else name
        definition = input_of(model, name)
        if definition is not None:
            yield path + _suffix(field.annotation), definition
        for inner, suffix in _inner_models(field.annotation):
            yield from _walk(inner, path + suffix)


def _suffix(annotation: Any) -> str:  # noqa: ANN401 - a type expression
    origin = getattr(annotation, "__origin__", None)
    if origin is tuple:
        return "[*]"
    if origin is FrozenMap:
        return ".<name>"
    return next((s for a in get_args(annotation) if (s := _suffix(a))), "")


def _inner_models(annotation: Any) -> Iterator[tuple[type[BaseModel], str]]:  # noqa: ANN401
    if isinstance(annotation, type) and issubclass(annotation, BaseModel):
        if annotation is not Quantity:
            yield annotation, ""
        return
    origin = getattr(annotation, "__origin__", None)
    suffix = "[*]" if origin is tuple else ".<name>" if origin is FrozenMap else ""
    for inner in get_args(annotation):
        for model, deeper in _inner_models(inner):
            yield model, suffix + deeper
