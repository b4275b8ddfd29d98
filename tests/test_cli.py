"""The commands: exit codes, one clear sentence for each mistake, and the files as bound."""

from __future__ import annotations

import csv
import io
import json
import math
import subprocess
import sys
import zipfile
from pathlib import Path

import pytest

from rescue_planner import cli, places
from rescue_planner.__main__ import main
from rescue_planner.case.file import load, save
from rescue_planner.projection.compare import compare
from rescue_planner.projection.table import comparison_csv

HEADER = "plan,depth,year,generation,measure,statistic,value,low,high"
CHECKS_HEADER = (
    "target,measure,at_least,at_most,by_year,plan,depth,year,value,met,runs,share,low,high"
)
BIRD = "ground-bird-on-an-island.json"
WITHOUT_QT = """
import sys
class Refused:
    def find_spec(self, name, path=None, target=None):
        if name.partition(".")[0] in ("PySide6", "shiboken6", "pyqtgraph"):
            raise ImportError(f"{name} is not here")
sys.meta_path.insert(0, Refused())
from rescue_planner.__main__ import main
sys.exit(main(sys.argv[1:]))
"""


def small() -> dict[str, object]:
    """A plain case with a locus, a donor and three plans, one of which has commas in its name."""
    release = {"donor": "Upper Fen", "who": {"females": 2, "males": 1}}
    return {
        "title": "Marsh voles",
        "time": {"start_year": 2027, "horizon_years": 21, "generation_years": 0.7},
        "recipient": {
            "name": "Lower Fen",
            "adults": 40,
            "effective_size": 16,
            "gene_diversity": 0.42,
            "reference_gene_diversity": 0.68,
        },
        "donors": [{"name": "Upper Fen", "gene_diversity": 0.6, "fst_to_recipient": 0.2}],
        "loci": [
            {
                "name": "coat",
                "role": "locally adapted",
                "fitness": [1, 0.98, 0.9],
                "frequency": 0.8,
                "donor_frequency": {"Upper Fen": 0.1},
            }
        ],
        "plans": [
            {"name": "No releases"},
            {
                "name": "Two, then one, then none",
                "releases": [{**release, "when": {"first_year": 2027}}],
            },
            {"name": "Once", "releases": [{**release, "when": {"first_year": 2030}}]},
        ],
        "what_ifs": [
            {"name": "Ne is 12", "changes": [{"path": "recipient.effective_size", "set": 12}]},
            {"name": "Ne is 99", "changes": [{"path": "recipient.effective_size", "set": 99}]},
        ],
        "targets": [{"measure": "inbreeding", "at_most": 0.5, "by_year": 2048}],
    }


@pytest.fixture
def case_file(tmp_path: Path) -> Path:
    """The small case, in a folder and under a name with spaces and letters beyond ASCII."""
    folder = tmp_path / "Fälle für Ørsted"
    folder.mkdir()
    path = folder / "wühl mäuse 田鼠.json"
    path.write_text(json.dumps(small()), encoding="utf-8")
    return path


@pytest.fixture(scope="module")
def shipped() -> Path:
    """A case that ships, with a life cycle and a tracked locus."""
    return places.scenarios() / BIRD


@pytest.fixture(scope="module")
def run_folder(shipped: Path, tmp_path_factory: pytest.TempPathFactory) -> Path:
    """One whole run of the shipped case through the entry of the program, in this process."""
    folder = tmp_path_factory.mktemp("whole") / "a run"
    assert main(["run", str(shipped), "--to", str(folder)]) == 0
    return folder


@pytest.fixture(scope="module")
def run_without_qt(shipped: Path, tmp_path_factory: pytest.TempPathFactory) -> Path:
    """The same run in a process of its own that has no Qt, with another number of workers."""
    folder = tmp_path_factory.mktemp("without") / "qt"
    asked = ["run", str(shipped), "--to", str(folder), "--workers", "2"]
    done = subprocess.run(
        [sys.executable, "-W", "error::ImportWarning", "-c", WITHOUT_QT, *asked],
        capture_output=True,
        text=True,
    )
    assert (done.returncode, done.stderr) == (0, "")
    return folder


def rows(folder: Path, name: str = "projection.csv") -> list[dict[str, str]]:
    """Return the rows of a CSV file as a stranger would read it."""
    text = (folder / name).read_text(encoding="utf-8")
    return list(csv.DictReader(io.StringIO(text, newline="")))


def complaint(capsys: pytest.CaptureFixture[str], arguments: list[object], code: int) -> str:
    """Return the one line that a refused call writes to standard error."""
    for entry in (main, cli.main):
        assert entry([str(one) for one in arguments]) == code
    said = capsys.readouterr().err
    lines = said.splitlines()
    assert len(lines) == 2
    assert lines[0] == lines[1]
    assert "Traceback" not in said
    assert lines[0].rstrip().endswith((".", "--help"))
    return lines[0]


# --- the files of a run ---------------------------------------------------------


def test_that_a_run_writes_the_files_that_are_bound(run_folder):
    names = {path.name for path in run_folder.iterdir()}
    assert names == {
        "projection.csv",
        "target_checks.csv",
        "figures",
        "annex.docx",
        "annex.html",
        "record.json",
    }
    kinds = {path.suffix for path in (run_folder / "figures").iterdir()}
    assert {".svg", ".pdf", ".png"} <= kinds


def test_that_projection_csv_is_the_projection_computed_in_process(run_folder, shipped):
    held = (run_folder / "projection.csv").read_bytes()
    assert held == comparison_csv(compare(load(shipped).case)).encode("utf-8")


def test_that_projection_csv_has_line_feeds_and_the_bound_header(run_folder):
    held = (run_folder / "projection.csv").read_bytes()
    assert held.startswith(HEADER.encode() + b"\n")
    assert b"\r" not in held
    assert not held.startswith(b"\xef\xbb\xbf")
    assert held.endswith(b"\n")
    checks = (run_folder / "target_checks.csv").read_bytes()
    assert checks.startswith(CHECKS_HEADER.encode() + b"\n")
    assert b"\r" not in checks


def test_that_rows_stand_in_the_bound_order(run_folder, shipped):
    plans = [plan.name for plan in load(shipped).case.plans]
    measures = [
        *("adults", "young", "gene_diversity", "gene_diversity_kept", "observed_heterozygosity"),
        *("inbreeding", "kinship", "relative_first_year_survival", "donor_ancestry"),
        *("rare_alleles_kept", "additive_variance_kept", "trait_mean", "trait_lag"),
        *("sustainable_shift", "yearly_growth", "persists", "load", "realised_effective_size"),
        *("allele_frequency", "allele_kept", "allele_fixed", "donor_adults", "released"),
        *("effective_migrants", "cost"),
    ]
    statistics = ["mean", "sd", "q05", "q25", "q50", "q75", "q95", "share"]
    depths = ["expected", "exact", "simulated"]
    places_of = [
        (
            plans.index(row["plan"]),
            depths.index(row["depth"]),
            measures.index(row["measure"].partition(":")[0]),
            row["measure"],
            statistics.index(row["statistic"]),
            int(row["generation"]),
        )
        for row in rows(run_folder)
    ]
    # Plain donor_ancestry comes before its parts; one donor or locus here, so names sort too.
    assert places_of == sorted(places_of)
    assert len(set(places_of)) == len(places_of)


def test_that_numbers_are_the_shortest_that_read_back_the_same(run_folder):
    numbers = [row[name] for row in rows(run_folder) for name in ("year", "value")]
    assert numbers
    for text in numbers:
        value = float(text)
        assert math.isfinite(value)
        assert text in {repr(value), str(int(value)) if value == int(value) else ""}
        assert not text.endswith(".0")


def test_that_year_and_generation_agree(run_folder, shipped):
    time = load(shipped).case.time
    for row in rows(run_folder):
        year = time.start_year.best + int(row["generation"]) * time.generation_years.best
        assert float(row["year"]) == pytest.approx(year, abs=1e-9)


def test_that_a_target_is_checked_at_the_last_step_reached_and_on_that_value(run_folder):
    held = {
        (row["plan"], row["depth"], row["measure"], row["statistic"], row["year"]): row["value"]
        for row in rows(run_folder)
    }
    checks = rows(run_folder, "target_checks.csv")
    assert checks
    for check in checks:
        keys = [
            (check["plan"], check["depth"], check["measure"], statistic, check["year"])
            for statistic in ("share", "mean")
        ]
        found = next(held[key] for key in keys if key in held)
        assert found == check["value"]
        assert float(check["year"]) <= float(check["by_year"]) + 1e-6
        bounds = [check["at_least"] or "-inf", check["at_most"] or "inf"]
        met = float(bounds[0]) <= float(check["value"]) <= float(bounds[1])
        assert check["met"] == ("yes" if met else "no")


def test_that_a_run_without_qt_gives_the_same_bytes(run_folder, run_without_qt):
    for name in ("projection.csv", "target_checks.csv"):
        assert (run_folder / name).read_bytes() == (run_without_qt / name).read_bytes()


def test_that_the_record_names_what_was_computed(run_folder, shipped):
    record = json.loads((run_folder / "record.json").read_text(encoding="utf-8"))
    case = load(shipped).case
    assert record["case"]["seed"] == case.run.seed.best
    assert record["case"]["plans"] == [plan.name for plan in case.plans]
    assert record["case"]["depths"] == ["expected", "exact"]


# --- choosing what is run -------------------------------------------------------


def ran(case_file: Path, *more: str) -> list[dict[str, str]]:
    """Run the small case without its figures and return the rows it wrote."""
    folder = case_file.parent / "out"
    assert main(["run", str(case_file), "--to", str(folder), *more]) == 0
    return rows(folder)


@pytest.fixture
def no_figures(monkeypatch: pytest.MonkeyPatch) -> None:
    """Leave the drawing out: it is most of the time, and other tests look at it."""
    from rescue_planner.annex import export

    monkeypatch.setattr(export, "pictures", lambda *_: ())


@pytest.mark.usefixtures("no_figures")
@pytest.mark.parametrize(
    ("asked", "plans"),
    [
        ("C", ["Once"]),
        ("c", ["Once"]),
        ("Once", ["Once"]),
        ("Two, then one, then none", ["Two, then one, then none"]),
        ("Once,Two, then one, then none", ["Two, then one, then none", "Once"]),
        ("C,A,B", ["Two, then one, then none", "Once"]),
        ("B,C", ["Two, then one, then none", "Once"]),
        ("No releases", []),
    ],
)
def test_that_plans_are_chosen_by_letter_or_name(case_file, asked, plans):
    found = dict.fromkeys(row["plan"] for row in ran(case_file, "--plans", asked))
    assert list(found) == ["No releases", *plans]  # in the order of the case, whatever was asked


@pytest.mark.usefixtures("no_figures")
@pytest.mark.parametrize(
    ("asked", "depths"),
    [("expected", {"expected"}), ("exact", {"exact"}), ("exact,expected", {"expected", "exact"})],
)
def test_that_depths_are_chosen(case_file, asked, depths):
    assert {row["depth"] for row in ran(case_file, "--depth", asked)} == depths


@pytest.mark.usefixtures("no_figures")
def test_that_a_horizon_of_21_years_of_0_7_years_is_30_generations(case_file):
    assert max(int(row["generation"]) for row in ran(case_file)) == 30


@pytest.mark.usefixtures("no_figures")
def test_that_a_what_if_changes_every_plan_and_stands_in_the_record(case_file):
    plain, changed = ran(case_file), ran(case_file, "--what-if", "Ne is 12")
    last = [
        {row["plan"]: row["value"] for row in held if row["measure"] == "gene_diversity"}
        for held in (plain, changed)
    ]
    assert all(float(last[1][plan]) < float(last[0][plan]) for plan in last[0])
    record = json.loads((case_file.parent / "out" / "record.json").read_text(encoding="utf-8"))
    assert record["case"]["what_if"]["name"] == "Ne is 12"


@pytest.mark.usefixtures("no_figures")
def test_that_the_seed_of_the_call_stands_in_the_record(case_file):
    ran(case_file, "--seed", "77", "--replicates", "10", "--workers", "3")
    record = json.loads((case_file.parent / "out" / "record.json").read_text(encoding="utf-8"))
    assert record["case"]["seed"] == 77


# --- calls that cannot be understood: exit code 2 -------------------------------


@pytest.mark.parametrize(
    ("more", "word"),
    [
        (["--depth", "deep"], "“deep”"),
        (["--depth", ""], "--depth"),
        (["--depth", "simulated"], "simulate"),
        (["--plans", "Z"], "“Z”"),
        (["--plans", ""], "“”"),
        (["--plans", "Once,Twice"], "“Twice”"),
        (["--what-if", "the sky falls"], "Ne is 12"),
        (["--seed", "-1"], "--seed"),
        (["--seed", "9999999999999999999999"], "--seed"),
        (["--seed", "seven"], "--seed"),
        (["--replicates", "0"], "--replicates"),
        (["--replicates", "1e3"], "--replicates"),
        (["--workers", "0"], "--workers"),
        (["--fast"], "--fast"),
        (["--dep", "expected"], "--dep"),
    ],
)
def test_that_a_call_that_is_not_understood_names_what_was_wrong(case_file, capsys, more, word):
    asked = ["run", case_file, "--to", case_file.parent / "out", *more]
    assert word in complaint(capsys, asked, 2)
    assert not (case_file.parent / "out").exists()


def test_that_a_run_needs_a_folder_and_every_command_a_case(case_file, capsys):
    assert "--to" in complaint(capsys, ["run", case_file], 2)
    assert "CASE" in complaint(capsys, ["check"], 2)


def test_that_an_unknown_command_is_refused(capsys):
    assert main(["chekc"]) == 2
    assert "“chekc”" in capsys.readouterr().err
    assert cli.main(["chekc"]) == 2
    assert "chekc" in capsys.readouterr().err


def test_that_a_file_in_the_place_of_the_folder_is_refused(case_file, capsys):
    folder = case_file.parent / "taken"
    folder.write_text("mine", encoding="utf-8")
    assert "taken" in complaint(capsys, ["run", case_file, "--to", folder], 2)
    assert folder.read_text(encoding="utf-8") == "mine"


@pytest.mark.usefixtures("no_figures")
def test_that_a_folder_that_refuses_a_file_is_one_sentence(case_file, capsys):
    folder = case_file.parent / "out"
    (folder / "projection.csv").mkdir(parents=True)  # a folder where the file should be
    assert "projection.csv" in complaint(capsys, ["run", case_file, "--to", folder], 2)


# --- cases that are broken: exit code 1 -----------------------------------------


def _truncated(path: Path) -> bytes:
    whole = path.parent / "whole.rescue"
    save(whole, load(path).case)
    return whole.read_bytes()[:-40]


def _outside(path: Path) -> bytes:
    held = io.BytesIO()
    with zipfile.ZipFile(held, "w") as archive:
        archive.writestr("case.json", path.read_bytes())
        archive.writestr("../x", b"out")
    return held.getvalue()


def _edited(**fields: object) -> bytes:
    return json.dumps(small() | fields).encode()


BROKEN = {
    "truncated": (_truncated, "damaged or cut short"),
    "outside": (_outside, "../x"),
    "nan": (lambda _: _edited(time={"start_year": math.nan}), "NaN"),
    "infinite": (lambda _: _edited(time={"start_year": math.inf}), "Infinity"),
    "doubled": (lambda _: b'{"title": "a", "title": "b"}', "“title” twice"),
    "newer": (lambda _: _edited(version=2), "newer"),
    "nothing": (lambda _: b"", "JSON"),
    "no object": (lambda _: b"[]", "no case"),
    "not text": (lambda _: b"\xff\xfe\x00", "UTF-8"),
    "deep": (lambda _: b"[" * 5000, "nested"),
    "type": (lambda _: _edited(title=7), "title: "),
    "field": (lambda _: _edited(colour="red"), "colour: "),
    "plans": (
        lambda _: _edited(plans=[{"name": f"Plan {n}"} for n in range(10_000)]),
        "plans: ",
    ),
    "true": (lambda _: _edited(donors=True), "donors: "),
}


@pytest.mark.parametrize("command", ["check", "run"])
@pytest.mark.parametrize("kind", BROKEN)
def test_that_a_broken_case_is_one_clear_sentence(case_file, capsys, command, kind):
    content, word = BROKEN[kind]
    broken = case_file.with_name("broken.rescue")
    broken.write_bytes(content(case_file))
    more = ["--to", case_file.parent / "out"] if command == "run" else []
    assert word in complaint(capsys, [command, broken, *more], 1)
    assert not (case_file.parent / "out").exists()


def test_that_a_missing_case_is_named(tmp_path, capsys):
    assert "“none.rescue”" in complaint(capsys, ["check", tmp_path / "none.rescue"], 1)


def test_that_every_problem_is_listed_with_its_path(case_file, capsys):
    raw = small()
    raw["recipient"] = {"name": "Lower Fen", "adults": -1, "effective_size": 16}
    raw["donors"][0]["fst_to_recipient"] = 1.5
    case_file.write_text(json.dumps(raw), encoding="utf-8")
    assert main(["check", str(case_file)]) == 1
    paths = [line.partition(": ")[0] for line in capsys.readouterr().err.splitlines()]
    assert "recipient.adults" in paths
    assert "recipient.gene_diversity" in paths
    assert "donors[0].fst_to_recipient" in paths


def test_that_a_what_if_that_makes_a_problem_is_a_problem(case_file, capsys):
    asked = ["run", case_file, "--to", case_file.parent / "out", "--what-if", "Ne is 99"]
    said = complaint(capsys, asked, 1)
    assert said.startswith("recipient.effective_size: Under the what-if “Ne is 99”")


def test_that_a_run_that_is_stopped_says_so_and_leaves_no_record(case_file, capsys, monkeypatch):
    from rescue_planner.annex import export

    def stop(*_: object) -> None:
        raise KeyboardInterrupt

    monkeypatch.setattr(export, "pictures", stop)
    folder = case_file.parent / "out"
    assert "record.json" in complaint(capsys, ["run", case_file, "--to", folder], 130)
    assert not (folder / "record.json").exists()


# --- check and examples ---------------------------------------------------------


def test_that_check_names_each_remark_and_its_path(case_file, capsys):
    assert main(["check", str(case_file)]) == 0
    said = capsys.readouterr()
    assert said.err == ""
    assert "remark no-life-cycle at life_cycle: " in said.out
    assert said.out.splitlines()[-1].startswith("Marsh voles: no problems, ")


def test_that_control_characters_of_a_case_do_not_reach_the_terminal(case_file, capsys):
    case_file.write_bytes(_edited(title="a\x1b[31m\nb"))
    assert main(["check", str(case_file)]) == 0
    out = capsys.readouterr().out
    assert "\x1b" not in out
    assert "a [31m b: no problems" in out


def test_that_a_stream_without_these_letters_gets_escapes_and_no_traceback(case_file):
    done = subprocess.run(
        [sys.executable, "-c", WITHOUT_QT, "check", str(case_file.with_name("fehlt ß.json"))],
        capture_output=True,
        env={"PYTHONIOENCODING": "ascii:strict", "PATH": "", "SYSTEMROOT": ""},
    )
    assert done.returncode == 1
    assert b"Traceback" not in done.stderr
    assert done.stderr.count(b"\n") == 1


def test_that_a_reader_who_stops_reading_gets_no_traceback():
    child = subprocess.Popen(
        [sys.executable, "-m", "rescue_planner", "examples"],
        stdout=subprocess.PIPE,
        stderr=subprocess.PIPE,
    )
    child.stdout.close()
    assert child.stderr.read() == b""
    child.stderr.close()
    assert child.wait() in (0, 130)


def test_that_examples_are_listed_with_their_titles(capsys):
    assert main(["examples"]) == 0
    lines = capsys.readouterr().out.splitlines()
    shipped = sorted(places.scenarios().glob("*.json"))
    assert len(lines) == len(shipped) >= 4
    for line, path in zip(lines, shipped, strict=True):
        assert line == f"{path}: {load(path).case.title}"


def test_that_examples_are_copied_and_never_over_a_file(tmp_path, capsys):
    folder = tmp_path / "new" / "cases"
    folder.mkdir(parents=True)
    (folder / BIRD).write_text("my own", encoding="utf-8")
    assert main(["examples", "--copy-to", str(folder)]) == 0
    assert (folder / BIRD).read_text(encoding="utf-8") == "my own"
    assert f"{folder / BIRD} is there already" in capsys.readouterr().out
    for path in places.scenarios().glob("*.json"):
        if path.name != BIRD:
            assert (folder / path.name).read_bytes() == path.read_bytes()


def test_that_a_file_in_the_place_of_the_examples_folder_is_one_sentence(tmp_path, capsys):
    taken = tmp_path / "taken"
    taken.write_text("mine", encoding="utf-8")
    assert "taken" in complaint(capsys, ["examples", "--copy-to", taken], 2)
