"""The gallery draws every page, with its empty and error states."""

from __future__ import annotations

import pytest
from PySide6.QtGui import QImage

from rescue_planner.desk import gallery, rail


@pytest.mark.slow
def test_that_the_quick_gallery_draws_every_page(qapp, tmp_path, capsys, monkeypatch) -> None:
    monkeypatch.setenv("XDG_STATE_HOME", str(tmp_path / "state"))
    assert gallery.main(["--to", str(tmp_path / "out"), "--scenario", "ground", "--quick"]) == 0
    drawn = {path.stem for path in (tmp_path / "out").glob("*.png")}
    for page in rail.PAGES:
        assert f"ground-bird-on-an-island--{page.key}--light" in drawn
    assert {"empty--start--light", "empty--known--light", "error--field--light",
            "error--unreadable-file--light"} <= drawn  # fmt: skip
    assert f"{len(drawn)} pictures" in capsys.readouterr().out
    picture = QImage(str(tmp_path / "out" / "ground-bird-on-an-island--case--light.png"))
    assert (picture.width(), picture.height()) == (1280, 720)


def test_that_an_unknown_scenario_is_refused(capsys, tmp_path) -> None:
    assert gallery.main(["--to", str(tmp_path), "--scenario", "no such case"]) == 2
    assert "No shipped case" in capsys.readouterr().err
