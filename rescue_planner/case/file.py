"""Opening and saving cases: `.rescue` (a zip) and bare `.json`."""

from __future__ import annotations

import contextlib
import hashlib
import json
import os
import shutil
import uuid
from collections.abc import Iterable, Mapping
from dataclasses import dataclass, field
from pathlib import Path
from typing import Any

from rescue_planner.case.container import (
    CASE,
    LOG,
    MOST_BYTES,
    MOST_CASE_BYTES,
    TABLES,
    ContainerError,
    is_table_name,
    packed,
    unpacked,
)
from rescue_planner.case.document import Case
from rescue_planner.case.json_text import JsonError, parse_json
from rescue_planner.case.migrate import VersionError, migrated
from rescue_planner.case.problems import read_case
from rescue_planner.case.raw import to_raw

SUFFIXES = (".rescue", ".json")


class CaseFileError(Exception):
    """A file that cannot be opened or saved; the text is one clear sentence for the user."""


@dataclass(frozen=True, slots=True)
class Opened:
    """What a file held.

    `said` has sentences about what opening changed (older versions, a damaged trail), `tables` the
    content of each table by name (`counts.csv`), `log` the edit trail.
    """

    case: Case
    said: tuple[str, ...] = ()
    tables: Mapping[str, bytes] = field(default_factory=dict)
    log: tuple[dict[str, Any], ...] = ()


def load(path: str | Path) -> Opened:
    """Open a case.

    Raises
    ------
    CaseFileError
        When the file is missing, damaged, too large, no case, or from a newer version.
    InvalidCase
        When the case in it has problems.
    """
    path = Path(path)
    content = _content(path)
    try:
        if not content.startswith(b"PK"):
            if len(content) > MOST_CASE_BYTES:
                raise ContainerError("it is too large for a case")
            members = {CASE: content}
        else:
            members = unpacked(content)
        raw, said = _plain_case(members[CASE])
    except (ContainerError, JsonError, VersionError) as error:
        raise CaseFileError(f"“{path.name}” cannot be opened: {error}.") from error
    log, told = _log(members.get(LOG, b""))
    tables = {
        name.removeprefix(TABLES): table
        for name, table in members.items()
        if name.startswith(TABLES)
    }
    return Opened(read_case(raw), (*said, *told), tables, log)


def _content(path: Path) -> bytes:
    try:
        if path.exists() and not path.is_file():  # a folder, a device, a pipe
            raise CaseFileError(f"“{path.name}” cannot be opened: it is not a file.")
        if path.stat().st_size > MOST_BYTES:
            raise CaseFileError(f"“{path.name}” cannot be opened: it is too large for a case.")
        return path.read_bytes()
    except OSError as error:
        why = _why(error)
        raise CaseFileError(f"“{path.name}” cannot be opened: {why}.") from error
    except ValueError as error:  # a name that no file can have
        raise CaseFileError("The file cannot be opened: its name is not valid.") from error


def _why(error: OSError) -> str:
    return (error.strerror or str(error) or "the disk refused").rstrip(".").lower()


def _plain_case(content: bytes) -> tuple[dict[str, Any], tuple[str, ...]]:
    raw = parse_json(content)
    if not isinstance(raw, dict):
        raise JsonError("it holds no case (an object with named fields)")
    return migrated(raw)


def _log(content: bytes) -> tuple[tuple[dict[str, Any], ...], tuple[str, ...]]:
    entries, bad = [], 0
    for line in content.splitlines():
        if not line.strip():
            continue
        try:
            entry = parse_json(line)
        except JsonError:
            entry = None
        if isinstance(entry, dict):
            entries.append(entry)
        else:
            bad += 1
    told = f"{bad} lines of the edit trail could not be read and are left out."
    return tuple(entries), (told,) if bad else ()


def save(
    path: str | Path,
    case: Case,
    *,
    tables: Mapping[str, bytes] | Iterable[tuple[str, bytes]] = (),
    log: Iterable[Mapping[str, Any]] = (),
) -> None:
    """Save a case beside its old file, then replace that; a failure leaves the old file whole.

    A `.json` holds the case alone: tables are refused there, and the edit trail is not written.

    Raises
    ------
    CaseFileError
        When the disk refuses, the suffix is another, or it would be too large to open again.
    """
    path = Path(path)
    suffix = path.suffix.lower()
    if suffix not in SUFFIXES:
        raise CaseFileError(
            f"“{path.name}” cannot be saved: its name must end in .rescue or .json."
        )
    held = dict(tables)
    try:
        if suffix == ".json":
            if held:
                raise ContainerError("a .json has no room for tables: save it as .rescue")
            content = case_text(case)
        else:
            content = packed(_members(case, held, log))
        _write(path, content)
    except ContainerError as error:
        raise CaseFileError(f"“{path.name}” cannot be saved: {error}.") from error
    except OSError as error:
        why = f"{_why(error)}; what was saved before is still there"
        raise CaseFileError(f"“{path.name}” cannot be saved: {why}.") from error


def _members(
    case: Case, tables: Mapping[str, bytes], log: Iterable[Mapping[str, Any]]
) -> dict[str, bytes]:
    for name in tables:
        if not is_table_name(name):
            raise ContainerError(f"a table cannot be called “{name[:80]}”")
    lines = [json.dumps(dict(entry), ensure_ascii=False, allow_nan=False) for entry in log]
    members = {CASE: case_text(case)}
    members |= {f"{TABLES}{name}": tables[name] for name in sorted(tables)}
    return members | ({LOG: ("\n".join(lines) + "\n").encode()} if lines else {})


def _write(path: Path, content: bytes) -> None:
    target = path.resolve()  # a link keeps pointing to the file
    beside = target.with_name(f".{uuid.uuid4().hex}.part")
    try:
        with beside.open("xb") as new:
            new.write(content)
            new.flush()
            os.fsync(new.fileno())
        if target.exists():
            shutil.copymode(target, beside)
        beside.replace(target)
    except BaseException:
        with contextlib.suppress(OSError):
            beside.unlink(missing_ok=True)
        raise


def case_text(case: Case) -> bytes:
    """Return the case as `case.json` holds it: what was given, in the order of the types."""
    text = json.dumps(to_raw(case), ensure_ascii=False, indent=2, allow_nan=False)
    return (text + "\n").encode()


def canonical(case: Case) -> bytes:
    """Return the one canonical form of a case: every value, defaults included, keys sorted.

    Two cases that say the same have the same canonical form: it makes no difference whether a
    default was written out, a number has `.0`, or in which order names stand in a mapping.
    """
    whole = _normal(case.model_dump(mode="json"))
    return json.dumps(
        whole, ensure_ascii=False, sort_keys=True, separators=(",", ":"), allow_nan=False
    ).encode()


def _normal(held: Any) -> Any:  # noqa: ANN401 - whatever a case holds
    if isinstance(held, dict):
        return {name: _normal(value) for name, value in held.items()}
    if isinstance(held, list):
        return [_normal(value) for value in held]
    return int(held) if isinstance(held, float) and held.is_integer() else held


def case_hash(case: Case) -> str:
    """Return the SHA-256 of the canonical form, in hexadecimal."""
    return hashlib.sha256(canonical(case)).hexdigest()
