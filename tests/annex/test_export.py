from __future__ import annotations

import csv
import hashlib
import io
import json
import os
import stat
import subprocess
import sys
from pathlib import Path

import pytest

from rescue_planner.annex.export import ExportError, write_run
from rescue_planner.projection.compare import compare
from rescue_planner.projection.table import comparison_csv


def _record(written) -> dict:
    return json.loads((written.folder / "record.json").read_text(encoding="utf-8"))


def test_that_a_run_holds_the_files_the_design_names(written):
    names = {str(path.relative_to(written.folder).as_posix()) for path in written.files}
    assert {
        "projection.csv",
        "target_checks.csv",
        "annex.docx",
        "annex.html",
        "record.json",
        "figures/captions.md",
        "figures/comparison_85mm.svg",
        "figures/gene_diversity_kept_170mm.pdf",
        "figures/allele_frequency_winter-coat_85mm.png",
    } <= names
    assert all(path.is_file() for path in written.files)


def test_that_nothing_but_the_named_files_is_left_behind(written):
    found = {path for path in written.folder.rglob("*") if path.is_file()}
    assert found == set(written.files)


def test_that_projection_csv_is_the_comparison_byte_for_byte(written, comparison):
    held = (written.folder / "projection.csv").read_bytes()
    assert held == comparison_csv(comparison).encode()
    assert b"\r" not in held


def test_that_projection_csv_reads_back_to_the_same_numbers(written, comparison):
    rows = list(csv.DictReader(io.StringIO((written.folder / "projection.csv").read_text("utf-8"))))
    for row in rows:
        series = comparison.get(row["plan"], row["depth"], row["measure"], row["statistic"])
        value = series.values[int(row["generation"])]
        assert row["value"] == "" if value != value else float(row["value"]) == value
    assert len(rows) == sum(series.values.size for series in comparison.series)


def test_that_the_record_lists_every_other_file_with_its_hash(written):
    listed = _record(written)["files"]
    others = {p.relative_to(written.folder).as_posix() for p in written.files} - {"record.json"}
    assert set(listed) == others
    for name, held in listed.items():
        content = (written.folder / name).read_bytes()
        assert hashlib.sha256(content).hexdigest() == held


def test_that_the_record_names_versions_seed_and_case(written, comparison):
    record = _record(written)
    assert record["case"]["hash"] == comparison.case_hash
    assert record["case"]["seed"] == 20270101
    assert record["versions"]["numpy"]
    assert record["started"] == "2027-01-05T09:30:00.000Z"
    assert record["rules_not_applied"] == ["Zoo males: kin check"]
    assert any("Persists" in sentence for sentence in record["targets_not_checked"])


def test_that_no_file_names_this_machine_or_a_folder_of_it(written):
    import getpass
    import socket

    secrets = {socket.gethostname(), str(Path.home()), str(written.folder), str(Path.cwd())}
    user = getpass.getuser()
    secrets |= {user} if len(user) > 4 else set()  # a short name is a part of many words
    for name in ("record.json", "annex.html", "figures/captions.md", "target_checks.csv"):
        text = (written.folder / name).read_text("utf-8")
        assert not [secret for secret in secrets if len(secret) > 1 and secret in text]


def test_that_remarks_carry_their_answers_into_the_record(sample, tmp_path):
    from rescue_planner.case.document import Case
    from rescue_planner.projection.compare import compare
    from rescue_planner.projection.remarks import every_remark

    raw = sample.raw()
    first = every_remark(sample.case())[0]
    raw["answers"] = [{"remark": first.name, "reason": "Agreed with the board", "by": "R. Hale"}]
    case = Case.model_validate(raw)
    done = write_run(
        case, compare(case), tmp_path, remarks=every_remark(case), measures=["inbreeding"]
    )
    rows = json.loads((done.folder / "record.json").read_text("utf-8"))["remarks"]
    answered = [row for row in rows if row["answer"] is not None]
    assert [row["answer"]["reason"] for row in answered] == ["Agreed with the board"]
    page = (done.folder / "annex.html").read_text("utf-8")
    assert "Agreed with the board" in page


def test_that_the_same_run_gives_the_same_bytes(case, comparison, tmp_path, written):
    from datetime import UTC, datetime

    from rescue_planner.projection.remarks import every_remark

    started = datetime(2027, 1, 5, 9, 30, tzinfo=UTC)
    again = write_run(
        case,
        comparison,
        tmp_path,
        remarks=every_remark(case),
        started=started,
    )
    first, second = _record(written)["files"], _record(again)["files"]
    differ = [name for name in first if first[name] != second[name]]
    assert differ == []


def test_that_measures_choose_figures_and_rows_alike(case, comparison, tmp_path):
    done = write_run(case, comparison, tmp_path, measures=["inbreeding"])
    names = sorted(path.stem for path in (done.folder / "figures").glob("*.svg"))
    assert names == ["comparison_170mm", "comparison_85mm", "inbreeding_170mm", "inbreeding_85mm"]
    held = (done.folder / "projection.csv").read_bytes()
    assert held == comparison_csv(comparison, ["inbreeding"]).encode()
    whole = comparison_csv(comparison).encode()
    assert set(held.splitlines()) < set(whole.splitlines())


def test_that_nothing_entered_is_said_and_not_drawn(case, comparison, tmp_path):
    """Without an inbreeding cost survival is 100 % throughout: rows in the file, no figure."""
    bare = case.model_copy(update={"inbreeding_cost": None})
    keys = ["inbreeding", "relative_first_year_survival"]
    done = write_run(bare, compare(bare), tmp_path, measures=keys)
    names = {path.stem for path in (done.folder / "figures").glob("*_85mm.svg")}
    assert names == {"comparison_85mm", "inbreeding_85mm"}
    page = (done.folder / "annex.html").read_text("utf-8")
    assert "No inbreeding cost entered" in page
    assert "relative_first_year_survival" in (done.folder / "projection.csv").read_text("utf-8")


def test_that_progress_runs_from_none_to_all_and_never_back(case, comparison, tmp_path):
    seen: list[tuple[int, int]] = []
    done = write_run(
        case,
        comparison,
        tmp_path,
        measures=["inbreeding"],
        checkpoint=lambda now, total: seen.append((now, total)),
    )
    steps = [now for now, _ in seen]
    assert steps == sorted(steps)
    assert steps[0] == 0
    assert seen[-1] == (len(done.files), len(done.files))


def test_that_a_cancel_between_files_leaves_whole_files_and_no_record(case, comparison, tmp_path):
    class Stop(Exception):
        pass

    def stop(now: int, total: int) -> None:
        if now > 4:
            raise Stop

    with pytest.raises(Stop):
        write_run(case, comparison, tmp_path, measures=["inbreeding"], checkpoint=stop)
    assert not (tmp_path / "record.json").exists()
    assert not list(tmp_path.rglob("*.part"))


def test_that_a_file_in_the_place_of_the_folder_is_one_clear_sentence(case, comparison, tmp_path):
    place = tmp_path / "taken"
    place.write_text("mine")
    with pytest.raises(ExportError, match="is a file, not a folder"):
        write_run(case, comparison, place)
    assert place.read_text() == "mine"


def test_that_a_file_above_the_folder_is_one_clear_sentence(case, comparison, tmp_path):
    (tmp_path / "taken").write_text("mine")
    with pytest.raises(ExportError, match="cannot be made"):
        write_run(case, comparison, tmp_path / "taken" / "below" / "it")


def test_that_a_full_disk_is_one_clear_sentence_and_keeps_the_old_file(
    case, comparison, tmp_path, monkeypatch
):
    (tmp_path / "projection.csv").write_text("the old one")

    def full(self: Path, target: Path) -> Path:
        raise OSError(28, "No space left on device")

    monkeypatch.setattr(Path, "replace", full)
    with pytest.raises(ExportError, match="no space left on device") as caught:
        write_run(case, comparison, tmp_path)
    assert str(caught.value).count("\n") == 0
    assert (tmp_path / "projection.csv").read_text() == "the old one"
    assert not list(tmp_path.glob(".*"))


@pytest.mark.skipif(os.name == "nt", reason="modes of files are POSIX's")
def test_that_written_files_can_be_read_by_whom_the_folder_can(written):
    mode = stat.S_IMODE((written.folder / "projection.csv").stat().st_mode)
    folder = stat.S_IMODE(written.folder.stat().st_mode)
    assert mode == folder & 0o666


def test_that_importing_the_annex_loads_no_drawing_and_no_document_library():
    code = (
        "import sys, rescue_planner.annex.export; "
        "print([m for m in ('matplotlib', 'docx', 'PIL', 'fontTools') if m in sys.modules])"
    )
    done = subprocess.run([sys.executable, "-c", code], capture_output=True, text=True, check=True)
    assert done.stdout.strip() == "[]"


def test_that_names_no_picture_or_file_system_likes_are_written_all_the_same(sample, tmp_path):
    from rescue_planner.case.document import Case
    from rescue_planner.projection.compare import compare

    raw = sample.raw()
    raw["title"] = "=1+1 <b>\x07 $x_1$ 狐 & “Sill”"
    raw["plans"][1]["name"] = "Bring 3 for $5 & $6 <now> 狐"
    raw["loci"][0]["name"] = "a/b:\\c?*狐"
    raw["targets"] = []
    case = Case.model_validate(raw)
    done = write_run(
        case,
        compare(case),
        tmp_path,
        measures=["allele_kept:a/b:\\c?*狐", "inbreeding"],
    )
    assert (done.folder / "figures" / "allele_kept_a-b-c_85mm.svg").is_file()
    page = (done.folder / "annex.html").read_text("utf-8")
    assert "Bring 3 for $5 &amp; $6 &lt;now&gt; 狐" in page
