"""Problems that only several fields together show: years, numbers, genetics, what is asked."""

import pytest

from tests.case.sample import changed, full, problems_of, small, with_release

# --- years, numbers of animals, sizes --------------------


@pytest.mark.parametrize(
    ("path", "year", "word"),
    [
        ("plans[2].releases[0].when.first_year", 2026, "before the start"),
        ("plans[1].steady[0].from_year", 2026, "before the start"),
        ("plans[1].steady[0].from_year", 2088, "after the horizon"),
        ("plans[1].steady[0].to_year", 2026, "before the start"),
        ("plans[2].other_actions[0].year", 2026, "before the start"),
        ("plans[2].other_actions[0].year", 2088, "after the horizon"),
        ("targets[0].by_year", 2026, "before the start"),
    ],
)
def test_that_an_event_outside_the_years_is_named(path, year, word):
    assert word in problems_of(changed(full(), path, year))[path]


def test_that_flow_may_end_after_the_horizon():
    assert problems_of(changed(full(), "plans[1].steady[0].to_year", 2088)) == {}


def test_that_a_release_after_the_horizon_is_named():
    found = problems_of(with_release(when={"first_year": 2088}))
    assert "after the horizon (2087)" in found["plans[1].releases[0].when.first_year"]


def test_that_the_last_of_repeated_releases_counts():
    when = {"first_year": 2030, "every_years": 10, "times": 7}
    assert (
        "in 2090, after" in problems_of(with_release(when=when))["plans[1].releases[0].when.times"]
    )


@pytest.mark.parametrize(
    ("path", "year"),
    [("plans[1].steady[0].to_year", 2026), ("plans[2].other_actions[0].until_year", 2029)],
)
def test_that_an_end_before_the_beginning_is_named(path, year):
    assert "before it begins" in problems_of(changed(full(), path, year))[path]


def test_that_a_horizon_of_too_many_generations_is_refused():
    assert (
        "20000"
        in problems_of(changed(small(), "time.generation_years", 1e-6))["time.generation_years"]
    )


def test_that_animals_of_all_releases_of_a_year_are_added_up():
    raw = with_release(when={"first_year": 2030, "every_years": 2, "times": 3})
    raw["plans"][1]["releases"].append(
        {"donor": "Upper Fen", "who": {"females": 4}, "when": {"first_year": 2034}}
    )
    raw["donors"][0]["most_removed_per_year"] = 6
    text = problems_of(raw)["plans[1].releases"]
    assert "“Wave” takes 3 + 4 = 7 animals from “Upper Fen” in 2034, and at most 6" in text


def test_that_the_limit_itself_may_be_taken():
    assert problems_of(changed(with_release(), "donors[0].most_removed_per_year", 3)) == {}


def test_that_years_over_the_limit_are_counted():
    raw = with_release(when={"first_year": 2030, "times": 5})
    found = problems_of(changed(raw, "donors[0].most_removed_per_year", 2))
    assert "in 2030 (and in 4 later years)" in found["plans[1].releases"]


def test_that_a_rule_that_takes_more_than_the_limit_is_named():
    raw = changed(full(), "plans[2].rules[1].release.who", {"females": 9})
    assert "takes 9 animals" in problems_of(raw)["plans[2].rules[1].release.who"]


@pytest.mark.parametrize("path", ["recipient.effective_size", "plans[1].effective_size"])
def test_that_an_effective_size_is_between_1_and_the_adults(path):
    assert "above the 40 adults" in problems_of(changed(full(), path, 41))[path]
    assert "at least 1" in problems_of(changed(full(), path, 0.9))[path]
    assert path not in problems_of(changed(full(), path, 40))


def test_that_other_actions_may_not_take_the_effective_size_below_1():
    actions = [{"what": f"ditch {i}", "year": 2030, "carrying_capacity_times": 0.2} for i in (1, 2)]
    raw = changed(with_release(), "plans[1].other_actions", actions)
    text = problems_of(raw)["plans[1].other_actions"]
    assert "From 2027 on" in text
    assert "16 × 0.04 = 0.64" in text


def test_that_actions_at_different_times_do_not_multiply():
    first = {"what": "a", "year": 2030, "until_year": 2034, "carrying_capacity_times": 0.2}
    second = {"what": "b", "year": 2035, "carrying_capacity_times": 0.2}
    raw = changed(with_release(), "plans[1].other_actions", [first, second])
    assert problems_of(raw) == {}


def test_that_an_action_that_ends_uncovers_another_one():
    up = {"what": "a", "year": 2027, "until_year": 2034, "carrying_capacity_times": 10}
    down = {"what": "b", "year": 2027, "carrying_capacity_times": 0.05}
    raw = changed(with_release(), "plans[1].other_actions", [up, down])
    assert "From 2035 on" in problems_of(raw)["plans[1].other_actions"]


@pytest.mark.parametrize("sex", ["females", "males"])
def test_that_somebody_must_breed(sex):
    path = f"recipient.breeding_{sex}"
    assert f"no breeding {sex}" in problems_of(changed(small(), path, 0))[path]


def test_that_ancestries_at_the_start_sum_to_1_at_most():
    shares = {"Upper Fen": 0.6, "St. Anne [pens]": 0.5}
    raw = changed(full(), "recipient.donor_ancestry_at_start", shares)
    assert "sum to 1.1" in problems_of(raw)["recipient.donor_ancestry_at_start"]


# --- genetics --------------------


@pytest.mark.parametrize(
    ("frequency", "fitness", "word"),
    [(0.5, [0, 0, 0], "all three"), (1, [0, 1, 1], "AA"), (0, [1, 1, 0], "aa")],
)
def test_that_a_fitness_that_kills_everybody_is_named(frequency, fitness, word):
    raw = changed(changed(full(), "loci[0].frequency", frequency), "loci[0].fitness", fitness)
    assert word in problems_of(raw)["loci[0].fitness"]


@pytest.mark.parametrize(
    ("frequency", "fitness"), [(0.5, [0, 1, 0]), (1, [1, 0, 0]), (0, [0, 0, 1])]
)
def test_that_a_fitness_that_leaves_somebody_is_fine(frequency, fitness):
    raw = changed(changed(full(), "loci[0].frequency", frequency), "loci[0].fitness", fitness)
    assert problems_of(raw) == {}


def test_that_a_trait_needs_heritability():
    assert "trait.heritability" in problems_of(changed(full(), "trait.heritability", 0))


def test_that_the_fst_of_two_donors_agrees_in_hudsons_form():
    """Nei's G of 0.08 / (2 - 0.08) is Hudson's 0.08: 2G / (1 + G)."""
    path = 'donors[1].fst_to_donors["Upper Fen"]'
    assert problems_of(changed(full(), path, 0.08 / (2 - 0.08))) == {}
    found = problems_of(changed(full(), path, 0.08))
    assert "0.148148 here and 0.08 there" in found["donors[1].fst_to_donors.Upper Fen"]


def test_that_a_donor_has_no_fst_to_itself():
    path = "donors[0].fst_to_donors.Upper Fen"
    assert "itself" in problems_of(changed(full(), path, 0.1))[path]


# --- life cycle --------------------


@pytest.mark.parametrize("sex", ["female", "male"])
def test_that_the_last_age_is_no_lower_than_first_breeding(sex):
    raw = changed(full(), f"life_cycle.first_breeding_age.{sex}", 11)
    assert f"first breeding age of {sex}s, 11" in problems_of(raw)["life_cycle.last_age"]


@pytest.mark.parametrize(
    ("young", "where", "word"),
    [
        ({}, "", "Neither"),
        ({"mean": None}, "", "Neither"),
        ({"mean": 2, "counts": {"2": 1}}, "", "Both"),
        ({"counts": {"1": 0.5, "2": 0.4}}, ".counts", "sum to 0.9"),
        ({"counts": {"two": 1}}, ".counts", "“two” is not a number of young"),
        ({"counts": {"-1": 1}}, ".counts", "“-1”"),
        ({"counts": {"1.5": 1}}, ".counts", "“1.5”"),
        ({"counts": {"²": 1}}, ".counts", "“²”"),
        ({"counts": {}}, ".counts", "sum to 0"),
    ],
)
def test_that_young_are_a_mean_or_chances_that_sum_to_1(young, where, word):
    path = "life_cycle.young_per_breeding_female"
    assert word in problems_of(changed(full(), path, young))[path + where]


def test_that_an_sd_that_a_share_cannot_have_is_named():
    """A share with mean 0.85 has an SD below sqrt(0.85 * 0.15) = 0.357."""
    path = "life_cycle.yearly_sd.adult"
    assert "below 0.357" in problems_of(changed(full(), path, 0.36))[path]
    assert problems_of(changed(full(), path, 0.35)) == {}


def test_that_sure_survival_cannot_differ_between_years():
    raw = changed(full(), "life_cycle.yearly_survival.adult", 1)
    assert list(problems_of(raw)) == ["life_cycle.yearly_sd.adult"]
    assert problems_of(changed(raw, "life_cycle.yearly_sd.adult", 0)) == {}


def test_that_a_donors_own_life_cycle_is_checked_too():
    cycle = full()["life_cycle"] | {"last_age": 1}
    assert "donors[1].life_cycle.last_age" in problems_of(
        changed(full(), "donors[1].life_cycle", cycle)
    )


# --- rules, targets, what-ifs --------------------


@pytest.mark.parametrize(
    ("changes", "where", "word"),
    [
        ({"above": None}, "", "neither above nor below"),
        ({"above": 0.5, "below": 0.2}, "", "never acts"),
        ({"when": "donor_ancestri"}, ".when", "did you mean “donor_ancestry”"),
        ({"when": "donor_ancestry:Nowhere"}, ".when", "after the colon"),
        ({"when": "allele_kept"}, ".when", "no measure"),
        ({"when": "inbreeding:Upper Fen"}, ".when", "no measure"),
        ({"then": "release"}, "", "but not which animals"),
        ({"release": {"donor": "Upper Fen"}}, ".release", "The rule stops"),
    ],
)
def test_that_a_rule_that_cannot_be_carried_out_is_named(changes, where, word):
    raw = full()
    raw["plans"][2]["rules"][0] |= changes
    assert word in problems_of(raw)[f"plans[2].rules[0]{where}"]


@pytest.mark.parametrize(
    ("changes", "where", "word"),
    [
        ({"at_least": None}, "", "neither at least nor at most"),
        ({"at_most": 0.5}, "", "Nothing is at least 0.9 and at most 0.5"),
        ({"measure": "genes"}, ".measure", "no measure “genes”"),
        ({"measure": "allele_kept:tail"}, ".measure", "after the colon"),
    ],
)
def test_that_a_target_that_cannot_be_checked_is_named(changes, where, word):
    raw = full()
    raw["targets"][0] |= changes
    assert word in problems_of(raw)[f"targets[0]{where}"]


@pytest.mark.parametrize(
    ("change", "where", "word"),
    [
        ({"path": "recipient.ne", "times": 2}, ".path", "names no number"),
        ({"path": "a..b", "times": 2}, ".path", "not a path"),
        ({"path": "what_ifs[0].changes[0].times", "set": 2}, ".path", "cannot change a what-if"),
        ({"path": "recipient.adults"}, "", "Neither times nor set"),
        ({"path": "recipient.adults", "times": 2, "set": 3}, "", "Both times and set"),
    ],
)
def test_that_a_what_if_that_cannot_be_read_is_named(change, where, word):
    raw = changed(full(), "what_ifs[0].changes[0]", change)
    assert word in problems_of(raw)[f"what_ifs[0].changes[0]{where}"]
