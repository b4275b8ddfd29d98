"""Kernels work with a cache that is unwritable, empty, cut off, stale or foreign."""

from __future__ import annotations

import os
import subprocess
import sys

import pytest

from rescue_planner import places

PROGRAM = """
import numpy as np
from rescue_planner.kernels import exact_chain, compiled
up, down = np.empty(5), np.empty(5)
exact_chain.fill_ratios(4, up, down)
print(up.tolist(), compiled.CACHE_FOLDER)
"""
ANSWER = "[4.0, 1.5, 0.6666666666666666, 0.25, 0.0]"


def run(cache, program=PROGRAM):
    environment = {**os.environ, places.CACHE_VARIABLE: str(cache)}
    environment.pop("NUMBA_CACHE_DIR", None)
    done = subprocess.run(
        [sys.executable, "-c", program], env=environment, capture_output=True, text=True, check=True
    )
    return done.stdout.strip()


def test_that_an_unwritable_cache_only_means_compiling_in_memory():
    assert run("/dev/null/nowhere") == f"{ANSWER} None"


@pytest.mark.parametrize("damage", [b"", b"not a pickle", None])
def test_that_a_damaged_cache_is_compiled_anew(tmp_path, damage):
    """None cuts each file in half."""
    assert run(tmp_path).startswith(ANSWER)
    kept = [path for path in tmp_path.rglob("*") if path.suffix in (".nbi", ".nbc")]
    assert kept
    for path in kept:
        whole = path.read_bytes()
        path.write_bytes(whole[: len(whole) // 2] if damage is None else damage)
    assert run(tmp_path).startswith(ANSWER)


def test_that_the_cache_of_other_sources_is_another_folder(tmp_path, monkeypatch):
    monkeypatch.setenv(places.CACHE_VARIABLE, str(tmp_path))
    before = places.kernel_cache()
    changed = tmp_path / "package" / "kernels"
    changed.mkdir(parents=True)
    (changed / "one.py").write_text("changed = True\n")
    monkeypatch.setattr(places, "_PACKAGE", tmp_path / "package")
    assert places.kernel_cache() != before
