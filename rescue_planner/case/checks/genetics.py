"""Genetics: fitness that leaves somebody alive, FST the same both ways, variance for a trait."""

from __future__ import annotations

from collections.abc import Iterator

from rescue_planner.case.faults import Problem
from rescue_planner.case.paths import format_path
from rescue_planner.case.tolerant import Raw, at, mapping, parts, value, value_at
from rescue_planner.theory.diversity import hudson_from_nei

_NEAR = 1e-9


def check_genetics(raw: Raw) -> Iterator[Problem]:
    """Yield every problem of loci, trait and FST that one field alone does not show."""
    for place, locus in parts(raw, "loci"):
        yield from _fitness(locus, f"loci[{place}]")
    if value_at(raw, "trait", "heritability") == 0:
        text = (
            "A trait with heritability 0 cannot respond to selection: give it, or remove the trait."
        )
        yield Problem("trait.heritability", text)
    yield from _fst_both_ways(raw)


def _fitness(locus: Raw, where: str) -> Iterator[Problem]:
    given = locus.get("fitness")
    fitness = [value(one) for one in given] if isinstance(given, list) else []
    if len(fitness) != 3:
        return
    frequency = value_at(locus, "frequency")
    if all(one == 0 for one in fitness):
        text = "The fitness of all three genotypes is 0, so no young would live: raise one."
        yield Problem(f"{where}.fitness", text)
    elif frequency in (0, 1) and fitness[0 if frequency == 1 else 2] == 0:
        only = "AA" if frequency == 1 else "aa"
        text = (
            f"At frequency {frequency:g} every animal is {only}, and the fitness of {only} is 0, "
        )
        yield Problem(f"{where}.fitness", text + "so no young would live: correct one of the two.")


def _fst_both_ways(raw: Raw) -> Iterator[Problem]:
    donors = {
        donor["name"]: (place, donor)
        for place, donor in parts(raw, "donors")
        if isinstance(donor.get("name"), str)
    }
    for name, (place, donor) in donors.items():
        for other in mapping(donor, "fst_to_donors"):
            if other not in donors or donors[other][0] >= place:
                continue  # each pair once, seen from the later of the two
            back = at(donors[other][1], "fst_to_donors", name)
            one, two = _hudson(donor, other), _hudson(donors[other][1], name)
            if back is not None and one is not None and two is not None and abs(one - two) > _NEAR:
                text = (
                    f"The FST between “{name}” and “{other}” is {one:.6g} here and {two:.6g} there "
                    "(both in Hudson’s form): correct one, or say it only once."
                )
                yield Problem(format_path(("donors", place, "fst_to_donors", other)), text)


def _hudson(donor: Raw, other: str) -> float | None:
    fst = value(mapping(donor, "fst_to_donors").get(other))
    if fst is None or not 0 <= fst < 1:
        return None
    return float(hudson_from_nei(fst)) if donor.get("fst_form") == "nei" else fst
