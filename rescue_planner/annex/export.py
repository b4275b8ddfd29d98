"""One use case: write a run into a folder, every file whole or not at all."""

from __future__ import annotations

from collections.abc import Callable, Sequence
from dataclasses import dataclass
from datetime import UTC, datetime
from pathlib import Path

from rescue_planner.advice.targets import target_checks, target_checks_csv
from rescue_planner.annex.blocks import Illustration
from rescue_planner.annex.document import docx_bytes
from rescue_planner.annex.page import html_text
from rescue_planner.annex.pictures import captions_text, draw, pictures
from rescue_planner.annex.record import Occasion, record_text
from rescue_planner.annex.report import Content, report
from rescue_planner.annex.sheet import WIDTHS_MM
from rescue_planner.annex.writing import ExportError, made, put
from rescue_planner.case.document import Case
from rescue_planner.case.remarks import Remark
from rescue_planner.projection.picture import no_input
from rescue_planner.projection.results import Comparison
from rescue_planner.projection.table import comparison_csv

# projection.csv, target_checks.csv, captions.md, annex.docx, annex.html, record.json
_OTHER_FILES = 6

__all__ = ["ExportError", "Written", "write_run"]

Checkpoint = Callable[[int, int], None]


@dataclass(frozen=True, slots=True)
class Written:
    """What a run wrote: the folder, its files in the order written, seconds it took."""

    folder: Path
    files: tuple[Path, ...]
    seconds: float


class _Folder:
    """Writes files into one folder and keeps their hashes."""

    def __init__(self, folder: Path) -> None:
        self.folder = made(folder)
        self.hashes: dict[str, str] = {}

    def put(self, name: str, content: str | bytes) -> None:
        held = content.encode() if isinstance(content, str) else content
        self.hashes[name] = put(self.folder / name, held)


def write_run(  # noqa: PLR0913 - one call for the desk and the command line
    case: Case,
    comparison: Comparison,
    folder: str | Path,
    *,
    measures: Sequence[str] | None = None,
    remarks: Sequence[Remark] = (),
    what_if: str | None = None,
    started: datetime | None = None,
    checkpoint: Checkpoint | None = None,
) -> Written:
    """Write projection.csv, target_checks.csv, figures, the annex and the run record.

    Parameters
    ----------
    case : Case
        The case as it was projected, with the what-if already applied.
    folder : path
        Made where it is missing. Files of the same names are replaced, others stay.
    measures : keys, optional
        Which measures get a figure, a place in the tables and rows in projection.csv; all where
        left out. A measure that shows nothing entered gets no figure and no table, but words.
    remarks : sequence of Remark
        Shown with their answers.
    what_if : name, optional
        The what-if in force; the comparison's own where left out.
    started : datetime, optional
        When the run began; now where left out.
    checkpoint : callable, optional
        Called with (files done, files in all) between files; may raise to stop. The record is
        written last: a folder without one holds an unfinished run.

    Returns
    -------
    Written

    Raises
    ------
    ExportError
        In one sentence, when the folder or a file cannot be written.
    """
    began = datetime.now(UTC) if started is None else started
    shown = [key for key in comparison.measures if measures is None or key in measures]
    pictured = [key for key in shown if not no_input(case, key)]
    found = pictures(case, comparison, pictured)
    total = _OTHER_FILES + 3 * len(WIDTHS_MM) * len(found)
    step = checkpoint if checkpoint is not None else lambda done, total: None
    out = _Folder(Path(folder))
    step(0, total)
    out.put("projection.csv", comparison_csv(comparison, shown))
    out.put("target_checks.csv", target_checks_csv(target_checks(case, comparison)))
    made(out.folder / "figures")
    out.put("figures/captions.md", captions_text(found))
    figures: list[Illustration] = []
    for drawn in draw(case, comparison, found, lambda done: step(3 + 3 * done, total)):
        for kind, content in drawn.files.items():
            out.put(f"figures/{drawn.picture.stem}_{drawn.width}mm.{kind}", content)
        if drawn.width == max(WIDTHS_MM):
            held = drawn.files["svg"], drawn.files["png"]
            figures.append(Illustration(len(figures) + 1, drawn.picture, *held))
    step(total - 3, total)
    whole = report(
        Content(
            case=case,
            comparison=comparison,
            measures=tuple(pictured),
            nothing_entered=tuple(dict.fromkeys(filter(None, (no_input(case, k) for k in shown)))),
            figures=tuple(figures),
            remarks=tuple(remarks),
            occasion=Occasion(began, datetime.now(UTC)),
        )
    )
    out.put("annex.docx", docx_bytes(whole, began))
    step(total - 2, total)
    out.put("annex.html", html_text(whole))
    step(total - 1, total)
    occasion = Occasion(began, datetime.now(UTC))
    out.put("record.json", record_text(case, comparison, remarks, occasion, out.hashes))
    step(total, total)
    files = tuple(out.folder / name for name in out.hashes)
    return Written(out.folder, files, occasion.seconds)
