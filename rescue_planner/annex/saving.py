"""A figure as bytes: SVG with its font inside, PDF with its font embedded, PNG at 300 dpi."""

from __future__ import annotations

import io
import re
from html import escape
from typing import TYPE_CHECKING, Any

import numpy as np

from rescue_planner.annex.face import FONT, face_rule

if TYPE_CHECKING:
    from matplotlib.figure import Figure

DPI = 300
FORMATS = ("svg", "pdf", "png")


def svg(figure: Figure, title: str, alternative: str, letters: frozenset[str]) -> bytes:
    """Return a figure as SVG: text stays text, its font is inside, title and description too.

    `letters` are the characters that the font inside must hold besides the common ones; giving
    the same set for all figures of a run has the font cut once.
    """
    from matplotlib.backends.backend_svg import FigureCanvasSVG

    out = io.StringIO()
    canvas: Any = FigureCanvasSVG(figure)
    canvas.print_svg(out, metadata={"Date": None, "Title": title})
    text = re.sub(rf"'{FONT}[^']*'", f"'{FONT}', Verdana, sans-serif", out.getvalue())
    text = re.sub(r"(<svg [^>]*)>", r'\1 role="img">', text, count=1)
    inside = (
        f"<title>{escape(title)}</title><desc>{escape(alternative)}</desc>"
        f'<style type="text/css">{face_rule(letters)}</style>'
    )
    return re.sub(r"(<svg [^>]*>)", lambda m: m[1] + inside, text, count=1).encode()


def pdf(figure: Figure, title: str, alternative: str) -> bytes:
    """Return a figure as PDF with its font embedded and no date."""
    from matplotlib.backends.backend_pdf import FigureCanvasPdf

    out = io.BytesIO()
    told = {"CreationDate": None, "Title": title, "Subject": alternative}
    canvas: Any = FigureCanvasPdf(figure)
    canvas.print_pdf(out, metadata=told)
    return out.getvalue()


def pixels(figure: Figure) -> Any:  # noqa: ANN401 - a picture of the Pillow library
    """Return a figure drawn at 300 dots per inch, not yet pressed into a file."""
    from matplotlib.backends.backend_agg import FigureCanvasAgg
    from PIL import Image

    before = figure.get_dpi()
    figure.set_dpi(DPI)
    canvas: Any = FigureCanvasAgg(figure)
    canvas.draw()
    drawn = Image.fromarray(np.asarray(canvas.buffer_rgba())).convert("RGB")
    figure.set_dpi(before)
    return drawn


def pressed(drawn: Any, title: str, alternative: str) -> bytes:  # noqa: ANN401 - see `pixels`
    """Return drawn pixels as the bytes of a PNG file."""
    from PIL.PngImagePlugin import PngInfo

    out, told = io.BytesIO(), PngInfo()
    told.add_itxt("Title", title)
    told.add_itxt("Description", alternative)
    drawn.save(out, "png", dpi=(DPI, DPI), pnginfo=told, compress_level=4)
    return out.getvalue()
