"""Older versions of the file, with made-up steps: version 1 is the first real one."""

import pytest

from rescue_planner.case import file, migrate
from rescue_planner.case.file import load
from rescue_planner.case.migrate import VersionError, migrated
from tests.case.sample import small


def _zero_to_one(raw):
    return {"title": raw["called"]}, ("“called” is now “title”.",)


def _one_to_two(raw):
    return {**raw, "species": "vole"}, ()


STEPS = {0: _zero_to_one, 1: _one_to_two}


def test_that_an_older_version_climbs_every_step_and_says_what_changed():
    raw, said = migrated({"version": 0, "called": "Fen"}, STEPS, current=2)
    assert raw == {"version": 2, "title": "Fen", "species": "vole"}
    assert said == ("“called” is now “title”.",)


def test_that_the_current_version_is_left_as_it_is():
    assert migrated(small()) == (small(), ())


def test_that_what_a_migration_says_reaches_the_user(tmp_path, monkeypatch):
    steps = {0: lambda raw: ({**small(), "title": raw["called"]}, ("Renamed.",))}
    monkeypatch.setattr(file, "migrated", lambda raw: migrated(raw, steps))
    (tmp_path / "a.json").write_text('{"version": 0, "called": "Fen"}')
    opened = load(tmp_path / "a.json")
    assert (opened.case.title, opened.said) == ("Fen", ("Renamed.",))


def test_that_a_missing_step_is_refused():
    with pytest.raises(VersionError, match="never known file version -1"):
        migrated({"version": -1}, STEPS, current=2)


def test_that_the_chain_reaches_this_version():
    assert set(migrate.STEPS) == set(range(1, migrate.VERSION))
