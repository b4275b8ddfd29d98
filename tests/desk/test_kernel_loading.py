"""Kernels come in behind the window, and the desk answers without them meanwhile."""

from __future__ import annotations

import sys

import pytest

from rescue_planner import places
from rescue_planner.desk.kernels import KernelLoader
from rescue_planner.projection import chain_path


@pytest.fixture(autouse=True)
def _plain_path():
    chain_path.use_plain()
    yield
    chain_path.use_plain()


@pytest.mark.slow
def test_that_a_child_compiles_and_the_compiled_path_takes_over(qtbot, tmp_path, monkeypatch):
    monkeypatch.setenv(places.CACHE_VARIABLE, str(tmp_path))
    loader = KernelLoader()
    assert chain_path.path_in_use() == "plain"
    with qtbot.waitSignal(loader.ready, timeout=120_000):
        loader.start()
    loader.close()
    assert chain_path.path_in_use() == "compiled"
    assert list(tmp_path.rglob("*.nbi"))


@pytest.mark.parametrize(
    "child", [(sys.executable, "-c", "raise SystemExit(1)"), ("/no/such/program",)]
)
def test_that_without_a_working_child_the_desk_stays_on_the_plain_path(
    qtbot, tmp_path, monkeypatch, child
):
    monkeypatch.setenv(places.CACHE_VARIABLE, str(tmp_path))
    loader = KernelLoader(child=child)
    with qtbot.waitSignal(loader.given_up, timeout=20_000):
        loader.start()
    loader.close()
    assert chain_path.path_in_use() == "plain"


def test_that_a_cache_that_cannot_be_written_leaves_the_plain_path(qtbot, monkeypatch):
    monkeypatch.setenv(places.CACHE_VARIABLE, "/dev/null/nowhere")
    loader = KernelLoader()
    with qtbot.waitSignal(loader.given_up, timeout=20_000):
        loader.start()
    loader.close()
    assert chain_path.path_in_use() == "plain"


def test_that_closing_early_ends_the_child(qtbot, tmp_path, monkeypatch):
    monkeypatch.setenv(places.CACHE_VARIABLE, str(tmp_path))
    loader = KernelLoader(child=(sys.executable, "-c", "import time; time.sleep(60)"))
    loader.start()
    qtbot.waitUntil(lambda: loader._process is not None, timeout=10_000)
    loader.close()
    assert loader._process.poll() is not None
