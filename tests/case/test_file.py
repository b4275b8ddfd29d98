"""Opening and saving: what is kept, what is refused, and that a failure loses nothing."""

import errno
import io
import json
import os
import stat
import struct
import zipfile
from pathlib import Path

import pytest

from rescue_planner.case import container, file
from rescue_planner.case.container import ContainerError, packed, unpacked
from rescue_planner.case.file import (
    CaseFileError,
    canonical,
    case_hash,
    case_text,
    load,
    save,
)
from rescue_planner.case.json_text import JsonError, parse_json
from rescue_planner.case.problems import InvalidCase, read_case
from tests.case.sample import changed, full, small

TABLES = {"counts.csv": b"year,adults\r\n2024,40\r\n", "Zähne 2.csv": b"\xff\x00,"}
LOG = ({"when": "2026-11-02", "what": "Set adults to 40"}, {"what": "Add plan “Wave”"})


@pytest.fixture
def case():
    return read_case(full())


def zipped(**members: bytes) -> bytes:
    """Return a zip with `case.json` and further members by name."""
    held = io.BytesIO()
    with zipfile.ZipFile(held, "w", zipfile.ZIP_DEFLATED) as archive:
        for name, content in {"case.json": json.dumps(small()).encode(), **members}.items():
            archive.writestr(name, content)
    return held.getvalue()


def refusal(tmp_path: Path, content: bytes, name: str = "case.rescue") -> str:
    """Return the sentence with which a file of this content is refused."""
    path = tmp_path / name
    path.write_bytes(content)
    with pytest.raises(CaseFileError) as refused:
        load(path)
    text = str(refused.value)
    assert text.startswith(f"“{name}” cannot be opened: ")
    assert text.endswith(".")
    assert "\n" not in text
    return text


# --- what is kept ---------------------------------------------------------------


@pytest.mark.parametrize("name", ["case.rescue", "case.json", "case.JSON"])
def test_that_a_saved_case_opens_the_same(tmp_path, case, name):
    save(tmp_path / name, case)
    opened = load(tmp_path / name)
    assert case_text(opened.case) == case_text(case)
    assert (opened.case, opened.said) == (case, ())


def test_that_tables_and_trail_are_kept_to_the_byte(tmp_path, case):
    save(tmp_path / "case.rescue", case, tables=TABLES, log=LOG)
    opened = load(tmp_path / "case.rescue")
    assert (dict(opened.tables), opened.log) == (TABLES, LOG)


def test_that_saving_twice_gives_the_same_bytes(tmp_path, case):
    for name in ("a.rescue", "b.rescue"):
        save(tmp_path / name, case, tables=TABLES, log=LOG)
    assert (tmp_path / "a.rescue").read_bytes() == (tmp_path / "b.rescue").read_bytes()


def test_that_the_container_reads_with_a_plain_zip_reader(tmp_path, case):
    save(tmp_path / "case.rescue", case, tables=TABLES, log=LOG)
    with zipfile.ZipFile(tmp_path / "case.rescue") as archive:
        assert archive.testzip() is None
        assert json.loads(archive.read("case.json")) == full()
        assert archive.namelist() == [
            "case.json", "tables/Zähne 2.csv", "tables/counts.csv", "log.jsonl",
        ]  # fmt: skip


def test_that_a_table_of_zeros_can_be_opened_again(tmp_path, case):
    tables = {"zeros.csv": b"0," * 2_000_000}
    save(tmp_path / "case.rescue", case, tables=tables)
    assert dict(load(tmp_path / "case.rescue").tables) == tables


def test_that_a_byte_order_mark_is_accepted(tmp_path):
    (tmp_path / "a.json").write_bytes(b"\xef\xbb\xbf" + json.dumps(small()).encode())
    assert load(tmp_path / "a.json").case == read_case(small())


def test_that_the_content_counts_and_not_the_suffix(tmp_path, case):
    save(tmp_path / "case.rescue", case)
    (tmp_path / "case.rescue").rename(tmp_path / "case.json")
    assert load(tmp_path / "case.json").case == case


def test_that_a_damaged_line_of_the_trail_is_left_out_and_said(tmp_path):
    log = b'{"what": 1}\nbroken\n\n[1]\n{"what": 2}\n'
    (tmp_path / "a.rescue").write_bytes(zipped(**{"log.jsonl": log}))
    opened = load(tmp_path / "a.rescue")
    assert opened.log == ({"what": 1}, {"what": 2})
    assert opened.said == ("2 lines of the edit trail could not be read and are left out.",)


# --- the canonical form -----------------------------------------------------------


def test_that_the_same_said_in_another_way_has_the_same_hash():
    raw = full()
    raw["recipient"]["adults"] = {"best": 40.0}
    raw["loci"][0]["donor_frequency"] = dict(
        reversed(list(raw["loci"][0]["donor_frequency"].items()))
    )
    del raw["donors"][0]["fst_form"], raw["plans"][2]["rules"][1]["release"]["cost"]
    assert case_hash(read_case(raw)) == case_hash(read_case(full()))


def test_that_any_changed_value_changes_the_hash():
    base = case_hash(read_case(full()))
    for path, value in (("recipient.adults", 41), ("title", "x"), ("run.seed", 3)):
        assert case_hash(read_case(changed(full(), path, value))) != base


def test_that_the_canonical_form_holds_defaults_and_sorted_keys(case):
    held = json.loads(canonical(read_case(small())))
    assert held["run"] == {"parameter_draws": 1, "replicates": 1000, "seed": 1}
    assert list(held) == sorted(held)


# --- what is refused: bare JSON -------------------------------------------------------


@pytest.mark.parametrize(
    ("content", "word"),
    [
        (b"", "not valid JSON"),
        (b"no json", "not valid JSON (line 1, column 1"),
        (b'{"title": }', "line 1, column 11"),
        (b"[1, 2]", "it holds no case"),
        (b'{"title": "\xff"}', "not UTF-8 text (line 1)"),
        (b'{"title": 1, "title": 2}', "says “title” twice"),
        (b'{"run": {"seed": 1, "seed": 1}}', "says “seed” twice"),
        (b'{"title": NaN}', "holds NaN"),
        (b'{"title": -Infinity}', "holds -Infinity"),
        (b'{"title": 1e999}', "holds 1e999"),
        (b'{"title": ' + b"9" * 5000 + b"}", "5000 digits"),
        (b'{"title": "\\ud800"}', "half of a character"),
        (b"[" * 100_000, "nested more than 60 deep"),
        (b'{"a":' * 100_000, "nested more than 60 deep"),
        (b'{"version": "1"}', "“version” must be a whole number"),
        (b'{"version": 1.0}', "“version” must be a whole number"),
        (b'{"version": true}', "“version” must be a whole number"),
        (b'{"version": 0}', "never known file version 0"),
        (b"\x89PNG\r\n", "not UTF-8"),
    ],
    ids=lambda one: repr(one)[:24],
)
def test_that_a_text_that_is_no_case_is_refused(tmp_path, content, word):
    assert word in refusal(tmp_path, content, "case.json")


def test_that_the_words_of_a_json_error_are_kept_short():
    with pytest.raises(JsonError, match=r"“x{60}” twice"):
        parse_json(json.dumps({"x" * 90: 1}).replace("}", ', "' + "x" * 90 + '": 2}').encode())


def test_that_brackets_inside_texts_do_not_count_as_nesting():
    assert parse_json(json.dumps({"a": '\\"[' * 500}).encode()) == {"a": '\\"[' * 500}


def test_that_a_newer_version_is_refused_before_anything_else(tmp_path):
    content = json.dumps({"format": "rescue case", "version": 2, "unknown": [1]}).encode()
    text = refusal(tmp_path, content, "case.json")
    assert "newer version of this program (file version 2, this program reads up to 1)" in text


def test_that_a_text_too_large_is_refused(tmp_path):
    assert "too large" in refusal(tmp_path, b" " * 20_000_001, "case.json")


def test_that_problems_of_the_case_come_as_problems(tmp_path):
    (tmp_path / "a.json").write_text(json.dumps(changed(small(), "recipient.adults", -1)))
    with pytest.raises(InvalidCase, match=r"recipient\.adults"):
        load(tmp_path / "a.json")


@pytest.mark.parametrize("name", ["nowhere.rescue", ".", "a\0b"])
def test_that_what_cannot_be_read_is_one_sentence(tmp_path, name):
    with pytest.raises(CaseFileError, match=r"cannot be opened: .*\.$"):
        load(tmp_path / name)


# --- what is refused: containers --------------------------------------------------------


def test_that_every_cut_of_a_container_is_refused(tmp_path):
    whole = zipped(**{"tables/a.csv": b"1,2\n" * 50})
    for length in range(2, len(whole), 7):
        (tmp_path / "a.rescue").write_bytes(whole[:length])
        with pytest.raises(CaseFileError, match=r"damaged|JSON"):
            load(tmp_path / "a.rescue")


def test_that_a_flipped_byte_never_opens_as_another_case(tmp_path):
    whole = zipped()
    path = tmp_path / "a.rescue"
    for at in range(0, len(whole), 5):
        path.write_bytes(whole[:at] + bytes([whole[at] ^ 0x15]) + whole[at + 1 :])
        try:
            opened = load(path)
        except CaseFileError:
            continue
        assert opened.case == read_case(small())


@pytest.mark.parametrize(
    "name",
    [
        "../x.csv", "tables/../x.csv", "/etc/x.csv", "tables/..\\x.csv", "C:\\x.csv",
        "tables/C:x.csv", "tables/deep/x.csv", "tables/x.txt", "tables/.csv", "notes.txt",
        "tables/.x.csv", "CASE.JSON.bak", "tables//x.csv", "log.jsonl/x.csv",
    ],
)  # fmt: skip
def test_that_a_member_that_is_no_part_of_a_case_is_refused_by_name(tmp_path, name):
    assert f"it holds “{name}”" in refusal(tmp_path, zipped(**{name: b"1"}))


def test_that_a_name_with_a_zero_byte_is_refused(tmp_path):
    whole = zipped(**{"tables/a.csvXb.csv": b"1"}).replace(b"csvXb", b"csv\0b")
    assert "no part of a rescue case" in refusal(tmp_path, whole)


@pytest.mark.filterwarnings("ignore:Duplicate name")
def test_that_a_doubled_member_is_refused(tmp_path):
    held = io.BytesIO(zipped())
    with zipfile.ZipFile(held, "a") as archive:
        archive.writestr("case.json", b"{}")
    assert "“case.json” twice" in refusal(tmp_path, held.getvalue())


def test_that_names_that_differ_in_capitals_only_are_refused(tmp_path):
    content = zipped(**{"tables/a.csv": b"1", "tables/A.csv": b"2"})
    assert "“tables/A.csv” twice" in refusal(tmp_path, content)


def test_that_the_folder_of_tables_may_have_an_entry(tmp_path):
    (tmp_path / "a.rescue").write_bytes(zipped(**{"tables/": b""}))
    assert load(tmp_path / "a.rescue").tables == {}


def test_that_a_container_without_a_case_is_refused(tmp_path):
    held = io.BytesIO()
    with zipfile.ZipFile(held, "w") as archive:
        archive.writestr("log.jsonl", b"")
    assert "holds no “case.json”" in refusal(tmp_path, held.getvalue())


def test_that_too_many_members_are_refused(tmp_path):
    content = zipped(**{f"tables/{i}.csv": b"" for i in range(500)})
    assert "more than 500 files" in refusal(tmp_path, content)


def test_that_a_zip_bomb_is_refused(tmp_path):
    text = refusal(tmp_path, zipped(**{"tables/a.csv": b"\0" * 30_000_000}))
    assert "unpacks to far too much" in text


def test_that_a_false_size_in_the_header_does_not_help_a_bomb(tmp_path):
    whole = zipped(**{"tables/a.csv": b"\0" * 30_000_000})
    small_size = whole.replace(struct.pack("<L", 30_000_000), struct.pack("<L", 10))
    assert "damaged" in refusal(tmp_path, small_size)


def test_that_sizes_are_counted_over_all_members(tmp_path, monkeypatch):
    monkeypatch.setattr(container, "MOST_BYTES", 5000)
    tables = {f"tables/{i}.csv": os.urandom(2000) for i in range(3)}
    with pytest.raises(ContainerError, match="too large"):
        unpacked(zipped(**tables))


def test_that_a_case_in_a_container_is_limited_like_a_bare_one(monkeypatch):
    monkeypatch.setattr(container, "MOST_CASE_BYTES", 100)
    with pytest.raises(ContainerError, match=r"“case.json” in it is too large"):
        unpacked(zipped())


def test_that_a_locked_container_is_refused(tmp_path):
    whole = bytearray(zipped())
    for mark, offset in ((b"PK\x03\x04", 6), (b"PK\x01\x02", 8)):
        whole[whole.index(mark) + offset] |= 1  # the bit that says: needs a password
    assert "packed in a way" in refusal(tmp_path, bytes(whole))


# --- saving ---------------------------------------------------------------------------


def test_that_a_failing_disk_keeps_the_old_file_whole(tmp_path, case, monkeypatch):
    path = tmp_path / "case.rescue"
    save(path, read_case(small()))
    before = path.read_bytes()

    def full_disk(*_):
        raise OSError(errno.ENOSPC, "No space left on device")

    for name in ("fsync", "replace"):
        with monkeypatch.context() as disk:
            if name == "fsync":
                disk.setattr(file.os, "fsync", full_disk)
            else:
                disk.setattr(Path, "replace", full_disk)
            with pytest.raises(CaseFileError, match="no space left on device; what was saved"):
                save(path, case)
        assert path.read_bytes() == before
        assert list(tmp_path.iterdir()) == [path]


def test_that_a_folder_that_is_not_there_is_one_sentence(tmp_path, case):
    with pytest.raises(CaseFileError, match="cannot be saved"):
        save(tmp_path / "nowhere" / "case.rescue", case)


def test_that_another_suffix_is_refused(tmp_path, case):
    with pytest.raises(CaseFileError, match=r"must end in \.rescue or \.json"):
        save(tmp_path / "case.txt", case)
    assert list(tmp_path.iterdir()) == []


def test_that_tables_are_not_lost_in_a_bare_json(tmp_path, case):
    with pytest.raises(CaseFileError, match="no room for tables"):
        save(tmp_path / "case.json", case, tables=TABLES)


@pytest.mark.parametrize("name", ["../a.csv", "a/b.csv", "a.txt", "C:a.csv", ".csv"])
def test_that_a_table_has_a_plain_name(tmp_path, case, name):
    with pytest.raises(CaseFileError, match="a table cannot be called"):
        save(tmp_path / "case.rescue", case, tables={name: b""})


def test_that_what_could_not_be_opened_again_is_not_saved(monkeypatch):
    monkeypatch.setattr(container, "MOST_BYTES", 100)
    with pytest.raises(ContainerError, match="too large to be opened again"):
        packed({"case.json": b" " * 101})


def test_that_a_link_keeps_pointing_to_the_saved_file(tmp_path, case):
    target, link = tmp_path / "real.rescue", tmp_path / "link.rescue"
    save(target, read_case(small()))
    try:
        link.symlink_to(target)
    except OSError:
        pytest.skip("this system has no links")
    save(link, case)
    assert link.is_symlink()
    assert load(target).case == case


@pytest.mark.skipif(os.name == "nt", reason="Windows keeps rights elsewhere")
def test_that_the_rights_of_a_shared_file_stay(tmp_path, case):
    path = tmp_path / "case.rescue"
    save(path, case)
    path.chmod(0o664)
    save(path, case)
    assert stat.S_IMODE(path.stat().st_mode) == 0o664
