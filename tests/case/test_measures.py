import pytest

from rescue_planner.case.measures import keys, known, title
from rescue_planner.case.problems import read_case
from tests.case.sample import full


def test_that_every_key_of_a_case_is_known_and_named():
    case = read_case(full())
    listed = list(keys(case))
    assert len(listed) == len(set(listed))
    assert all(known(key, case) and title(key) for key in listed)


@pytest.mark.parametrize(
    "key",
    ["", "fish", "inbreeding:", "donor_ancestry:", "donor_ancestry:coat", "allele_kept",
     "allele_kept:Upper Fen", "donor_adults", "Inbreeding"],
)  # fmt: skip
def test_that_other_keys_are_not_known(key):
    assert not known(key, read_case(full()))
