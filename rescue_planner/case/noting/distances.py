"""Remarks on gene diversity between populations: what the FST values imply together."""

from __future__ import annotations

from collections.abc import Iterator
from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from rescue_planner.case.document import Case
from rescue_planner.case.noting.base import Remark
from rescue_planner.case.paths import format_path
from rescue_planner.case.population import Donor
from rescue_planner.case.quantity import Quantity
from rescue_planner.theory.diversity import between_from_fst, hudson_from_nei, least_fst

_SLACK = 1e-9


@dataclass(frozen=True, slots=True)
class _Pair:
    """Two populations (0 the recipient), their FST as entered, and where it stands."""

    one: int
    two: int
    fst: float
    form: str
    path: str


def on_distances(case: Case) -> Iterator[Remark]:
    """Yield remarks on diversities between populations at the start."""
    names = [case.recipient.name, *(donor.name for donor in case.donors)]
    own = [float(case.recipient.gene_diversity.best)]
    own += [float(donor.gene_diversity.best) for donor in case.donors]
    reference = float(case.recipient.reference_gene_diversity.best)
    whole = np.diag(own)
    for pair in _pairs(case):
        between = _between(own, pair)
        whole[pair.one, pair.two] = whole[pair.two, pair.one] = between
        told = (names[pair.one], names[pair.two])
        yield from _between_own(own, pair, between, told)
        if pair.one == 0 and between > reference + _SLACK:
            yield Remark(
                "kinship-below-0",
                pair.path,
                f"Kinship between {told[0]} and {told[1]} is {1 - between / reference:.3f}, below "
                "0 on the reference given. It is kept as it is; inbreeding costs use 0.",
            )
    yield from _assumed(case, whole, names)
    least = np.linalg.eigvalsh(1 - whole / reference)[0]
    if len(names) > 1 and least < -_SLACK:
        yield Remark(
            "kinships-not-possible",
            "donors",
            "The kinships between recipient and donors at the start could not all hold at once "
            f"(smallest eigenvalue {least:.3g}). Check the diversities, the FST values and the "
            "reference: they may come from different markers.",
        )


def _pairs(case: Case) -> Iterator[_Pair]:
    for i, donor in enumerate(case.donors, start=1):
        path = f"donors[{i - 1}].fst_to_recipient"
        yield _Pair(0, i, float(donor.fst_to_recipient.best), donor.fst_form, path)
        for j, other in enumerate(case.donors[: i - 1], start=1):
            said = _said(donor, other, i - 1) or _said(other, donor, j - 1)
            if said is not None:
                fst, form, path = said
                yield _Pair(j, i, float(fst.best), form, path)


def _said(donor: Donor, other: Donor, place: int) -> tuple[Quantity, str, str] | None:
    fst = donor.fst_to_donors.get(other.name)
    path = format_path(("donors", place, "fst_to_donors", other.name))
    return None if fst is None else (fst, donor.fst_form, path)


def _between(own: list[float], pair: _Pair) -> float:
    fst = float(hudson_from_nei(pair.fst)) if pair.form == "nei" else pair.fst
    return float(between_from_fst(own[pair.one], own[pair.two], fst))


def _between_own(
    own: list[float], pair: _Pair, between: float, told: tuple[str, str]
) -> Iterator[Remark]:
    larger = max(own[pair.one], own[pair.two])
    if between > 1 + _SLACK:
        yield Remark(
            "between-above-1",
            pair.path,
            f"Gene diversity between {told[0]} and {told[1]} would be {between:.3f}, and no "
            "probability is above 1. Are diversities and FST from the same markers, and which FST "
            "is it?",
        )
    if between < larger - _SLACK:
        least = float(least_fst(own[pair.one], own[pair.two]))
        in_nei = f" ({least / (2 - least):.3f} in Nei’s form)" if pair.form == "nei" else ""
        yield Remark(
            "between-below-own",
            pair.path,
            f"Gene diversity between {told[0]} and {told[1]} ({between:.3f}) is below what one of "
            f"them holds itself ({larger:.3f}). Populations that only drifted apart would have an "
            f"FST of at least {least:.3f}{in_nei} at these diversities, and {pair.fst:g} was "
            "entered. Which FST is it (Hudson’s, Nei’s or another), and from the same markers?",
        )


def _assumed(case: Case, whole: NDArray[np.float64], names: list[str]) -> Iterator[Remark]:
    """Fill in the diversity of donors whose FST was not given, and say what that implies."""
    for i in range(2, len(names)):
        for j in range(1, i):
            if whole[i, j] != 0:
                continue
            mean = (whole[i, i] + whole[j, j]) / 2
            between = max((whole[0, i] + whole[0, j]) / 2, mean)
            whole[i, j] = whole[j, i] = between
            yield Remark(
                "fst-assumed",
                format_path(("donors", i - 1, "fst_to_donors", names[j])),
                f"The FST between the donors {names[j]} and {names[i]} was not given. From their "
                f"distances to the recipient it is taken as {1 - mean / between:.3f} (Hudson’s "
                "form). It matters only where animals of both are released.",
            )
