"""The figures' font, cut down to the letters that a run needs.

Cutting it once, and not again in every file, is what makes writing the PDF files quick; the SVG
files carry the same cut font, so that they look the same where the font is not installed.
"""

from __future__ import annotations

import atexit
import base64
import hashlib
import importlib
import io
import shutil
import tempfile
from functools import lru_cache
from pathlib import Path

FONT = "DejaVu Sans"
# What axes and labels use whatever the case is called.
ALWAYS = frozenset(chr(code) for code in range(0x20, 0x7F)) | frozenset("–…’“”×\u202f\u2212∞")


@lru_cache(maxsize=8)
def cut_font(letters: frozenset[str], flavor: str | None = None) -> bytes:
    """Return the font with `letters` and the common ones, as TrueType or (`woff`) for the web."""
    from matplotlib.font_manager import FontProperties, findfont

    subset = importlib.import_module("fontTools.subset")  # untyped; a part of matplotlib's needs
    wanted = subset.Options(layout_features=[], hinting=False, notdef_outline=True)
    wanted.drop_tables = [*wanted.drop_tables, "GSUB", "GPOS", "GDEF", "kern", "FFTM"]
    font = subset.load_font(findfont(FontProperties(family=FONT)), wanted)
    cutter = subset.Subsetter(wanted)
    cutter.populate(text="".join(sorted(letters | ALWAYS)))
    cutter.subset(font)
    font.flavor = flavor
    out = io.BytesIO()
    font.save(out)
    font.close()
    return out.getvalue()


@lru_cache(maxsize=8)
def face_rule(letters: frozenset[str]) -> str:
    """Return the cut font as a style rule for SVG."""
    held = base64.b64encode(cut_font(letters, "woff")).decode()
    return f"@font-face{{font-family:'{FONT}';src:url(data:font/woff;base64,{held})}}"


@lru_cache(maxsize=8)
def cut_family(letters: frozenset[str]) -> str:
    """Return the name under which matplotlib finds the cut font, the whole one's where it can't.

    The font lies in a folder of its own for temporary files until the program ends.
    """
    from matplotlib.font_manager import FontEntry, fontManager

    held = cut_font(letters)
    name = f"{FONT} {hashlib.sha256(held).hexdigest()[:8]}"
    try:
        path = _folder() / f"{name}.ttf"
        path.write_bytes(held)
    except OSError:
        return FONT
    fontManager.ttflist.append(
        FontEntry(
            fname=str(path),
            name=name,
            style="normal",
            variant="normal",
            weight=400,
            stretch="normal",
            size="scalable",
        )
    )
    return name


@lru_cache(maxsize=1)
def _folder() -> Path:
    folder = Path(tempfile.mkdtemp(prefix="rescue-planner-font-"))
    atexit.register(shutil.rmtree, folder, ignore_errors=True)
    return folder
