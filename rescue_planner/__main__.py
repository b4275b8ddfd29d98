"""The program's one entry: a command without a window, or the desk."""

from __future__ import annotations

import sys
from collections.abc import Sequence
from importlib.util import find_spec
from pathlib import Path

from rescue_planner import places

COMMANDS = ("run", "check", "examples")
DONE, FAILED, USAGE = 0, 1, 2


def main(argv: Sequence[str] | None = None) -> int:
    """Run a command, or open the desk with the case named; return the exit code."""
    arguments = list(sys.argv[1:] if argv is None else argv)
    places.prepare_numerics()
    if arguments and (arguments[0] in COMMANDS or arguments[0].startswith("-")):
        from rescue_planner.cli import main as command

        return command(arguments)
    if len(arguments) > 1:
        sys.stderr.write(
            f"One case at a time, please: got {len(arguments)}. See: rescue-planner --help\n"
        )
        return USAGE
    if arguments and _mistyped(arguments[0]):
        sys.stderr.write(
            f"There is no command or case “{arguments[0]}”. See: rescue-planner --help\n"
        )
        return USAGE
    if find_spec("PySide6") is None:
        sys.stderr.write(
            "The desk needs PySide6, which is not installed: install it with "
            "`pip install PySide6-Essentials`, or use the commands run, check and examples.\n"
        )
        return FAILED
    from rescue_planner.desk.app import open_desk

    return open_desk(Path(arguments[0]) if arguments else None)


def _mistyped(word: str) -> bool:
    """Return whether a word is no file and not written like one, as in `chekc`."""
    return word.replace("-", "").isalpha() and not Path(word).exists()


if __name__ == "__main__":
    raise SystemExit(main())
