"""Remarks: each shows where its condition holds, at its path, and not where it does not."""

import math

import pytest

from rescue_planner.case import edits
from rescue_planner.case.problems import read_case
from rescue_planner.case.remarks import Remark, answer_to, remarks
from tests.case.sample import changed, full, small, with_release
from tests.outside.random_cases import random_cases


def said(raw, key):
    """Return the remarks of one kind: texts by path."""
    return {one.path: one.text for one in remarks(read_case(raw)) if one.key == key}


def put(raw, **values):
    """Return the plain case with values put in by path, dots written as double underscores."""
    for path, value in values.items():
        raw = changed(raw, path.replace("__", "."), value)
    return raw


def test_that_no_remark_stands_twice_and_every_one_is_a_sentence():
    for _, raw in [*random_cases(), ("full", full()), ("small", small())]:
        found = remarks(read_case(raw))
        assert len({(one.key, one.path) for one in found}) == len(found)
        starts = "“ABCDEFGHIJKLMNOPQRSTUVW"
        assert all(one.text[-1] in ".?" and one.text[0] in starts for one in found)


# --- sizes --------------------------------------------------------------------------


@pytest.mark.parametrize(
    ("size", "key"), [(1.9, "size-low"), (2, None), (50, None), (51, "size-high")]
)
def test_that_an_unusual_effective_size_is_asked_about(size, key):
    raw = put(small(), recipient__adults=100, recipient__effective_size=size)
    found = {k: said(raw, k) for k in ("size-low", "size-high")}
    assert [k for k in found if found[k]] == ([key] if key else [])
    raw = changed(put(with_release(), recipient__adults=100), "plans[1].effective_size", size)
    assert list(said(raw, key)) == (["plans[1].effective_size"] if key else [])


def test_that_more_females_than_adults_is_asked_about():
    raw = put(small(), recipient__adult_females=41)
    assert list(said(raw, "more-females-than-adults")) == ["recipient.adult_females"]


def test_that_more_breeders_than_adults_of_a_sex_is_asked_about():
    raw = put(small(), recipient__adult_females=25, recipient__breeding_males=16)
    assert list(said(raw, "more-breeders-than-adults")) == ["recipient.breeding_males"]
    assert said(put(raw, recipient__breeding_males=15), "more-breeders-than-adults") == {}


@pytest.mark.parametrize(("years", "short"), [(19.9, True), (20, False)])
def test_that_a_horizon_under_five_generations_is_said(years, short):
    assert bool(said(put(small(), time__horizon_years=years), "horizon-short")) is short


def test_that_inbreeding_below_0_at_the_start_is_asked_about():
    raw = put(small(), recipient__gene_diversity=0.7)
    assert "-0.029" in said(raw, "inbreeding-below-0")["recipient.reference_gene_diversity"]


# --- distances ----------------------------------------------------------------------


def test_that_the_least_fst_is_said_where_diversity_between_is_below_a_populations_own():
    """H 0.42 and 0.66: H between is 0.54 / (1 - FST); it reaches 0.66 at 1 - 0.54 / 0.66."""
    least = 1 - 0.54 / 0.66
    assert (
        said(
            changed(with_release(), "donors[0].fst_to_recipient", least + 1e-6), "between-below-own"
        )
        == {}
    )
    found = said(changed(with_release(), "donors[0].fst_to_recipient", 0.1), "between-below-own")
    text = found["donors[0].fst_to_recipient"]
    assert f"an FST of at least {least:.3f}" in text
    assert "(0.600) is below" in text
    assert "Which FST is it" in text


def test_that_the_least_fst_is_said_in_neis_form_too():
    raw = changed(with_release(), "donors[0].fst_form", "nei")
    raw = changed(raw, "donors[0].fst_to_recipient", 0.05)
    least = 1 - 0.54 / 0.66
    text = said(raw, "between-below-own")["donors[0].fst_to_recipient"]
    assert f"({least / (2 - least):.3f} in Nei’s form)" in text


def test_that_two_donors_are_looked_at_like_recipient_and_donor():
    raw = full()
    raw["donors"][1]["gene_diversity"] = 0.4
    path = 'donors[0].fst_to_donors["St. Anne [pens]"]'
    assert path in said(raw, "between-below-own")


def test_that_diversity_between_above_1_is_asked_about():
    raw = changed(with_release(), "donors[0].fst_to_recipient", 0.5)
    assert "1.080" in said(raw, "between-above-1")["donors[0].fst_to_recipient"]


def test_that_a_kinship_below_0_is_said():
    """0.54 / (1 - 0.25) = 0.72 against the reference 0.68."""
    raw = changed(with_release(), "donors[0].fst_to_recipient", 0.25)
    text = said(raw, "kinship-below-0")["donors[0].fst_to_recipient"]
    assert f"{1 - 0.72 / 0.68:.3f}" in text
    assert said(with_release(), "kinship-below-0") == {}


def test_that_kinships_that_no_populations_have_are_said():
    """Two donors that are one population (H 0.66, FST 0) cannot differ in kinship to a third."""
    raw = with_release()
    raw["donors"].append(
        {
            "name": "Twin",
            "gene_diversity": 0.66,
            "fst_to_recipient": 0.4,
            "fst_to_donors": {"Upper Fen": 0},
        }
    )
    assert list(said(raw, "kinships-not-possible")) == ["donors"]
    raw["donors"][1]["fst_to_recipient"] = 0.2
    assert said(raw, "kinships-not-possible") == {}


def test_that_an_assumed_fst_of_two_donors_is_said_with_its_value():
    """H_de = max((0.675 + 0.9) / 2, 0.66) = 0.7875, so FST = 1 - 0.66 / 0.7875."""
    raw = with_release()
    raw["donors"].append({"name": "Far", "gene_diversity": 0.66, "fst_to_recipient": 0.4})
    text = said(raw, "fst-assumed")["donors[1].fst_to_donors.Upper Fen"]
    assert f"taken as {1 - 0.66 / 0.7875:.3f}" in text
    raw["donors"][0]["fst_to_donors"] = {"Far": 0.2}
    assert said(raw, "fst-assumed") == {}


def test_that_assumed_donors_differ_at_least_as_much_as_animals_within_them():
    """At FST 0 both H_rd are 0.54, below the donors' own 0.66, so H_de is 0.66 and FST 0."""
    raw = changed(with_release(), "donors[0].fst_to_recipient", 0)
    raw["donors"].append({"name": "Near", "gene_diversity": 0.66, "fst_to_recipient": 0})
    assert "taken as 0.000" in said(raw, "fst-assumed")["donors[1].fst_to_donors.Upper Fen"]


# --- life cycle ---------------------------------------------------------------------


def test_that_survival_of_outbred_young_above_1_is_said():
    """F = 1 - 0.42 / 0.68; 0.5 / exp(-(6/2) F) = 1.575."""
    path = "life_cycle.yearly_survival.first_year"
    outbred = 0.5 / math.exp(-3 * (1 - 0.42 / 0.68))
    assert f"implies {outbred:.3f}" in said(full(), "survival-capped")[path]
    raw = put(full(), life_cycle__survival_measured="unrelated_parents")
    assert said(raw, "survival-capped") == {}
    assert said(put(full(), life_cycle__yearly_survival__first_year=0.3), "survival-capped") == {}


def steady_cycle():
    """Return a life cycle of two ages whose growth and mothers' age are known.

    Births 1 daughter a year that all live to 1, survival s from 1 to 2: L^2 = L + s, so with
    s = 0.75 growth is 1.5, and mothers are 1 * (1/L) + 2 * s/L^2 = 4/3 years old on average.
    """
    raw = full()
    raw["life_cycle"] |= {
        "first_breeding_age": {"female": 1, "male": 1},
        "last_age": 2,
        "yearly_survival": {"first_year": 1, "subadult": 1, "adult": 0.75},
        "yearly_sd": {},
        "share_of_females_breeding": 1,
        "young_per_breeding_female": {"mean": 2},
    }
    raw["inbreeding_cost"]["lethal_equivalents_diploid"] = {"first_year": 0, "young_per_female": 0}
    return raw


@pytest.mark.parametrize(("share", "said_"), [(1.14, False), (1.16, True), (0.84, True)])
def test_that_a_generation_length_unlike_the_life_tables_is_asked_about(share, said_):
    raw = put(steady_cycle(), time__generation_years=share * 4 / 3)
    found = said(raw, "generation-length")
    assert bool(found) is said_
    assert all("1.33 years old" in text for text in found.values())


@pytest.mark.parametrize(("mean", "said_"), [(2, False), (0.4, True)])
def test_that_decline_at_the_start_while_ne_is_held_is_said(mean, said_):
    raw = put(steady_cycle(), life_cycle__young_per_breeding_female={"mean": mean})
    assert bool(said(raw, "decline-with-size-held")) is said_
    raw = put(raw, recipient__effective_size_follows_adults=True)
    assert said(raw, "decline-with-size-held") == {}


@pytest.mark.parametrize("part", ["first_year", "young_per_female"])
def test_that_rates_of_unrelated_animals_fall_by_the_cost_before_growth_is_looked_at(part):
    """Births times b = exp(-(B/2) F) for either cost, B = 12: L^2 = b L + 0.75 b."""
    raw = put(steady_cycle(), life_cycle__survival_measured="unrelated_parents")
    assert said(raw, "decline-with-size-held") == {}
    raw = put(raw, inbreeding_cost__lethal_equivalents_diploid={part: 12})
    b = math.exp(-6 * (1 - 0.42 / 0.68))
    growth = b / 2 + math.sqrt(b * b / 4 + 0.75 * b)
    assert f"({growth:.3f} a year)" in said(raw, "decline-with-size-held")["life_cycle"]


def test_that_counts_with_an_sd_between_years_are_said():
    assert list(said(full(), "young-sd-with-counts")) == ["life_cycle.yearly_sd.young"]
    assert said(put(full(), life_cycle__yearly_sd__young=0), "young-sd-with-counts") == {}


def test_that_a_missing_life_cycle_is_said():
    assert list(said(small(), "no-life-cycle")) == ["life_cycle"]
    assert said(full(), "no-life-cycle") == {}


# --- plans --------------------------------------------------------------------------


def test_that_disease_is_never_left_unsaid_where_animals_move():
    text = (
        "Disease risk is not assessed by this projection. A disease risk analysis led by qualified "
        "veterinarians is needed and may rule out a plan."
    )
    assert said(with_release(), "disease-not-assessed") == {"": text}
    assert said(small(), "disease-not-assessed") == {}


@pytest.mark.parametrize("kind", ["releases", "steady", "rules"])
def test_that_a_donor_that_gives_without_a_limit_is_named(kind):
    one = {
        "releases": {"donor": "Upper Fen", "when": {"first_year": 2030}},
        "steady": {"donor": "Upper Fen", "migrants_per_generation": 1},
        "rules": {
            "name": "r",
            "when": "inbreeding",
            "above": 0.1,
            "then": "release",
            "release": {"donor": "Upper Fen"},
        },
    }[kind]
    raw = changed(with_release(), "plans[1]", {"name": "Wave", kind: [one]})
    assert list(said(raw, "no-removal-limit")) == ["donors[0].most_removed_per_year"]
    raw["donors"][0]["most_removed_per_year"] = 8
    assert said(raw, "no-removal-limit") == {}


@pytest.mark.parametrize(("year", "late"), [(2086, False), (2087, True)])
def test_that_a_release_in_the_very_last_year_is_said_to_take_no_effect(year, late):
    raw = with_release(when={"first_year": year})
    assert bool(said(raw, "release-too-late")) is late


def test_that_the_last_step_may_reach_past_the_horizon():
    """60 years in steps of 7 are 9 steps to 2090, so 2087 is still in the last one."""
    raw = put(with_release(when={"first_year": 2087}), time__generation_years=7)
    assert said(raw, "release-too-late") == {}


def test_that_a_release_of_nobody_is_said():
    assert list(said(with_release(who={}), "release-of-none")) == ["plans[1].releases[0].who"]
    assert list(said(full(), "release-of-none")) == ["plans[2].rules[1].release.who"]


@pytest.mark.parametrize(("year", "late"), [(2087, False), (2088, True)])
def test_that_a_target_after_the_horizon_is_said_to_be_read_at_the_last_step(year, late):
    raw = put(small(), targets=[{"measure": "inbreeding", "at_most": 0.3, "by_year": year}])
    assert bool(said(raw, "target-after-horizon")) is late


# --- what is left out, what only simulated animals use ------------------------------------


def test_that_every_default_in_use_is_said_with_its_value():
    raw = with_release()
    raw["loci"] = [{"name": "coat", "frequency": 0.5, "donor_frequency": {"Upper Fen": 0}}]
    raw["trait"] = {"heritability": 0.3}
    found = said(raw, "left-out")
    for path, words in {
        "recipient": (
            "adult females 20, half of the adults",
            "breeding females 20",
            "breeding males 20",
            "ancestry at the start 0 from Upper Fen",
        ),
        "inbreeding_cost": ("no cost is used",),
        "donors[0]": ("FST in Hudson’s form", "additive variance from the gene diversities"),
        "loci[0]": ("fitness of AA, Aa, aa 1, 1, 1", "mutation to the allele 0"),
        "trait": ("width of selection 3", "trait loci 50"),
        "plans[1].releases[0].afterwards": ("survive to breed 1", "relative to residents 1"),
    }.items():
        assert all(word in found[path] for word in words), path


def test_that_what_is_given_is_not_said_to_be_left_out():
    found = said(full(), "left-out")
    assert set(found) == {
        "recipient",
        "donors[0]",
        "donors[1]",
        "plans[2].rules[1].release.afterwards",
    }
    assert found["recipient"] == (
        "Left out, so this is used: ancestry at the start 0 from St. Anne [pens]."
    )


def test_that_a_null_counts_as_left_out():
    assert (
        "breeding males 20"
        in said(put(full(), recipient__breeding_males=None), "left-out")["recipient"]
    )


@pytest.mark.parametrize(
    ("fitness", "frequency", "genotype"), [([0, 1, 1], 1, "AA"), ([1, 1, 0], 0, "aa")]
)
def test_that_a_donor_of_unfit_animals_alone_is_remarked_on(fitness, frequency, genotype):
    raw = changed(full(), "loci[0].fitness", fitness)
    raw = changed(raw, "loci[0].donor_frequency.Upper Fen", frequency)
    place = "loci[0].donor_frequency.Upper Fen"
    text = said(raw, "donor-all-unfit")[place]
    assert f"Every animal from Upper Fen is {genotype} at coat" in text
    assert place not in said(changed(raw, place, 0.5), "donor-all-unfit")


def test_that_a_held_effective_size_is_said():
    assert "held at 16" in said(small(), "size-held")["recipient.effective_size_follows_adults"]
    raw = put(full(), recipient__effective_size_follows_adults=True)
    assert said(raw, "size-held") == {}


def test_that_every_part_that_only_simulated_animals_use_is_named():
    raw = put(full(), inbreeding_cost__how="by_load_loci", life_cycle__crowding="gradual")
    raw = changed(raw, "plans[2].releases[0].loan_years", 3)
    raw = changed(raw, "donors[1].kinship_among_released", 0.1)
    (text,) = said(raw, "simulated-only").values()
    assert text.partition(": ")[2] == (
        "the hidden load; the cost of mixing; the genome; inbreeding cost by load loci (elsewhere "
        "it follows F); loss in die-offs; differences between years; gradual crowding (elsewhere "
        "numbers stop at the capacity); who mates with whom; the inbreeding cost of Upper Fen "
        "itself; kinship among animals from St. Anne [pens]; the loan of animals in "
        f"{raw['plans'][2]['name']}; the survey of the rule “second wave” in "
        f"{raw['plans'][2]['name']}."
    )
    assert said(small(), "simulated-only") == {}


# --- answers ------------------------------------------------------------------------


def test_that_an_answer_finds_its_remark():
    case = read_case(put(small(), time__horizon_years=8))
    (remark,) = (one for one in remarks(case) if one.key == "horizon-short")
    answered = edits.answer_remark(case, remark.name, "asked for").case
    assert answer_to(answered, remark).reason == "asked for"
    assert answer_to(case, remark) is None


def test_that_a_remark_on_the_whole_case_has_a_name_without_blanks():
    assert Remark("disease-not-assessed", "", "x").name == "disease-not-assessed"


def test_that_a_what_if_that_finds_nothing_is_said_and_stops_nothing():
    change = {"path": "plans[8].effective_size", "set": 2}
    raw = changed(full(), "what_ifs[0].changes[0]", change)
    (text,) = said(raw, "what-if-changes-nothing").values()
    assert "finds nothing" in text
    assert said(full(), "what-if-changes-nothing") == {}


def test_that_what_only_a_life_cycle_gives_is_said_and_stops_nothing():
    raw = put(small(), recipient__effective_size_follows_adults=True)
    assert "it is held" in said(raw, "nothing-to-follow")["recipient.effective_size_follows_adults"]
    assert said(raw, "size-held")
    shared = full()
    del shared["life_cycle"]
    assert "which is not given" in said(shared, "no-cycle-to-share")["donors[0].life_cycle"]
    assert said(full(), "nothing-to-follow") == said(full(), "no-cycle-to-share") == {}


@pytest.mark.parametrize(("year", "word"), [(2026, "before the start"), (2088, "no effect")])
def test_that_a_jump_outside_the_years_is_said_and_stops_nothing(year, word):
    raw = changed(full(), "trait.optimum_jump.year", year)
    assert word in said(raw, "jump-outside")["trait.optimum_jump.year"]
    assert said(full(), "jump-outside") == {}
