import pytest
from hypothesis import given
from hypothesis import strategies as st

from rescue_planner.case.paths import ANY, drop, format_path, get, parse_path, put
from rescue_planner.case.problems import read_case
from rescue_planner.case.raw import matches, to_raw
from tests.case.sample import full, small

name = st.text(min_size=1).filter(lambda text: text.isprintable())
steps = st.tuples(name, st.lists(name | st.integers(0, 99) | st.none(), max_size=5))


def test_that_a_path_is_read_into_names_places_and_stars():
    path = parse_path('plans[*].releases[0].who["a.b"]')
    assert path == ("plans", ANY, "releases", 0, "who", "a.b")


@given(steps)
def test_that_a_written_path_reads_back_the_same(drawn):
    path = (drawn[0], *drawn[1])
    assert parse_path(format_path(path)) == path


@pytest.mark.parametrize(
    "text", ["", ".a", "a..b", "a.", "a[", "a[x]", "a]", "a[-1]", "a[*]b", 'a["b]']
)
def test_that_what_is_no_path_is_refused(text):
    with pytest.raises(ValueError, match="path"):
        parse_path(text)


def test_that_put_leaves_the_given_object_as_it_was():
    raw = small()
    new = put(raw, "recipient.adults", 50)
    assert (get(raw, "recipient.adults"), get(new, "recipient.adults")) == (40, 50)


def test_that_put_makes_the_parts_on_the_way():
    assert put({}, "a.b[0].c", 1) == {"a": {"b": [{"c": 1}]}}


def test_that_put_refuses_a_place_behind_the_end_of_a_list():
    with pytest.raises(KeyError, match=r"plans\[5\]"):
        put(small(), "plans[5].name", "x")


def test_that_drop_takes_out_an_entry_of_a_list():
    assert drop({"a": [1, 2, 3]}, "a[1]") == {"a": [1, 3]}


def test_that_drop_of_nothing_is_refused():
    with pytest.raises(KeyError):
        drop({"a": {}}, "a.b")


def test_that_a_star_finds_every_release():
    found = matches(full(), "plans[*].releases[*].afterwards.survive_to_breed")
    assert [format_path(path) for path in found] == [
        "plans[2].releases[0].afterwards.survive_to_breed"
    ]


def test_that_a_field_left_out_is_found_where_its_part_has_defaults():
    raw = full()
    del raw["plans"][2]["releases"][0]["afterwards"]
    assert len(matches(raw, "plans[*].releases[*].afterwards.survive_to_breed")) == 1


def test_that_a_star_goes_over_names_too():
    found = matches(full(), "loci[*].donor_frequency[*]")
    assert [path[-1] for path in found] == ["Upper Fen", "St. Anne [pens]"]


@pytest.mark.parametrize(
    "path",
    [
        "title",
        "recipient",
        "recipient.ne",
        "recipient.effective_size.best",
        "plans[7].effective_size",
        "donors[*].life_cycle.last_age",
        'loci[0].donor_frequency["Nowhere"]',
    ],
)
def test_that_what_is_no_number_of_the_case_is_not_found(path):
    assert matches(full(), path) == ()


def test_that_the_plain_form_of_a_case_is_what_was_read():
    assert to_raw(read_case(full())) == full()


def test_that_the_plain_form_says_format_and_version():
    raw = to_raw(read_case(small()))
    assert raw == {"format": "rescue case", "version": 1, **small()}


def test_that_whole_numbers_and_fractions_keep_their_form():
    raw = to_raw(read_case(full()))
    assert (type(raw["recipient"]["adults"]), type(raw["time"]["generation_years"])) == (int, float)
