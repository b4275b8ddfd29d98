"""The desk: first paint, stalls while kernels come in, live redraw of a full board.

Each measurement runs in a fresh process, so that nothing is imported beforehand.
"""

from __future__ import annotations

import json
import os
import subprocess
import sys
import tempfile
from collections.abc import Iterator
from pathlib import Path

from rounds import Row

HERE = Path(__file__).parent
ROUNDS = 7


def child(name: str, **environment: str) -> dict[str, float]:
    """Run one of the scripts beside this file and return what it prints as JSON."""
    done = subprocess.run(
        [sys.executable, str(HERE / "desk_scripts.py"), name],
        env={**os.environ, **environment},
        capture_output=True,
        text=True,
        check=True,
    )
    return json.loads(done.stdout.strip().splitlines()[-1])


def rows() -> Iterator[Row]:
    pairs = [(child("own_window"), child("bare_window")) for _ in range(ROUNDS)]
    own, bare = pairs[-1]
    yield Row(
        "first paint over a bare Qt window of the same shape",
        [a["seconds"] / b["seconds"] for a, b in pairs],
        at_most=2.5,
        absolute=f"{1e3 * own['seconds']:.0f} ms : {1e3 * bare['seconds']:.0f} ms",
    )
    yield Row(
        "heavy modules loaded at first paint",
        [float(a["heavy"]) for a, _ in pairs],
        at_most=0,
        unit="",
    )
    stalls = []
    for kept in ("cold", "warm"):
        for _ in range(3):
            with tempfile.TemporaryDirectory() as folder:
                if kept == "warm":
                    child("fill_cache", RESCUE_PLANNER_CACHE=folder)
                stalls.append(child("stall", RESCUE_PLANNER_CACHE=folder))
    yield Row(
        "longest stall of the event loop while kernels come in",
        [1e3 * one["longest"] for one in stalls],
        at_most=100,
        unit="ms",
        note=f"done after {stalls[0]['done']:.1f} s cold, {stalls[-1]['done']:.1f} s warm",
    )
    boards = [child("board") for _ in range(3)]
    yield Row(
        "one plan changed over all changed, 12 panels × 6 plans × 100",
        [ratio for board in boards for ratio in board["ratios"]],
        at_most=0.6,
        absolute=f"{boards[-1]['one']:.0f} ms : {boards[-1]['all']:.0f} ms",
    )
    yield Row(
        "frames until the changed plan's curves are on screen",
        [frames for board in boards for frames in board["frames"]],
        at_most=2,
        unit="",
    )
    yield Row(
        "paints for 200 edits in a second",
        [float(child("edits")["paints"]) for _ in range(3)],
        at_most=70,
        unit="",
    )
