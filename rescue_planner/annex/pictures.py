"""All figures of a run, as files: each measure and the overview, in two widths, three formats."""

from __future__ import annotations

from collections.abc import Callable, Iterator, Sequence
from concurrent.futures import Future, ThreadPoolExecutor
from dataclasses import dataclass

from rescue_planner.annex import saving
from rescue_planner.annex.captions import Caption, measure_caption, overview_caption
from rescue_planner.annex.curves import curves
from rescue_planner.annex.figures import draw_measure
from rescue_planner.annex.overview import draw_overview, overview_measures
from rescue_planner.annex.sheet import WIDTHS_MM, printed
from rescue_planner.annex.wording import axis_title, stems
from rescue_planner.case.document import Case
from rescue_planner.projection.results import Comparison

OVERVIEW = "comparison"


@dataclass(frozen=True, slots=True)
class Picture:
    """One figure: its file stem, title, caption and measure (none for the overview)."""

    stem: str
    title: str
    caption: Caption
    measure: str | None


@dataclass(frozen=True, slots=True)
class Drawn:
    """One figure's files of one width: SVG, PDF and PNG."""

    picture: Picture
    width: int
    files: dict[str, bytes]


def pictures(case: Case, comparison: Comparison, measures: Sequence[str]) -> tuple[Picture, ...]:
    """Return the figures of a run, the overview first."""
    drawn = [key for key in measures if curves(comparison, key)]
    if not drawn:
        return ()
    shown = overview_measures(comparison, drawn)
    left = [key for key in drawn if key not in shown]
    names = stems(drawn)
    whole = Picture(
        OVERVIEW, "Plans compared", overview_caption(case, comparison, shown, left), None
    )
    return whole, *(
        Picture(
            names[key],
            axis_title(comparison, key),
            measure_caption(case, comparison, key),
            key,
        )
        for key in drawn
    )


def letters(found: Sequence[Picture]) -> frozenset[str]:
    """Return every character that the figures may need; captions hold all names and words."""
    return frozenset("".join(f"{p.title}{p.caption.text}{p.caption.alternative}" for p in found))


def draw(
    case: Case,
    comparison: Comparison,
    found: Sequence[Picture],
    checkpoint: Callable[[int], None] = lambda done: None,
) -> Iterator[Drawn]:
    """Draw every figure in both widths.

    PNG files are pressed beside the drawing of the next figure. `checkpoint` is called with the
    number of figures drawn, before each.
    """
    used = letters(found)
    shown = overview_measures(comparison, [p.measure for p in found if p.measure is not None])
    waiting: list[tuple[Drawn, Future[bytes]]] = []
    with printed(used), ThreadPoolExecutor(max_workers=1) as press:
        for count, (picture, width) in enumerate((p, w) for p in found for w in WIDTHS_MM):
            checkpoint(count)
            if picture.measure is None:
                figure = draw_overview(case, comparison, shown, width)
            else:
                figure = draw_measure(case, comparison, picture.measure, width)
            told = (picture.title, picture.caption.alternative)
            held = {"svg": saving.svg(figure, *told, used), "pdf": saving.pdf(figure, *told)}
            pressed = press.submit(saving.pressed, saving.pixels(figure), *told)
            waiting.append((Drawn(picture, width, held), pressed))
            if len(waiting) > 2:
                yield _ready(*waiting.pop(0))
        for one in waiting:
            yield _ready(*one)


def _ready(drawn: Drawn, pressed: Future[bytes]) -> Drawn:
    drawn.files["png"] = pressed.result()
    return drawn


def captions_text(found: Sequence[Picture]) -> str:
    """Return captions.md: under each file's name its caption and the text that stands for it."""
    parts = ["# Captions\n"]
    for picture in found:
        parts.append(f"## {picture.stem}\n")
        parts.append(f"{picture.title}\n")
        parts.append(f"{picture.caption.whole}\n")
        parts.append(f"Alternative text: {picture.caption.alternative}\n")
    return "\n".join(parts)
