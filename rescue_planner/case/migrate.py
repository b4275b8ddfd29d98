"""Older versions of the case file, brought up to date one version at a time.

`STEPS[n]` takes a plain case of version n to version n + 1 and says what it changed. Version 1 is
the first, so there is no step yet; the chain is tested with made-up ones.
"""

from __future__ import annotations

from collections.abc import Callable, Mapping
from typing import Any

from rescue_planner.case.document import VERSION

Raw = dict[str, Any]
Step = Callable[[Raw], tuple[Raw, tuple[str, ...]]]

STEPS: Mapping[int, Step] = {}


class VersionError(ValueError):
    """The version of a case can't be read; the text is one sentence for the user."""


def migrated(
    raw: Raw, steps: Mapping[int, Step] = STEPS, current: int = VERSION
) -> tuple[Raw, tuple[str, ...]]:
    """Return the plain case at version `current`, and sentences on what that changed.

    Parameters
    ----------
    raw : dict
        A plain case; without a version it counts as the current one.
    steps : mapping
        A step for every older version that can still be read.
    current : int
        The version of this program.

    Raises
    ------
    VersionError
        When the version is no whole number, newer than `current`, or too old for `steps`.
    """
    version = raw.get("version", current)
    if isinstance(version, bool) or not isinstance(version, int):
        raise VersionError("its “version” must be a whole number")
    if version > current:
        raise VersionError(
            f"it was written by a newer version of this program (file version {version}, this "
            f"program reads up to {current}): open it with the newer program"
        )
    said: list[str] = []
    while version < current:
        if version not in steps:
            raise VersionError(f"this program has never known file version {version}")
        raw, told = steps[version](raw)
        version += 1
        raw = {**raw, "version": version}
        said += told
    return raw, tuple(said)
