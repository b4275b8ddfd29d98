"""A number of the case: plain, or with its range, origin and citation."""

from __future__ import annotations

from collections.abc import Iterator, Mapping
from typing import Annotated, Any, Generic, Literal, TypeVar

from pydantic import (
    BaseModel,
    ConfigDict,
    GetCoreSchemaHandler,
    GetJsonSchemaHandler,
    PlainValidator,
    SerializerFunctionWrapHandler,
    model_serializer,
    model_validator,
)
from pydantic_core import PydanticCustomError, core_schema

Shape = Literal["triangular", "pert", "normal", "lognormal", "beta", "uniform"]
Origin = Literal["measured", "borrowed", "guessed"]


def number(value: object) -> int | float:
    """Return `value` if it is a finite number.

    Raises
    ------
    PydanticCustomError
        For text, true or false, nothing, NaN and infinities.
    """
    if isinstance(value, bool) or not isinstance(value, int | float):
        raise PydanticCustomError("number", "must be a number, got {got}", {"got": _shown(value)})
    if not abs(value) <= 1e15:  # NaN fails too; math.isfinite would overflow on a huge integer
        raise PydanticCustomError(
            "number", "must be a finite number below 1e15, got {got}", {"got": _shown(value)}
        )
    return value


def _shown(value: object) -> str:
    if isinstance(value, int) and not isinstance(value, bool):
        return "a huge number"  # repr of thousands of digits is refused by Python itself
    words = {None: "nothing", True: "true", False: "false"}
    if value is None or isinstance(value, bool):
        return words[value]
    text = repr(value) if not isinstance(value, str) else f'the text "{value}"'
    return text if len(text) <= 60 else text[:57] + "…"


Number = Annotated[int | float, PlainValidator(number, json_schema_input_type=float)]


class Quantity(BaseModel):
    """One number with what is known about it; a plain number in the file is its `best`.

    Raises
    ------
    pydantic.ValidationError
        When a number is not finite, or low, best and high are out of order.
    """

    model_config = ConfigDict(frozen=True, extra="forbid")
    best: Number
    low: Number | None = None
    high: Number | None = None
    shape: Shape | None = None
    origin: Origin | None = None
    source: str | None = None
    date: str | None = None
    by: str | None = None

    @model_validator(mode="before")
    @classmethod
    def _plain(cls, value: Any) -> Any:  # noqa: ANN401 - whatever the file holds
        return value if isinstance(value, Mapping | Quantity) else {"best": value}

    @model_validator(mode="after")
    def _in_order(self) -> Quantity:
        low = self.best if self.low is None else self.low
        high = self.best if self.high is None else self.high
        if not low <= self.best <= high:
            raise PydanticCustomError(
                "order",
                "low, best and high must be in order: got {low}, {best}, {high}",
                {"low": f"{low:g}", "best": f"{self.best:g}", "high": f"{high:g}"},
            )
        return self

    @model_serializer(mode="wrap")
    def _write(self, handler: SerializerFunctionWrapHandler) -> Any:  # noqa: ANN401
        written = handler(self)
        return written["best"] if self.model_fields_set == {"best"} else written

    @classmethod
    def __get_pydantic_json_schema__(
        cls, core: core_schema.CoreSchema, handler: GetJsonSchemaHandler
    ) -> dict[str, Any]:
        return {"anyOf": [{"type": "number"}, handler(core)]}

    @property
    def spread(self) -> tuple[float, float] | None:
        """Low and high, or nothing where no range was given."""
        if self.low is None and self.high is None:
            return None
        low = self.best if self.low is None else self.low
        high = self.best if self.high is None else self.high
        return float(low), float(high)


V = TypeVar("V")


class FrozenMap(Mapping[str, V], Generic[V]):
    """A read-only, hashable mapping from names to values, in the order of the file."""

    __slots__ = ("_items",)

    def __init__(self, items: Mapping[str, V] | None = None) -> None:
        self._items: dict[str, V] = dict(items or {})

    def __getitem__(self, name: str) -> V:
        return self._items[name]

    def __iter__(self) -> Iterator[str]:
        return iter(self._items)

    def __len__(self) -> int:
        return len(self._items)

    def __hash__(self) -> int:
        return hash(frozenset(self._items.items()))  # equality ignores the order too

    def __repr__(self) -> str:
        return f"FrozenMap({self._items!r})"

    @classmethod
    def __get_pydantic_core_schema__(
        cls,
        source: Any,  # noqa: ANN401 - pydantic's own protocol
        handler: GetCoreSchemaHandler,
    ) -> core_schema.CoreSchema:
        (value_type,) = source.__args__
        values = handler.generate_schema(value_type)
        plain = core_schema.dict_schema(core_schema.str_schema(), values)
        return core_schema.no_info_before_validator_function(
            lambda given: dict(given) if isinstance(given, FrozenMap) else given,
            core_schema.no_info_after_validator_function(cls, plain),
            serialization=core_schema.wrap_serializer_function_ser_schema(
                lambda held, serializer: serializer(dict(held)), schema=plain
            ),
        )
