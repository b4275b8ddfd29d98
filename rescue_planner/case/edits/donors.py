"""Edits of donors and tracked loci; names are changed wherever they are used."""

from __future__ import annotations

from collections.abc import Iterator, Mapping
from typing import Any

from rescue_planner.case.document import Case
from rescue_planner.case.edits.base import (
    Edit,
    Raw,
    append,
    done,
    given,
    index_of,
    plain,
    refuse,
    removed,
    repathed,
)
from rescue_planner.case.paths import Path, drop, format_path, get, parse_path, put
from rescue_planner.case.quantity import Quantity
from rescue_planner.case.raw import to_raw
from rescue_planner.case.spoken import spoken_part
from rescue_planner.case.tolerant import mapping, parts, value

Number = float | Quantity


def add_donor(
    case: Case,
    name: str,
    gene_diversity: Number,
    fst_to_recipient: Number,
    frequencies: Mapping[str, Number] | None = None,
    **more: Any,  # noqa: ANN401 - whatever a donor may hold
) -> Edit:
    """Add a donor.

    Parameters
    ----------
    case, name, gene_diversity, fst_to_recipient
        The case and what a donor needs.
    frequencies : mapping, optional
        Frequency of the named allele in this donor, for every tracked locus by name.
    **more
        Further fields of a donor, as in the file.

    Raises
    ------
    InvalidCase
        When something is wrong, or a tracked locus has no frequency for the donor.
    """
    needed = {"gene_diversity": gene_diversity, "fst_to_recipient": fst_to_recipient}
    raw = append(to_raw(case), "donors", {"name": name, **given(needed), **given(more)})
    for locus, frequency in (frequencies or {}).items():
        path = ("loci", index_of(raw, "loci", locus), "donor_frequency", name)
        raw = put(raw, path, plain(frequency))
    return done(f"Add donor “{name}”", raw)


def remove_donor(case: Case, name: str) -> Edit:
    """Remove a donor, with its allele frequencies and FST.

    Raises
    ------
    KeyError
        When there is no such donor.
    InvalidCase
        While a plan, target, what-if or the ancestry at the start uses it; the problems say where.
    """
    raw = to_raw(case)
    place = index_of(raw, "donors", name)
    used = [*_plan_uses(raw, name), *_measure_uses(raw, "donor", name)]
    ancestry = ("recipient", "donor_ancestry_at_start", name)
    if value(mapping(raw, *ancestry[:2]).get(name)):
        used.append(ancestry)
    used += [path for path, steps in _what_if_paths(raw) if _is_entry(steps, name)]
    _refuse_while_used(raw, used, f"the donor “{name}”")
    for path in list(_entries_by_donor(raw, name)):
        raw = _without_entry(raw, path)
    return done(f"Remove donor “{name}”", removed(raw, "donors", place))


def rename_donor(case: Case, name: str, new_name: str) -> Edit:
    """Rename a donor wherever it is used.

    Raises
    ------
    KeyError
        When there is no such donor.
    InvalidCase
        When the new name is taken or empty.
    """
    raw = to_raw(case)
    raw = put(raw, ("donors", index_of(raw, "donors", name), "name"), new_name)
    for path in list(_plan_uses(raw, name)):
        raw = put(raw, path, new_name)
    for path in list(_entries_by_donor(raw, name)):
        held = get(raw, path[:-1])
        renamed = {new_name if key == name else key: one for key, one in held.items()}
        raw = put(raw, path[:-1], renamed)
    raw = _renamed_measures(raw, "donor", name, new_name)
    raw = repathed(raw, lambda steps: _renamed_entry(steps, name, new_name))
    raw = _renamed_answers(raw, name, new_name)
    return done(f"Rename donor “{name}” to “{new_name}”", raw)


def add_locus(
    case: Case,
    name: str,
    frequency: Number,
    donor_frequency: Mapping[str, Number] | None = None,
    **more: Any,  # noqa: ANN401 - whatever a locus may hold
) -> Edit:
    """Add a tracked locus with its frequency in the recipient and in every donor by name.

    Raises
    ------
    InvalidCase
        When something is wrong, or a donor has no frequency.
    """
    needed = {"frequency": frequency, "donor_frequency": donor_frequency or None}
    locus = {"name": name, **given(needed), **given(more)}
    return done(f"Add tracked locus “{name}”", append(to_raw(case), "loci", locus))


def remove_locus(case: Case, name: str) -> Edit:
    """Remove a tracked locus.

    Raises
    ------
    KeyError
        When there is no such locus.
    InvalidCase
        While a rule, target or what-if uses it; the problems say where.
    """
    raw = to_raw(case)
    place = index_of(raw, "loci", name)
    _refuse_while_used(raw, list(_measure_uses(raw, "locus", name)), f"the tracked locus “{name}”")
    return done(f"Remove tracked locus “{name}”", removed(raw, "loci", place))


def rename_locus(case: Case, name: str, new_name: str) -> Edit:
    """Rename a tracked locus wherever it is used.

    Raises
    ------
    KeyError
        When there is no such locus.
    InvalidCase
        When the new name is taken or empty.
    """
    raw = to_raw(case)
    raw = put(raw, ("loci", index_of(raw, "loci", name), "name"), new_name)
    raw = _renamed_measures(raw, "locus", name, new_name)
    return done(f"Rename tracked locus “{name}” to “{new_name}”", raw)


# --- where a name is used --------------------------------------------------------------------


def _plan_uses(raw: Raw, donor: str) -> Iterator[Path]:
    """Yield the path of every release, steady flow and rule's release from a donor."""
    for place, plan in parts(raw, "plans"):
        for kind, below in (("releases", ()), ("steady", ()), ("rules", ("release",))):
            for which, _ in parts(plan, kind):
                path: Path = ("plans", place, kind, which, *below, "donor")
                if _or_none(raw, path) == donor:
                    yield path


def _or_none(raw: Raw, path: Path) -> Any:  # noqa: ANN401
    try:
        return get(raw, path)
    except KeyError:
        return None


def _measures(raw: Raw) -> Iterator[tuple[Path, str]]:
    for place, plan in parts(raw, "plans"):
        for which, rule in parts(plan, "rules"):
            yield ("plans", place, "rules", which, "when"), rule["when"]
    for which, target in parts(raw, "targets"):
        yield ("targets", which, "measure"), target["measure"]


_MEASURES_OF = {
    "donor": ("donor_ancestry", "donor_adults"),
    "locus": ("allele_frequency", "allele_kept", "allele_fixed"),
}


def _measure_uses(raw: Raw, kind: str, name: str) -> Iterator[Path]:
    keys = [f"{base}:{name}" for base in _MEASURES_OF[kind]]
    yield from (path for path, key in _measures(raw) if key in keys)


def _renamed_measures(raw: Raw, kind: str, name: str, new_name: str) -> Raw:
    for path in list(_measure_uses(raw, kind, name)):
        base = get(raw, path).partition(":")[0]
        raw = put(raw, path, f"{base}:{new_name}")
    return raw


def _entries_by_donor(raw: Raw, name: str) -> Iterator[Path]:
    """Yield the path of every entry that is kept under a donor's name."""
    if name in mapping(raw, "recipient", "donor_ancestry_at_start"):
        yield "recipient", "donor_ancestry_at_start", name
    for kind, field in (("donors", "fst_to_donors"), ("loci", "donor_frequency")):
        for place, one in parts(raw, kind):
            if name in mapping(one, field):
                yield kind, place, field, name


def _without_entry(raw: Raw, path: Path) -> Raw:
    raw = drop(raw, path)
    return raw if get(raw, path[:-1]) else drop(raw, path[:-1])


def _is_entry(steps: Path, name: str) -> bool:
    by_name = ("donor_frequency", "fst_to_donors", "donor_ancestry_at_start")
    return len(steps) > 1 and steps[-1] == name and steps[-2] in by_name


def _renamed_entry(steps: Path, name: str, new_name: str) -> Path:
    return (*steps[:-1], new_name) if _is_entry(steps, name) else steps


def _renamed_answers(raw: Raw, name: str, new_name: str) -> Raw:
    """Return `raw` with answers still answering remarks that name the donor."""
    for place, answer in parts(raw, "answers"):
        key, _, path = answer["remark"].partition(" ")
        place_of, _, also = path.partition(":")
        if also == name:
            told = f"{place_of}:{new_name}"
        else:
            try:
                told = format_path(_renamed_entry(parse_path(path), name, new_name))
            except ValueError:  # about the whole case
                continue
        raw = put(raw, ("answers", place, "remark"), f"{key} {told}".strip())
    return raw


def _what_if_paths(raw: Raw) -> Iterator[tuple[Path, Path]]:
    for place, what_if in parts(raw, "what_ifs"):
        for which, change in parts(what_if, "changes"):
            yield ("what_ifs", place, "changes", which, "path"), parse_path(change["path"])


def _refuse_while_used(raw: Raw, used: list[Path], what: str) -> None:
    if used:
        places = ", ".join(dict.fromkeys(spoken_part(raw, path) for path in used))
        text = f"It stays while {what} is used by {places}: change these first."
        raise refuse(format_path(used[0]), text)
