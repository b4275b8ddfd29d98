"""Files written beside and put in place: whole or not at all."""

from __future__ import annotations

import hashlib
import os
import tempfile
from pathlib import Path


class ExportError(Exception):
    """A folder or file that cannot be written, in one sentence that says what to do."""


def made(folder: Path) -> Path:
    """Return `folder`, made where it is missing.

    Raises
    ------
    ExportError
        When it is a file, or cannot be made.
    """
    if folder.exists() and not folder.is_dir():
        raise ExportError(f"“{folder}” is a file, not a folder; name another folder.")
    try:
        folder.mkdir(parents=True, exist_ok=True)
    except OSError as error:
        raise ExportError(
            f"The folder “{folder}” cannot be made ({_why(error)}); name another folder."
        ) from error
    return folder


def put(path: Path, content: bytes) -> str:
    """Write `content` beside `path`, then put it in place; return its SHA-256.

    Raises
    ------
    ExportError
        When it cannot be written; what stood there before stays.
    """
    beside = None
    try:
        handle, name = tempfile.mkstemp(dir=path.parent, prefix=f".{path.name}.", suffix=".part")
        beside = Path(name)
        with os.fdopen(handle, "wb") as out:
            out.write(content)
        beside.chmod(_mode(path.parent))
        beside.replace(path)
    except OSError as error:
        if beside is not None:
            beside.unlink(missing_ok=True)
        raise ExportError(
            f"“{path}” cannot be written ({_why(error)}); close programs that hold it open, or "
            "name another folder."
        ) from error
    return hashlib.sha256(content).hexdigest()


def _mode(folder: Path) -> int:
    """Return the mode of a plain file: the folder's, without the right to search."""
    return folder.stat().st_mode & 0o666


def _why(error: OSError) -> str:
    return (error.strerror or type(error).__name__).lower()
