"""The program without a window: run, check, examples. Imports no Qt."""

from __future__ import annotations

import argparse
import os
import re
import shutil
import sys
from collections.abc import Mapping, Sequence
from datetime import UTC, datetime
from pathlib import Path
from typing import TYPE_CHECKING, NoReturn, TextIO

from rescue_planner import __version__, places
from rescue_planner.case.file import CaseFileError, load
from rescue_planner.case.problems import InvalidCase, Problem
from rescue_planner.case.spoken import counted
from rescue_planner.case.what_if import applied

if TYPE_CHECKING:
    from rescue_planner.case.document import Case
    from rescue_planner.projection.results import Depth

DONE, PROBLEMS, USAGE, STOPPED = 0, 1, 2, 130
_CONTROL = re.compile(r"[\x00-\x1f\x7f-\x9f]+")
CAUTION = (
    "These results describe what would follow if the stated assumptions held. "
    "The decision rests with the responsible authorities."
)


class _Usage(Exception):
    """A call that cannot be understood, with the sentence that says so."""


class _Parser(argparse.ArgumentParser):
    def error(self, message: str) -> NoReturn:
        raise _Usage(f"{message}. See: {self.prog} --help")


def parser() -> argparse.ArgumentParser:
    """Return the definition of the commands."""
    whole = _Parser(
        prog="rescue-planner",
        allow_abbrev=False,
        description="Plan the genetic rescue of a small, isolated, inbred population. "
        "Without a command, `rescue-planner [CASE]` opens the desk.",
        epilog=CAUTION,
    )
    whole.add_argument("--version", action="version", version=f"Rescue Planner {__version__}")
    commands = whole.add_subparsers(dest="command", metavar="run | check | examples", required=True)
    run = commands.add_parser(
        "run", help="project the plans of a case and write the files", allow_abbrev=False
    )
    run.add_argument("case", metavar="CASE", type=Path)
    run.add_argument("--to", metavar="FOLDER", type=Path, required=True, help="where files go")
    run.add_argument("--depth", metavar="expected,exact", help="depths of projection, by comma")
    run.add_argument("--plans", metavar="A,B", help="plans by name or letter, by comma")
    run.add_argument("--what-if", metavar="NAME", help="changed assumptions of the case")
    run.add_argument("--replicates", metavar="N", type=int, help="simulated runs per plan")
    run.add_argument("--seed", metavar="S", type=int, help="seed of chance")
    run.add_argument("--workers", metavar="W", type=int, help="how many run side by side")
    check = commands.add_parser(
        "check", help="print problems and remarks with their paths", allow_abbrev=False
    )
    check.add_argument("case", metavar="CASE", type=Path)
    examples = commands.add_parser(
        "examples", help="list the invented cases that ship", allow_abbrev=False
    )
    examples.add_argument("--copy-to", metavar="FOLDER", type=Path, help="copy them there")
    return whole


def main(argv: Sequence[str] | None = None) -> int:
    """Run one command and return its exit code: 0 done, 1 problems in the case, 2 usage."""
    try:
        asked = parser().parse_args(argv)
    except _Usage as error:
        return _complain(str(error), USAGE)
    except SystemExit as stop:  # --help and --version have said their piece
        return int(stop.code or 0)
    try:
        return {"run": _run, "check": _check, "examples": _examples}[asked.command](asked)
    except _Usage as error:
        return _complain(str(error), USAGE)
    except CaseFileError as error:
        return _complain(str(error), PROBLEMS)
    except InvalidCase as error:
        return _print_problems(error.problems)
    except BrokenPipeError:  # whoever read along has closed: nothing more to say to anybody
        sys.stdout = open(os.devnull, "w", encoding="utf-8")  # noqa: PTH123, SIM115 - until the end
        return STOPPED
    except KeyboardInterrupt:
        return _complain("Stopped. A folder without record.json holds an unfinished run.", STOPPED)


def _complain(sentence: str, code: int) -> int:
    _write(sys.stderr, sentence)
    return code


def _print_problems(problems: Sequence[Problem]) -> int:
    for problem in problems:
        _write(sys.stderr, f"{problem.path or 'case'}: {problem.text}")
    return PROBLEMS


def _say(sentence: str) -> None:
    _write(sys.stdout, sentence)


def _write(stream: TextIO, sentence: str) -> None:
    """Write a sentence on one line; characters the stream cannot hold come as escapes.

    Names in a case are somebody else's text: their control characters do not reach a terminal.
    """
    line = _CONTROL.sub(" ", sentence)
    encoding = getattr(stream, "encoding", None) or "utf-8"
    stream.write(f"{line.encode(encoding, 'backslashreplace').decode(encoding)}\n")
    stream.flush()  # a reader who has gone is noticed here, not when the program ends


def _run(asked: argparse.Namespace) -> int:
    from rescue_planner.annex.export import ExportError, write_run
    from rescue_planner.projection.chain_path import use_compiled
    from rescue_planner.projection.compare import compare
    from rescue_planner.projection.remarks import every_remark

    started = datetime.now(UTC)
    depths = _depths(asked.depth)
    case = _read(asked.case)
    case = _with_run(case, asked)
    if asked.what_if is not None:
        if asked.what_if not in [one.name for one in case.what_ifs]:
            known = ", ".join(one.name for one in case.what_ifs) or "none"
            raise _Usage(f"The case has no what-if “{asked.what_if}”; it has: {known}.")
        case = applied(case, asked.what_if)
    plans = _plans(case, asked.plans)
    if "exact" in depths and case.loci:
        use_compiled()
    comparison = compare(case, plans=plans, depths=depths, what_if=asked.what_if)
    found = every_remark(case)
    try:
        written = write_run(
            case,
            comparison,
            asked.to,
            remarks=found,
            what_if=asked.what_if,
            started=started,
        )
    except ExportError as error:
        return _complain(str(error), USAGE)
    plans_told = counted(len(comparison.plans), "plan")
    _say(f"{case.title}: {plans_told}, {len(written.files)} files in {asked.to}")
    if found:
        remarks_told = counted(len(found), "remark")
        _say(f"{remarks_told}; see annex.html, or: rescue-planner check {asked.case}")
    _say(CAUTION)
    return DONE


def _read(path: Path) -> Case:
    opened = load(path)
    for sentence in opened.said:
        _say(sentence)
    return opened.case


def _depths(text: str | None) -> tuple[Depth, ...]:
    from rescue_planner.projection.results import DEPTHS

    if text is None:
        return ("expected", "exact")
    asked = [part.strip() for part in text.split(",") if part.strip()]
    for part in asked:
        if part not in DEPTHS:
            raise _Usage(f"There is no depth “{part}”; there are: {', '.join(DEPTHS)}.")
    if not asked:
        raise _Usage("--depth names no depth; write expected, exact or both with a comma.")
    if "simulated" in asked:
        raise _Usage("This version cannot simulate animals yet; leave “simulated” out of --depth.")
    return tuple(depth for depth in DEPTHS if depth in asked)


def _with_run(case: Case, asked: argparse.Namespace) -> Case:
    """Return the case with the numbers of the call in place of its own."""
    from rescue_planner.case.edits import set_value

    for option, field, least in (
        (asked.replicates, "replicates", 1),
        (asked.seed, "seed", 0),
    ):
        if option is None:
            continue
        if option < least:
            raise _Usage(f"--{field} must be at least {least}, got {option}.")
        try:
            case = set_value(case, f"run.{field}", option).case
        except InvalidCase as invalid:
            raise _Usage(f"--{field} {invalid.problems[0].text}") from invalid
    if asked.workers is not None and asked.workers < 1:
        raise _Usage(f"--workers must be at least 1, got {asked.workers}.")
    return case


def _plans(case: Case, text: str | None) -> tuple[str, ...] | None:
    """Return the plans asked for by name or letter; `No releases` always comes along."""
    from rescue_planner.case.plans import NO_RELEASES
    from rescue_planner.projection.marks import mark

    if text is None:
        return None
    names = [plan.name for plan in case.plans]
    known = {mark(i).letter.casefold(): name for i, name in enumerate(names)}
    known |= {name.strip().casefold(): name for name in names}
    known |= {name.strip(): name for name in names}  # a name in its own spelling comes first
    pieces, chosen = text.split(","), [NO_RELEASES]
    while pieces:
        name, used = _first_plan(pieces, known)
        if name is None:
            asked = pieces[0].strip()
            raise _Usage(f"The case has no plan “{asked}”; it has: {'; '.join(names)}.")
        chosen.append(name)
        pieces = pieces[used:]
    return tuple(dict.fromkeys(chosen))


def _first_plan(pieces: Sequence[str], known: Mapping[str, str]) -> tuple[str | None, int]:
    """Return the plan that the first pieces name, and how many: a name may hold commas."""
    for count in range(len(pieces), 0, -1):
        asked = ",".join(pieces[:count]).strip()
        name = known.get(asked) or known.get(asked.casefold())
        if name is not None:
            return name, count
    return None, 0


def _check(asked: argparse.Namespace) -> int:
    from rescue_planner.projection.remarks import every_remark

    case = _read(asked.case)
    found = every_remark(case)
    for remark in found:
        _say(f"remark {remark.key} at {remark.path or 'case'}: {remark.text}")
    _say(f"{case.title}: no problems, {counted(len(found), 'remark')}.")
    return DONE


def _examples(asked: argparse.Namespace) -> int:
    cases = sorted(places.scenarios().glob("*.json"))
    if asked.copy_to is None:
        for path in cases:
            _say(f"{path}: {load(path).case.title}")
        return DONE
    try:
        asked.copy_to.mkdir(parents=True, exist_ok=True)
        for path in cases:
            target = asked.copy_to / path.name
            if target.exists():
                _say(f"{target} is there already and stays as it is.")
                continue
            shutil.copyfile(path, target)
            _say(f"{target}: {load(path).case.title}")
    except OSError as error:
        return _complain(
            f"The examples could not be copied to {asked.copy_to}: {error.strerror}. "
            "Choose a folder you can write to.",
            USAGE,
        )
    return DONE
