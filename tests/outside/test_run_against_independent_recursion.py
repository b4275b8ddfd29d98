"""The program's projection.csv against a second, slow implementation written from the method alone.

The first part holds that second implementation to published closed forms, so that it can be
trusted as a judge. Check values with many digits were made in other code from the formula that is
named beside them. The second part runs the program on varied invented cases.
"""

import collections
import copy
import csv
import io
import json
import math

import pytest

from rescue_planner import cli, places
from rescue_planner.case.problems import read_case
from rescue_planner.projection.table import projection_csv
from tests.outside.independent_recursion import number, project, value_at_year
from tests.outside.random_cases import corner_cases, random_cases, write_case

# --- is the judge right? ---------------------------------------------------------------------


def simple_case(steps=20, **changes):
    """Return one generation a year, Ne 25 held, a donor with 20 + 20 resident breeders to join."""
    case = {
        "time": {"start_year": 2000, "horizon_years": steps, "generation_years": 1},
        "recipient": {
            "adults": 40,
            "effective_size": 25,
            "gene_diversity": 0.4,
            "reference_gene_diversity": 0.8,
        },
        "donors": [{"name": "D", "gene_diversity": 0.4, "fst_to_recipient": 0.0}],
        "plans": [{"name": "P"}],
    }
    case["recipient"] |= changes.pop("recipient", {})
    case["donors"][0] |= changes.pop("donor", {})
    case["plans"][0] |= changes.pop("plan", {})
    return case | changes


def course(case, measure, statistic="mean", depth="expected"):
    return project(case)["P", depth, measure, statistic]


def locus(frequency, donor_frequency, fitness=(1.0, 1.0, 1.0)):
    return {
        "name": "A",
        "fitness": list(fitness),
        "frequency": frequency,
        "donor_frequency": {"D": donor_frequency},
    }


def steady(m, first=2000, residents=20):
    """Return the flow that makes up a share m of the parents of every step from `first` on."""
    migrants = 2 * residents * m / (1 - m)
    flow = {"donor": "D", "migrants_per_generation": migrants, "from_year": first, "to_year": 2999}
    return {"steady": [flow]}


PULSE = {  # a share of 0.2 in the first step, then 0.025 in each
    "releases": [{"donor": "D", "who": {"females": 5, "males": 5}, "when": {"first_year": 2000}}],
} | steady(0.025, first=2001)


def test_that_without_flow_diversity_falls_by_half_a_share_of_ne_each_generation():
    # Wright 1931: H_t = H_0 (1 - 1/(2N))^t
    for size, ratio in ((5, 0.121576654591), (25, 0.667607971755), (200, 0.951169875253)):
        case = simple_case(recipient={"effective_size": size})
        assert course(case, "gene_diversity_kept")[20] == pytest.approx(ratio, abs=1e-12)


def test_that_flow_from_a_fixed_donor_builds_diversity_as_in_the_identity_recursion():
    # Wright 1931, 1943; N = 25, m = 0.04, start at (nearly) no diversity, H_d = H_rd = 0.5
    recipient = {"gene_diversity": 1e-15}
    donor = {"gene_diversity": 0.5, "fst_to_recipient": 0.5}
    case = simple_case(recipient=recipient, donor=donor, plan=steady(0.04))
    h = course(case, "gene_diversity")
    wanted = [0.038416, 0.073112101888, 0.158312051124, 0.253450635411, 0.344983868398]
    assert [h[t] for t in (1, 2, 5, 10, 20)] == pytest.approx(wanted, abs=2e-12)


def test_that_nei_and_hudson_forms_of_the_same_difference_agree():
    # two populations: Hudson's FST = 2G / (1 + G) of Nei's G (both ratios of the same diversities)
    within, between = 0.4, 0.5
    total = (within + between) / 2
    nei, hudson = 1 - within / total, 1 - within / between
    plan = steady(0.1)
    one = simple_case(plan=plan, donor={"fst_to_recipient": nei, "fst_form": "nei"})
    two = simple_case(plan=plan, donor={"fst_to_recipient": hudson})
    assert course(one, "gene_diversity") == pytest.approx(course(two, "gene_diversity"), rel=1e-12)
    pool = 0.9**2 * within + 2 * 0.1 * 0.9 * between + 0.1**2 * within
    assert course(two, "gene_diversity")[1] == pytest.approx(0.98 * pool, rel=1e-12)


def test_that_a_pulse_and_then_a_trickle_leave_the_resident_ancestry_of_the_product_form():
    # R_t = (1 - m1)(1 - m2)^(t - 1): Hedrick 1995's 20 %, then 2.5 %
    case = simple_case(plan=PULSE, loci=[locus(0.9, 0.3)])
    wanted = {1: 0.2, 2: 0.22, 5: 0.2770496875, 10: 0.363011593143, 20: 0.505487031615}
    for t, share in wanted.items():
        assert course(case, "donor_ancestry")[t] == pytest.approx(share, abs=1e-12)
    assert course(case, "allele_frequency:A")[20] == pytest.approx(0.596707781031, abs=1e-12)


def test_that_mean_inbreeding_follows_releases_of_unrelated_animals():
    # F1 = (1 - m)^2 F after mixing, then F = F1 + (1 - F1)/(2 Ne); 4 + 4 animals, 0.6 * 0.8 each
    wave = {"donor": "D", "who": {"females": 4, "males": 4}}
    wave["when"] = {"first_year": 2000, "every_years": 1, "times": 5}
    wave["afterwards"] = {"survive_to_breed": 0.6, "breeding_relative_to_residents": 0.8}
    case = simple_case(
        steps=5,
        recipient={"gene_diversity": 0.52},
        donor={"gene_diversity": 0.8, "fst_to_recipient": 0.175},
        plan={"releases": [wave]},
    )
    mixed = [(f - 0.02) / 0.98 for f in course(case, "inbreeding")[1:]]
    assert mixed == pytest.approx([0.291371, 0.254362, 0.224169, 0.199536, 0.179439], abs=5e-7)
    ancestry = [0.0875912, 0.16751, 0.240429, 0.306961, 0.367665]
    assert course(case, "donor_ancestry")[1:] == pytest.approx(ancestry, abs=5e-7)


def test_that_half_of_the_diploid_lethal_equivalents_stand_in_the_exponent():
    # Morton, Crow and Muller 1956: exp(-B F) with B per haploid genome; 2B = 3.14, F = 0.25
    cost = {"lethal_equivalents_diploid": {"first_year": 3.14}}
    case = simple_case(recipient={"gene_diversity": 0.6}, inbreeding_cost=cost)
    assert course(case, "relative_first_year_survival")[0] == pytest.approx(0.675366, abs=5e-7)


def test_that_selection_after_flow_follows_the_viability_recursion():
    # Haldane 1924; local allele against m = 0.05, s = 0.2, h = 0.5, selection after mixing
    case = simple_case(plan=steady(0.05), loci=[locus(1.0, 0.0, (1.0, 0.9, 0.8))])
    p = course(case, "allele_frequency:A")
    wanted = [0.954797979798, 0.824983760805, 0.634845598658]
    assert [p[t] for t in (1, 5, 20)] == pytest.approx(wanted, abs=1e-12)


def test_that_the_chain_follows_a_size_that_changes():
    # Wright-Fisher chain over sizes 10, 10, 25, 50 from p = 0.3 (Ewens 2004, chapter 3)
    actions = [
        {"what": "more room", "year": 2002, "until_year": 2002, "carrying_capacity_times": 2.5},
        {"what": "much more room", "year": 2003, "carrying_capacity_times": 5},
    ]
    case = simple_case(
        steps=4,
        recipient={"effective_size": 10},
        plan={"other_actions": actions},
        loci=[locus(0.3, 0.0)],
    )
    sd = course(case, "allele_frequency:A", "sd", "exact")
    kept = course(case, "allele_kept:A", "share", "exact")
    fixed = course(case, "allele_fixed:A", "share", "exact")
    variances = [0, 0.0105, 0.020475, 0.0242655, 0.026122845]
    lost = [0, 0.000797922662976, 0.0116686431997, 0.0145534198575, 0.0160058899958]
    assert [x**2 for x in sd] == pytest.approx(variances, abs=1e-12)
    assert [1 - x for x in kept] == pytest.approx(lost, abs=1e-12)
    assert fixed[4] == pytest.approx(2.52118380766e-6, rel=1e-10)


def test_that_the_chain_loses_a_local_allele_to_flow_and_drift():
    # Wright-Fisher chain, p_0 = 1, p_d = 0: N = 25, m = 0.02; then N = 10, pulse and trickle
    one = simple_case(plan=steady(0.02), loci=[locus(1.0, 0.0)])
    mean = course(one, "allele_frequency:A", depth="exact")[20]
    sd = course(one, "allele_frequency:A", "sd", "exact")[20]
    assert mean == pytest.approx(0.667607971755, abs=1e-12)
    assert 2 * (mean - mean**2 - sd**2) == pytest.approx(0.366316901497, abs=1e-11)
    lost = 1 - course(one, "allele_kept:A", "share", "exact")[20]
    assert lost == pytest.approx(0.000746606523006, abs=1e-13)
    two = simple_case(recipient={"effective_size": 10}, plan=PULSE, loci=[locus(1.0, 0.0)])
    lost = 1 - course(two, "allele_kept:A", "share", "exact")[20]
    assert lost == pytest.approx(0.138535773, abs=5e-10)


LIFE_CYCLE = {
    "first_breeding_age": {"female": 2, "male": 2},
    "last_age": 10,
    "yearly_survival": {"first_year": 0.5, "subadult": 0.8, "adult": 0.8},
    "share_of_females_breeding": 0.7,
    "young_per_breeding_female": {"counts": {"1": 0.25, "2": 0.5, "3": 0.25}},
}


def test_that_growth_is_the_euler_lotka_root_of_the_life_table():
    # sum l_x m_x lambda^-x = 1 with s_0 = 0.5, s = 0.8, 0.7 daughters from age 2 to age 10
    case = simple_case(life_cycle=LIFE_CYCLE)
    growth = course(case, "yearly_growth")[0]
    total = sum(0.5 * 0.8 ** (x - 1) * 0.7 * growth**-x for x in range(2, 11))
    assert growth == pytest.approx(1.04377, abs=5e-6)
    assert total == pytest.approx(1.0, abs=1e-12)


TRAIT = {"name": "z", "heritability": 0.3, "selection_width_sd": 3.0, "loci": 20}
TRAIT |= {"mutational_variance": 0.0}
LARGE = {"effective_size": 1e15}


def test_that_variance_from_mixing_halves_what_association_holds():
    # V1 = 0.3, V2 = 0.6, m = 0.2, difference 2, 20 loci; Bulmer 1971 on unlinked loci
    release = PULSE["releases"]
    case = simple_case(
        recipient=LARGE,
        donor={"additive_variance": 0.6, "trait_mean_difference": 2.0},
        plan={"releases": release},
        trait=TRAIT,
    )
    va = [0.3 * kept for kept in course(case, "additive_variance_kept")]
    wanted = [0.68, 0.528, 0.452, 0.395, 0.376 + 0.304 / 2**9]
    assert [va[t] for t in (1, 2, 3, 5, 10)] == pytest.approx(wanted, abs=1e-12)


def test_that_the_mean_follows_lande_and_lags_a_moving_optimum():
    # Lande 1976: response at distance 2 is 0.06; Lynch and Lande 1993: steady lag kappa / gamma
    still = simple_case(recipient=LARGE, trait=TRAIT | {"optimum_at_start": 2.0})
    assert course(still, "trait_mean")[1] == pytest.approx(0.06, abs=1e-12)
    moving = simple_case(900, recipient=LARGE, trait=TRAIT | {"optimum_shift_per_year": 0.05})
    assert course(moving, "trait_lag")[900] == pytest.approx(0.05 / 0.03, abs=1e-9)


def test_that_the_sustainable_shift_is_the_critical_rate():
    # Bürger and Lynch 1995: V_A sqrt(2 r_max / (V_s + V_A)), growth at its best 1.5 sqrt(0.9)
    cycle = LIFE_CYCLE | {"last_age": 1, "first_breeding_age": {"female": 1, "male": 1}}
    cycle |= {"share_of_females_breeding": 1.0}
    cycle |= {"young_per_breeding_female": {"mean": 4 * 1.5 * math.sqrt(0.9)}}
    for way in ("here_now", "unrelated_parents"):
        case = simple_case(trait=TRAIT, life_cycle=cycle | {"survival_measured": way})
        assert course(case, "sustainable_shift")[0] == pytest.approx(0.0796877, abs=5e-8)


def test_that_a_value_asked_for_at_a_year_is_the_last_one_reached():
    time = {"start_year": 2000, "horizon_years": 21, "generation_years": 0.7}
    values = course(simple_case() | {"time": time}, "gene_diversity")
    assert len(values) == 31
    case = {"time": time}
    at = [value_at_year(case, values, year) for year in (2000, 2001, 2007, 2021)]
    assert at == [values[0], values[1], values[10], values[30]]


def test_that_ranges_and_what_is_said_by_default_change_no_value():
    release = {"donor": "D", "who": {"females": 2}, "when": {"first_year": 2003}}
    short = simple_case(plan={"releases": [release]})
    said = copy.deepcopy(short)
    said["recipient"] |= {"breeding_females": 20, "breeding_males": {"best": 20, "low": 2}}
    said["recipient"] |= {"adults": {"best": 40}, "gene_diversity": {"best": 0.4, "high": 0.9}}
    said["recipient"] |= {"donor_ancestry_at_start": {"D": 0}}
    said["donors"][0] |= {"fst_form": "hudson", "drifts": False}
    said["plans"][0] |= {"effective_size": None, "steady": [], "rules": [], "other_actions": []}
    release = said["plans"][0]["releases"][0]
    release["who"] |= {"males": 0}
    release["when"] |= {"every_years": 1, "times": 1}
    release["afterwards"] = {"survive_to_breed": 1, "breeding_relative_to_residents": 1}
    assert project(said) == project(short)


# --- is the program right? -------------------------------------------------------------------

CASES = random_cases() + corner_cases()
NAMES = [name for name, _ in CASES]
# Both sides add up the same terms in different orders: rounding stays under 1e-12 here, measured
# over 250 cases, and is let grow a little; numbers of animals and shares alike.
CLOSE = {"rel": 1e-9, "abs": 1e-10}


def read_series(text, raw):
    """Return {(plan, depth, measure, statistic): [values]} of a projection.csv."""
    start, generation = (number(raw["time"][x]) for x in ("start_year", "generation_years"))
    series = collections.defaultdict(list)
    for row in csv.DictReader(io.StringIO(text)):
        key = row["plan"], row["depth"], row["measure"], row["statistic"]
        t = len(series[key])
        assert int(row["generation"]) == t, "the rows of a series stand in the order of t"
        assert float(row["year"]) == pytest.approx(start + t * generation, rel=1e-12)
        series[key].append(float(row["value"]))
    return dict(series)


@pytest.mark.parametrize(("name", "raw"), CASES, ids=NAMES)
def test_that_every_value_of_the_program_is_that_of_the_independent_recursion(name, raw):
    text = projection_csv(read_case(json.loads(json.dumps(raw))))
    assert_same(read_series(text, raw), project(raw))


def assert_same(program, ours):
    assert set(program) == set(ours), "the same series on both sides, none missing, none more"
    for key, values in ours.items():
        assert program[key] == pytest.approx(values, **CLOSE), key


SHIPPED = sorted(places.scenarios().glob("*.json"))


@pytest.mark.parametrize("path", SHIPPED, ids=[path.stem for path in SHIPPED])
def test_that_the_cases_that_ship_have_the_values_of_the_independent_recursion(path):
    raw = json.loads(path.read_text(encoding="utf-8"))
    assert_same(read_series(projection_csv(read_case(raw)), raw), project(raw))


@pytest.mark.slow
@pytest.mark.parametrize(("name", "raw"), CASES[3:55:17], ids=NAMES[3:55:17])
def test_that_the_files_of_a_run_hold_the_values_of_the_independent_recursion(name, raw, tmp_path):
    path = write_case(raw, tmp_path / "case.json")
    folder = tmp_path / "out"
    assert cli.main(["run", str(path), "--to", str(folder), "--depth", "expected,exact"]) == 0
    ours = project(raw)
    text = (folder / "projection.csv").read_text(encoding="utf-8")
    assert_same(read_series(text, raw), ours)
    text = (folder / "target_checks.csv").read_text(encoding="utf-8")
    rows = list(csv.DictReader(io.StringIO(text)))
    asked = [
        (place, target, key)
        for place, target in enumerate(raw["targets"], start=1)
        for key in ours
        if key[2] == target["measure"] and key[3] in ("mean", "share")
    ]
    assert len(rows) == len(asked) > 0
    for place, target, key in asked:
        (row,) = [x for x in rows if (int(x["target"]), x["plan"], x["depth"]) == (place, *key[:2])]
        value = value_at_year(raw, ours[key], target["by_year"])
        met = target.get("at_least", -math.inf) <= value <= target.get("at_most", math.inf)
        assert float(row["value"]) == pytest.approx(value, **CLOSE)
        assert row["met"] == ("yes" if met else "no")


def test_that_the_cases_use_what_the_depths_can_do():
    used = collections.Counter()
    for _, raw in CASES:
        used.update(key for key in ("donors", "loci", "trait", "life_cycle") if raw.get(key))
        used["follows"] += raw["recipient"].get("effective_size_follows_adults", False)
        for donor in raw.get("donors", []):
            used.update(key for key in ("drifts", "fst_to_donors") if donor.get(key))
            used["nei"] += donor.get("fst_form") == "nei"
        for plan in raw["plans"]:
            used.update(key for key in ("steady", "releases", "other_actions") if plan.get(key))
            for then in {rule["then"] for rule in plan.get("rules", [])}:
                used[f"{then} that matters"] += matters(raw, plan, then)
    assert len(used) == 13
    assert min(used.values()) >= 10, used


def matters(raw, plan, then):
    """Say whether the plan's course is another one without its rules of one kind."""
    rules = [rule for rule in plan["rules"] if rule["then"] != then]
    with_rules = raw | {"loci": [], "plans": [plan]}
    return project(with_rules) != project(with_rules | {"plans": [plan | {"rules": rules}]})
