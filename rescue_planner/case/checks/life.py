"""Life cycles: the recipient's and each donor's own."""

from __future__ import annotations

from collections.abc import Iterator

from rescue_planner.case.faults import Problem
from rescue_planner.case.tolerant import Raw, at, mapping, parts, value, value_at

_NEAR_ONE = 1e-6
_MOST_YOUNG = 1_000_000


def check_life(raw: Raw) -> Iterator[Problem]:
    """Yield every problem of a life cycle that one field alone does not show."""
    yield from _one_cycle(raw.get("life_cycle"), "life_cycle")
    for place, donor in parts(raw, "donors"):
        yield from _one_cycle(donor.get("life_cycle"), f"donors[{place}].life_cycle")


def _one_cycle(cycle: object, where: str) -> Iterator[Problem]:
    if not isinstance(cycle, dict):
        return
    last = value_at(cycle, "last_age")
    for sex in ("female", "male"):
        first = value_at(cycle, "first_breeding_age", sex)
        if last is not None and first is not None and last < first:
            text = f"The last age {last:g} is below the first breeding age of {sex}s, {first:g}: "
            yield Problem(f"{where}.last_age", text + "correct one of them.")
    yield from _young(cycle, f"{where}.young_per_breeding_female")
    for name in ("first_year", "subadult", "adult"):
        mean = value_at(cycle, "yearly_survival", name)
        sd = value_at(cycle, "yearly_sd", name, otherwise=0)
        if mean is None or sd is None or not 0 <= mean <= 1 or sd <= 0:
            continue
        if sd * sd >= mean * (1 - mean):
            most = (mean * (1 - mean)) ** 0.5
            text = f"A share with mean {mean:g} cannot differ between years by an SD of {sd:g}: it "
            yield Problem(f"{where}.yearly_sd.{name}", f"{text}must stay below {most:.3g}.")


def _young(cycle: Raw, where: str) -> Iterator[Problem]:
    young = at(cycle, "young_per_breeding_female")
    if not isinstance(young, dict):
        return
    has = [young.get(key) is not None for key in ("mean", "counts")]
    if all(has):
        yield Problem(where, "Both a mean and the chance of each number are given: keep one.")
    elif not any(has):
        yield Problem(where, "Neither a mean nor the chance of each number is given: add one.")
    counts = mapping(young, "counts")
    if not has[1] or not isinstance(young["counts"], dict):
        return
    for key in counts:
        if not (key.isascii() and key.isdigit() and len(key) < 8 and int(key) <= _MOST_YOUNG):
            text = f"“{key[:40]}” is not a number of young: write a whole number, 0 or more."
            yield Problem(f"{where}.counts", text)
    chances = [value(one) for one in counts.values()]
    total = sum(one for one in chances if one is not None)
    if None not in chances and abs(total - 1) > _NEAR_ONE:
        text = f"The chances of each number of young sum to {total:.6g}: they must sum to 1."
        yield Problem(f"{where}.counts", text)
