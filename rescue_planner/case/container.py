"""The container of a `.rescue` file: a zip with `case.json`, `tables/*.csv` and `log.jsonl`.

Nothing is trusted: names, numbers of members and unpacked sizes are checked on what is really
read, not on what the zip says about itself.
"""

from __future__ import annotations

import io
import re
import zipfile
import zlib
from collections.abc import Mapping

CASE, LOG, TABLES = "case.json", "log.jsonl", "tables/"
MOST_MEMBERS = 500
MOST_BYTES = 200_000_000  # all members together, unpacked
MOST_CASE_BYTES = 20_000_000
MOST_TIMES_PACKED = 200  # unpacked size over packed size, above FREE_BYTES
FREE_BYTES = 1_000_000
_CHUNK = 1 << 16
_TABLE = re.compile(r"[^/\\:\x00-\x1f]{1,150}\.csv", re.IGNORECASE)


class ContainerError(ValueError):
    """The container can't be read or written; the text is the end of a sentence."""


def is_table_name(name: str) -> bool:
    """Return whether a table may be called `name`, as in `counts.csv`."""
    return bool(_TABLE.fullmatch(name)) and not name.startswith(".")


def packed(members: Mapping[str, bytes]) -> bytes:
    """Return the zip that holds `members`; the same members give the same bytes.

    Raises
    ------
    ContainerError
        When it would be too large to be opened again, or a name is not allowed.
    """
    total = sum(len(content) for content in members.values())
    too_long = len(members.get(CASE, b"")) > MOST_CASE_BYTES
    if total > MOST_BYTES or too_long or len(members) > MOST_MEMBERS:
        raise ContainerError("it would be too large to be opened again: take tables out")
    held = io.BytesIO()
    with zipfile.ZipFile(held, "w") as archive:
        for name, content in members.items():
            _check_name(name)
            # What packs too well would look like a zip bomb when it is opened.
            thin = len(zlib.compress(content, 1)) * MOST_TIMES_PACKED // 2 < len(content)
            entry = zipfile.ZipInfo(name, (1980, 1, 1, 0, 0, 0))
            entry.compress_type = zipfile.ZIP_STORED if thin else zipfile.ZIP_DEFLATED
            entry.external_attr = 0o644 << 16
            archive.writestr(entry, content)
    return held.getvalue()


def unpacked(content: bytes) -> dict[str, bytes]:
    """Return the members of a zip by name.

    Raises
    ------
    ContainerError
        When it is damaged, too large, or holds anything but a case with its tables and trail.
    """
    try:
        with zipfile.ZipFile(io.BytesIO(content)) as archive:
            entries = archive.infolist()
            if len(entries) > MOST_MEMBERS:
                raise ContainerError(f"it holds more than {MOST_MEMBERS} files")
            return _members(archive, entries)
    except (zipfile.BadZipFile, zlib.error, EOFError, OSError, ValueError) as error:
        if isinstance(error, ContainerError):
            raise
        raise ContainerError("it is damaged or cut short: use a copy of it") from error
    except (NotImplementedError, RuntimeError) as error:  # other packing, or a password
        raise ContainerError("it is packed in a way that this program does not read") from error


def _members(archive: zipfile.ZipFile, entries: list[zipfile.ZipInfo]) -> dict[str, bytes]:
    members: dict[str, bytes] = {}
    seen: set[str] = set()
    left = MOST_BYTES
    for entry in entries:
        name = entry.orig_filename  # as written: zipfile itself changes odd names
        if name.casefold() in seen:
            raise ContainerError(f"it holds “{_shown(name)}” twice")
        seen.add(name.casefold())
        if name == TABLES:
            continue  # the folder itself
        _check_name(name)
        most = MOST_CASE_BYTES if name == CASE else left
        members[name] = _read(archive, entry, min(most, left))
        left -= len(members[name])
    if CASE not in members:
        raise ContainerError(f"it holds no “{CASE}”, so it is not a rescue case")
    return members


def _check_name(name: str) -> None:
    if name in (CASE, LOG):
        return
    if not (name.startswith(TABLES) and is_table_name(name.removeprefix(TABLES))):
        raise ContainerError(f"it holds “{_shown(name)}”, which is no part of a rescue case")


def _shown(name: str) -> str:
    """Return a member's name for one line of a sentence."""
    plain = "".join(letter if letter.isprintable() else "?" for letter in name)
    return plain if len(plain) <= 80 else plain[:79] + "…"


def _read(archive: zipfile.ZipFile, entry: zipfile.ZipInfo, most: int) -> bytes:
    held = bytearray()
    with archive.open(entry) as member:
        while chunk := member.read(_CHUNK):
            held += chunk
            if len(held) > most:
                raise ContainerError(f"“{_shown(entry.orig_filename)}” in it is too large")
            packed_well = len(held) > MOST_TIMES_PACKED * max(entry.compress_size, 1)
            if len(held) > FREE_BYTES and packed_well:
                raise ContainerError(
                    f"“{_shown(entry.orig_filename)}” in it unpacks to far too much"
                )
    return bytes(held)
