"""The plain engine against exact answers for its order of a year.

Seeds are fixed. Shares and means are compared by their standard error: |z| below 4 (a right engine
fails one such check in 16,000).
"""

import copy
import itertools
import math

import numpy as np
import pytest
from scipy.stats import chi2, spearmanr

from tests.simulate import exact_oracles as oracles
from tests.simulate import plain_engine as plain

MOST_Z = 4.0


def case(plan=None, donors=(), recipient=None, life=None, **changes):
    """Return a small case: breeding at 1, Poisson litters, no cost, no crowding."""
    made = {
        "time": {"start_year": 2000, "horizon_years": 10, "generation_years": 1.0},
        "recipient": {
            "adults": 10,
            "adult_females": 5,
            "effective_size": 5,
            "gene_diversity": 0.6,
            "reference_gene_diversity": 0.8,
        },
        "donors": [
            {"name": name, "adults": 100_000, "gene_diversity": 0.72, "fst_to_recipient": 0.175}
            for name in donors
        ],
        "life_cycle": {
            "first_breeding_age": {"female": 1, "male": 1},
            "last_age": 60,
            "yearly_survival": {"first_year": 0.5, "subadult": 0.8, "adult": 0.8},
            "share_of_females_breeding": 1.0,
            "young_per_breeding_female": {"mean": 1.0},
            "mating": {"form": "open"},
        },
        "genome": {"markers": 20, "chromosomes": 1},
        "plans": [{"name": "No releases"}, {"name": "P", **(plan or {})}],
    }
    made["recipient"] |= recipient or {}
    made["life_cycle"] |= life or {}
    made["time"] |= changes.pop("time", {})
    return made | changes


def release(females=0, males=0, first=2000, every=1, times=1, **more):
    who = {
        "females": females,
        "males": males,
        **({"age": more.pop("age")} if "age" in more else {}),
    }
    when = {"first_year": first, "every_years": every, "times": times}
    return {"donor": "D", "who": who, "when": when, **more}


def generations(animals=20, **changes):
    """Return one generation a year at a constant number: last age 1, a ceiling, many young."""
    life = {
        "last_age": 1,
        "yearly_survival": {"first_year": 0.9, "subadult": 1.0, "adult": 1.0},
        "young_per_breeding_female": {"mean": 9.0},
    } | changes.pop("life", {})
    recipient = {
        "adults": animals,
        "adult_females": animals // 2,
        "carrying_capacity": animals,
    } | changes.pop("recipient", {})
    return case(life=life, recipient=recipient, **changes)


def assert_share(values, chance):
    n = len(values)
    error = math.sqrt(chance * (1.0 - chance) / n)
    z = (sum(values) / n - chance) / error
    assert abs(z) < MOST_Z, f"{sum(values) / n} for {chance}, z = {z}"


def assert_mean(values, mean):
    values = [float(v) for v in values]
    error = float(np.std(values, ddof=1)) / math.sqrt(len(values))
    z = (float(np.mean(values)) - mean) / error
    assert abs(z) < MOST_Z, f"{np.mean(values)} for {mean}, z = {z}"


# --- the oracles' own check -------------------------------------------------------------------


def test_that_the_branching_oracle_gives_the_tabulated_chances():
    # s = .8, b = .25: 1-(1-q) of one female at 10, 20 and 50 years (values tabulated for the order
    # in which all females alive at the start breed, then survive).
    rates = {"first_year": 0.5, "subadult": 0.8, "adult": 0.8, "first": 1, "last": 400}
    rates |= {"share": 1.0, "litter": oracles.poisson_litter(1.0), "females": 0.5}
    known = {1: 0.15576, 10: 0.587124, 20: 0.692222, 50: 0.76334}
    for years, q in known.items():
        assert oracles.gone_by(rates, years)[0] == pytest.approx(q, abs=6e-7)


def test_that_the_branching_oracle_gives_the_tabulated_two_types():
    # s_J = .5 after the census, s_A = .8, b = .5: a juvenile and an adult.
    rates = {"first_year": 1.0, "subadult": 0.5, "adult": 0.8, "first": 2, "last": 400}
    rates |= {"share": 1.0, "litter": oracles.poisson_litter(1.0), "females": 0.5}
    for years, pair in {5: (0.68455, 0.416716), 20: (0.832344, 0.671636)}.items():
        assert oracles.gone_by(rates, years)[:2] == pytest.approx(pair, abs=6e-7)


def test_that_the_branching_oracle_composes_changing_rates_backwards():
    # 20 females, s = .8, births .30 e^{-B F_y}, F_y = 1 - (1 - 1/(2 Ne))^(y/5), Ne 10, B 6,
    # the first year's births at F_1.
    rates = {"first_year": 0.6, "subadult": 0.8, "adult": 0.8, "first": 1, "last": 400}
    rates |= {"share": 1.0, "litter": oracles.poisson_litter(1.0), "females": 0.5}
    times = [math.exp(-6.0 * (1.0 - 0.95 ** (y / 5.0))) for y in range(1, 101)]
    assert oracles.gone_by(rates, 20, times)[0] ** 20 == pytest.approx(0.0100643, rel=2e-5)
    assert oracles.gone_by(rates, 50, times)[0] ** 20 == pytest.approx(0.927206, rel=2e-5)


def test_that_the_chain_of_two_sexes_conserves_probability_and_grows_as_the_rates_say():
    skies = oracles.shared_weather(0.7, 0.1, 0.5, 0.1, 0.2)
    states, matrix = oracles.two_sex_matrix(14, "open", 0.5, 0.4, 0.5, skies)
    assert matrix.sum(axis=1) == pytest.approx(1.0, abs=1e-10)
    after = oracles.course(states, matrix, (2, 2), 1)  # far from the ceiling
    mean = sum(p * (f + m) for p, (f, m) in zip(after, states, strict=True))
    # births 2 * .5 * .4 * E[first-year survival * young factor]: a covariance by quadrature
    both = sum(w * first * young for w, _, first, young in skies)
    assert mean == pytest.approx(4 * 0.7 + 2 * 0.5 * 0.4 * both, abs=1e-9)
    assert sum(w * s for w, s, _, _ in skies) == pytest.approx(0.7, abs=1e-6)
    assert sum(w * s * s for w, s, _, _ in skies) == pytest.approx(0.7**2 + 0.1**2, abs=1e-6)


def test_that_the_identity_oracle_gives_the_tabulated_course():
    rows = oracles.identity_course([1 / 16] * 10, 0.0, 10)  # 5 males, 20 females
    assert rows[5] == pytest.approx((0.143314838409, 0.116569519043), abs=1e-12)
    assert rows[10] == pytest.approx((0.265375221803, 0.242440572772), abs=1e-12)


# --- lines of females -------------------------------------------------------------------------


def lines(life, females, years, replicates, plan=None):
    """Run founders that are all females; a new male each year sees to fathers."""
    males = {"releases": [release(males=1, times=years)]} | (plan or {})
    made = case(
        plan=males,
        donors=["D"],
        recipient={"adults": females, "adult_females": females},
        life=life,
        time={"horizon_years": years},
    )
    return plain.run(made, "P", replicates, seed=11, genetics=False)


def line_gone(each):
    """Return whether no female, adult or not, is left at the last census."""
    return not any(a.female for a in each.herd.animals)


def test_that_lines_of_females_end_as_a_branching_process():
    runs = lines({}, females=2, years=10, replicates=900)
    assert_share([line_gone(r) for r in runs], 0.587124**2)


def test_that_lines_of_one_generation_a_year_end_as_galton_and_watson_say():
    life = {"last_age": 1, "young_per_breeding_female": {"mean": 4.4}}  # 1.1 daughters
    runs = lines(life, females=3, years=10, replicates=800)
    assert_share([line_gone(r) for r in runs], 0.750718**3)


def test_that_ages_litters_and_shares_end_lines_as_the_age_structured_process():
    counts = {"0": 0.2, "1": 0.3, "2": 0.4, "3": 0.1}
    life = {
        "first_breeding_age": {"female": 2, "male": 1},
        "last_age": 5,
        "yearly_survival": {"first_year": 0.45, "subadult": 0.7, "adult": 0.75},
        "share_of_females_breeding": 0.7,
        "young_per_breeding_female": {"counts": counts},
        "females_among_young": 0.6,
    }
    runs = lines(life, females=2, years=6, replicates=1000)
    rates = {"first_year": 0.45, "subadult": 0.7, "adult": 0.75, "first": 2, "last": 5}
    litter = oracles.counted_litter({int(k): p for k, p in counts.items()})
    rates |= {"share": 0.7, "litter": litter, "females": 0.6}
    q = oracles.gone_by(rates, 6)
    stable = runs[0].herd.life.stable_ages(True, runs[0].herd.growth)
    adult = sum(s * c for s, c in zip(stable[1:], q[1:], strict=True)) / sum(stable[1:])
    subadults = math.floor(2 * stable[0] / sum(stable[1:]) + 0.5)
    assert subadults == 1
    assert_share([line_gone(r) for r in runs], adult**2 * q[0] ** subadults)


def test_that_rates_on_a_schedule_act_in_their_own_years():
    times = [1.6, 1.6, 0.0, 0.0, 0.5, 0.5, 0.5, 1.0]
    actions = [
        {"what": "a", "year": 2000, "until_year": 2001, "first_year_survival_times": 1.6},
        {"what": "b", "year": 2002, "until_year": 2003, "first_year_survival_times": 0.0},
        {"what": "c", "year": 2004, "until_year": 2006, "first_year_survival_times": 0.5},
    ]
    runs = lines({}, females=2, years=8, replicates=900, plan={"other_actions": actions})
    rates = {"first_year": 0.5, "subadult": 0.8, "adult": 0.8, "first": 1, "last": 60}
    rates |= {"share": 1.0, "litter": oracles.poisson_litter(1.0), "females": 0.5}
    assert_share([line_gone(r) for r in runs], oracles.gone_by(rates, 8, times)[0] ** 2)


# --- numbers under a ceiling ------------------------------------------------------------------

SMALL = {
    "yearly_survival": {"first_year": 0.4, "subadult": 0.65, "adult": 0.65},
    "young_per_breeding_female": {"mean": 2.0},
    "females_among_young": 0.4,
}


def both_there(f, m):
    return f > 0 and m > 0 and f + m >= 3


def chain_and_runs(life, skies, replicates=500, years=12, **changes):
    life = SMALL | {"fewest_adults": 3} | life
    made = case(
        recipient={"adults": 6, "adult_females": 3, "carrying_capacity": 7.9},
        life=life,
        time={"horizon_years": years} | changes.pop("time", {}),
    )
    runs = plain.run(made, "P", replicates, seed=5, genetics=False)
    form, share = life["mating"]["form"], life.get("share_of_females_breeding", 1.0)
    states, matrix = oracles.two_sex_matrix(7, form, share, 2.0, 0.4, skies)
    return runs, states, matrix


def assert_numbers_follow(runs, states, matrix, years=12):
    for year in (4, years):
        after = oracles.course(states, matrix, (3, 3), year)
        numbers = np.zeros(8)
        for p, (f, m) in zip(after, states, strict=True):
            numbers[f + m] += p
        seen = plain.column(runs, "adults", year)
        counts = np.bincount(seen, minlength=8)
        expected = numbers * len(runs)
        big = expected >= 5
        statistic = sum((counts[big] - expected[big]) ** 2 / expected[big])
        assert statistic < chi2.ppf(1.0 - 6e-5, big.sum() - 1)
        missing = sum(p for p, (f, m) in zip(after, states, strict=True) if f == 0 or m == 0)
        seen = [not f or not m for f, m in sexes(runs, year)]
        assert_share(seen, missing)
        lasting = oracles.course(states, matrix, (3, 3), year, both_there).sum()
        assert_share(plain.column(runs, "persists", year), lasting)


def sexes(runs, year):
    females = plain.column(runs, "adult_females", year)
    return zip(females, plain.column(runs, "adult_males", year), strict=True)


def test_that_numbers_under_a_ceiling_follow_the_chain_of_two_sexes():
    found = chain_and_runs({"mating": {"form": "open"}}, [(1.0, 0.65, 0.4, 1.0)])
    assert_numbers_follow(*found)


def test_that_pairs_need_a_male_each():
    life = {"mating": {"form": "pairs"}, "share_of_females_breeding": 0.8}
    assert_numbers_follow(*chain_and_runs(life, [(1.0, 0.65, 0.4, 1.0)]))


def test_that_one_harem_holder_is_enough_for_all_females():
    life = {"mating": {"form": "harems", "share_of_males_breeding": 0.2, "unequal_success": 1.0}}
    assert_numbers_follow(*chain_and_runs(life, [(1.0, 0.65, 0.4, 1.0)]))


def test_that_weather_is_shared_by_all_animals_of_a_year():
    life = {
        "mating": {"form": "open"},
        "yearly_sd": {"first_year": 0.2, "subadult": 0.0, "adult": 0.2, "young": 0.4},
    }
    skies = oracles.shared_weather(0.65, 0.2, 0.4, 0.2, 0.4)
    assert_numbers_follow(*chain_and_runs(life, skies))


def test_that_die_offs_come_at_their_chance_per_generation_turned_to_years():
    life = {
        "mating": {"form": "open"},
        "die_offs": [
            {
                "name": "cold",
                "chance_per_generation": 0.8,
                "lost_share": {"first_year": 0.5, "subadult": 1.0, "adult": 0.6},
                "young_lost_share": 0.5,
            }
        ],
    }
    yearly = 1.0 - 0.2 ** (1.0 / 4.0)
    skies = [(1.0 - yearly, 0.65, 0.4, 1.0), (yearly, 0.65 * 0.4, 0.2, 0.5)]
    found = chain_and_runs(life, skies, time={"generation_years": 4.0})
    assert_numbers_follow(*found)
    die_offs = [sum(kind == "die-off" for _, kind, _, _ in r.log) for r in found[0]]
    assert_mean(die_offs, 12 * yearly)


def test_that_mean_numbers_follow_the_age_matrix():
    life = {
        "first_breeding_age": {"female": 2, "male": 3},
        "last_age": 6,
        "yearly_survival": {"first_year": 0.5, "subadult": 0.7, "adult": 0.8},
        "share_of_females_breeding": 0.9,
        "young_per_breeding_female": {"mean": 1.5},
        "yearly_sd": {"first_year": 0.1, "subadult": 0.05, "adult": 0.05, "young": 0.3},
        "survival_young_correlation": 0.0,
    }
    made = case(recipient={"adults": 80, "adult_females": 40}, life=life)
    runs = plain.run(made, "P", 200, seed=2, genetics=False)
    life = runs[0].herd.life
    growth = max(abs(np.linalg.eigvals(life.matrix())))
    numbers = {}
    for female, first in ((True, 2), (False, 3)):
        survival = [0.7 if age < first else 0.8 for age in range(1, 6)]
        stable = np.cumprod([1.0, *survival]) * growth ** -np.arange(6.0)
        numbers[female] = 40 * stable / stable[first - 1 :].sum()
        young = numbers[female][: first - 1]
        young *= math.floor(young.sum() + 0.5) / young.sum()
    for year in range(1, 6):
        born = 0.9 * 1.5 * 0.5 * 0.5 * numbers[True][1:].sum()
        for female, first in ((True, 2), (False, 3)):
            survival = [0.7 if age < first else 0.8 for age in range(1, 6)]
            numbers[female] = np.array([born, *(numbers[female][:-1] * survival)])
        assert_mean(plain.column(runs, "adult_females", year), numbers[True][1:].sum())
        assert_mean(plain.column(runs, "adult_males", year), numbers[False][2:].sum())
        assert_mean(plain.column(runs, "young", year), 2 * born)


def test_that_gradual_crowding_scales_recruitment_by_beverton_and_holt():
    life = {"crowding": "gradual", "last_age": 60, "yearly_survival": SURVIVAL}
    made = case(
        recipient={"adults": 40, "adult_females": 20, "carrying_capacity": 30},
        plan={"other_actions": [{"what": "a", "year": 2000, "carrying_capacity_times": 2.0}]},
        life=life | {"young_per_breeding_female": {"mean": 3.0}},
        time={"horizon_years": 1},
    )
    runs = plain.run(made, "P", 1000, seed=3, genetics=False)
    growth = 0.6 + 3.0 * 0.5 * 0.5
    recruits = 20 * 3.0 * 0.5 / (1.0 + (growth - 1.0) * 40 / 60)
    assert runs[0].herd.growth == pytest.approx(growth, abs=1e-9)
    assert_mean(plain.column(runs, "adults", 1), 40 * 0.6 + recruits)


SURVIVAL = {"first_year": 0.5, "subadult": 0.6, "adult": 0.6}


# --- weather ----------------------------------------------------------------------------------


def test_that_weather_has_the_moments_and_the_rank_correlation_given():
    raw = case(
        life={
            "yearly_sd": {"first_year": 0.15, "subadult": 0.1, "adult": 0.05, "young": 0.5},
            "survival_young_correlation": 0.6,
        }
    )["life_cycle"]
    life = plain.Life(raw, 1.0)
    rng = plain.random.Random(4)
    skies = [life.weather(rng)[0] for _ in range(4000)]
    for name, mean, sd in (("first_year", 0.5, 0.15), ("subadult", 0.8, 0.1), ("young", 1.0, 0.5)):
        values = [sky[name] for sky in skies]
        assert_mean(values, mean)
        assert_mean([(v - mean) ** 2 for v in values], sd**2)
    rho = spearmanr([s["adult"] for s in skies], [s["young"] for s in skies]).statistic
    assert abs(math.atanh(rho) - math.atanh(0.6)) < MOST_Z * 1.1 / math.sqrt(len(skies) - 3)
    order = [sorted(range(len(skies)), key=lambda k: skies[k][name]) for name in plain.CLASSES]
    assert order[0] == order[1] == order[2]  # one draw for all classes


class Given:
    """A stream of given normals."""

    def __init__(self, *normals):
        self.normals = list(normals)

    def gauss(self, mean, sd):
        return mean + sd * self.normals.pop(0)


@pytest.mark.parametrize(("rho", "r"), [(1.0, 1.0), (0.0, 0.0), (0.6, 0.618033988749895)])
def test_that_a_rank_correlation_becomes_the_normal_one_by_the_sine(rho, r):
    # 2 sin(pi * .6 / 6) = 2 sin(18 degrees) = (sqrt(5) - 1)/2; to tell .6 from it by drawing
    # would take some hundred thousand years.
    raw = case(life={"yearly_sd": {"young": 0.5}, "survival_young_correlation": rho})
    sky, _ = plain.Life(raw["life_cycle"], 1.0).weather(Given(1.0, 0.0))
    sigma = math.sqrt(math.log(1.25))
    assert (math.log(sky["young"]) + sigma**2 / 2.0) / sigma == pytest.approx(r, abs=1e-12)


def test_that_a_spread_no_beta_has_is_refused():
    raw = case(life={"yearly_sd": {"adult": 0.4}})
    with pytest.raises(ValueError, match="no beta"):
        plain.run(raw, "P")


def test_that_weather_is_the_same_under_every_plan():
    life = {"yearly_sd": {"adult": 0.1, "young": 0.3}, "die_offs": [DIE_OFF]}
    made = case(life=life, donors=["D"], plan={"releases": [release(3, 3)]})
    die_offs = []
    for plan in ("No releases", "P"):
        runs = plain.run(made, plan, 20, genetics=False)
        die_offs.append([[line for line in r.log if line[1] == "die-off"] for r in runs])
    assert die_offs[0] == die_offs[1]
    assert any(die_offs[0])


DIE_OFF = {"name": "cold", "chance_per_generation": 0.3, "lost_share": {"adult": 0.5}}


# --- identity, diversity, ancestry ------------------------------------------------------------


@pytest.fixture(scope="module")
def drifting():
    return plain.run(generations(time={"horizon_years": 6}), "P", 150, seed=9)


def test_that_kinship_and_inbreeding_follow_the_recursion_of_separate_sexes(drifting):
    rates = [(1 / 10 + 1 / 10) / 4] + [oracles.mean_inverse_size(20)] * 5
    rows = oracles.identity_course(rates, 0.25, 6)
    for year in (1, 2, 6):
        assert set(plain.column(drifting, "adults", year)) == {20}
        assert_mean(plain.column(drifting, "kinship", year), rows[year][0])
        if year > 1:
            assert_mean(plain.column(drifting, "inbreeding", year), rows[year][1])
    for year in (0, 1):  # founders' kinship is the F of the first young
        assert plain.column(drifting, "inbreeding", year) == pytest.approx([0.25] * 150)


def test_that_markers_lose_diversity_as_the_pedigree_says(drifting):
    rates = [1 / 20] + [oracles.mean_inverse_size(20)] * 5
    for year, (kinship, inbreeding) in enumerate(oracles.identity_course(rates, 0.0, 6)):
        diversity = 0.6 * oracles.diversity_without_replacement(kinship, inbreeding, 20)
        assert_mean(plain.column(drifting, "gene_diversity", year), diversity)
        heterozygosity = 0.6 * (1.0 - inbreeding)
        assert_mean(plain.column(drifting, "observed_heterozygosity", year), heterozygosity)


def test_that_realised_effective_size_is_read_from_kinship(drifting):
    for each in drifting[:20]:
        before, now = each.years[2]["kinship"], each.years[3]["kinship"]
        size = each.years[3]["realised_effective_size"]
        if now <= before:
            assert size is None
        else:
            assert 1.0 - 1.0 / (2.0 * size) == pytest.approx((1.0 - now) / (1.0 - before))


def test_that_donor_ancestry_follows_the_share_of_newcomers_among_parents():
    plan = {"releases": [release(2, 4, times=3)]}
    made = generations(plan=plan, donors=["D"], time={"horizon_years": 4})
    runs = plain.run(made, "P", 150, seed=3)
    share = {n: oracles.mean_newcomer_share(20, n) for n in (2, 4)}
    flows = [(2 / 12 + 4 / 14) / 2] + [(share[2] + share[4]) / 2] * 2 + [0.0]
    ancestry = 0.0
    for year, flow in enumerate(flows):
        ancestry = (1.0 - flow) * ancestry + flow
        assert_mean(plain.column(runs, "donor_ancestry", year + 1), ancestry)
    assert set(plain.column(runs, "released", 4)) == {18}
    assert set(plain.column(runs, "donor_adults:D", 4)) == {100_000 - 18}


def test_that_young_of_two_sources_have_the_kinship_of_the_sources():
    # H_rd = ((.6 + .72)/2) / (1 - .175) = .8 = the reference: kinship 0 between the two.
    plan = {"releases": [release(0, 6)]}
    made = generations(10, plan=plan, donors=["D"], time={"horizon_years": 1})
    runs = plain.run(made, "P", 40, seed=8)
    assert runs[0].sources.kinship[0][1] == pytest.approx(0.0, abs=1e-12)
    seen = {
        (round(a.inbreeding, 12), {c // 2 for c in a.copies[1]} == {1})
        for each in runs
        for a in each.herd.animals
    }
    assert seen == {(0.25, False), (0.0, True)}
    full = [runs[0].kinship(a, a) for a in runs[0].herd.animals]
    assert full == pytest.approx([(1 + a.inbreeding) / 2 for a in runs[0].herd.animals])


def test_that_earlier_ancestry_is_there_at_the_start():
    recipient = {"donor_ancestry_at_start": {"D": 0.3}}
    runs = plain.run(case(donors=["D"], recipient=recipient), "P", 60, seed=8)
    assert_mean(plain.column(runs, "donor_ancestry:D", 0), 0.3)
    assert_mean(plain.column(runs, "gene_diversity", 0), 0.6)


@pytest.mark.parametrize(("first", "second", "fst"), [(0.6, 0.72, 0.175), (0.3, 0.9, 0.4)])
def test_that_markers_meet_diversities_within_and_between(first, second, fst):
    made = case(donors=["D"], recipient={"gene_diversity": first, "reference_gene_diversity": 1.0})
    made["donors"][0] |= {"gene_diversity": second, "fst_to_recipient": fst}
    sources = plain.Sources(made)
    between = (first + second) / 2.0 / (1.0 - fst)
    assert not sources.markers_changed
    assert sources.c * max(first, second, between) <= 0.45 + 1e-12
    expected = [[first, between], [between, second]]
    for i, j in itertools.product(range(2), repeat=2):
        found = sum(
            w * (p[i] * (1 - p[j]) + p[j] * (1 - p[i]))
            for w, p in zip(sources.chances, sources.points, strict=True)
        )
        assert found == pytest.approx(sources.c * expected[i][j], abs=1e-7)


def test_that_diversities_no_set_of_populations_has_are_met_as_near_as_can_be_and_said():
    # H_rd below the mean of the two within: no distribution has it.
    sources = plain.Sources(case(donors=["D"]))
    assert not sources.markers_changed
    made = case(donors=["D", "E"])
    made["donors"][0] |= {"gene_diversity": 0.7, "fst_to_donors": {"E": 0.9}}
    made["donors"][1] |= {"gene_diversity": 0.7, "fst_to_recipient": 0.0}
    made["donors"][0]["fst_to_recipient"] = 0.0
    sources = plain.Sources(made)
    assert sources.markers_changed
    assert np.linalg.eigvalsh(np.array(sources.kinship))[0] > -1e-9


# --- one locus --------------------------------------------------------------------------------


@pytest.mark.parametrize("fitness", [(1.0, 1.0, 1.0), (1.0, 0.8, 0.3), (0.5, 1.0, 0.5)])
def test_that_a_tracked_locus_follows_its_exact_chances(fitness):
    locus = {"name": "A", "fitness": list(fitness), "frequency": 0.41, "donor_frequency": {}}
    made = generations(10, time={"horizon_years": 1}, loci=[locus])
    made["life_cycle"]["yearly_survival"]["first_year"] = 0.35
    made["life_cycle"]["young_per_breeding_female"] = {"mean": 20.0}
    made["genome"]["markers"] = 1
    runs = plain.run(made, "P", 700, seed=21)
    assert set(plain.column(runs, "allele_frequency:A", 0)) == {8 / 20}  # .41 * 20 = 8.2
    chances = oracles.copies_after_a_generation(10, 5, 8, fitness, 10)
    seen = [round(20 * p) for p in plain.column(runs, "allele_frequency:A", 1)]
    expected, counts = chances * len(runs), np.bincount(seen, minlength=21)
    big = expected >= 5
    statistic = float(np.sum((counts[big] - expected[big]) ** 2 / expected[big]))
    assert statistic < chi2.ppf(1.0 - 6e-5, big.sum() - 1)
    assert sum(f["capped"] for r in runs for f in [r.years[0]["flows"]]) == 0


def one_run(**changes):
    return plain.run(case(**changes), "P")[0]


def parent_with(run, first, second):
    parent = plain.Animal(0, True, 1, 0)
    parent.copies = [first, second]
    return parent


def test_that_gametes_are_mendels_where_loci_are_unlinked():
    run = one_run(genome={"markers": 3})
    parent, rng = parent_with(run, [0, 0, 0], [1, 1, 1]), plain.random.Random(1)
    gametes = [run.gamete(parent, rng) for _ in range(4000)]
    for k in range(3):
        assert_share([g[k] for g in gametes], 0.5)
    for i, j in itertools.combinations(range(3), 2):
        assert_share([g[i] != g[j] for g in gametes], 0.5)


def test_that_linked_loci_recombine_by_haldanes_map():
    run = one_run(genome={"markers": 4, "chromosomes": 1, "morgans_each": 1.6})
    parent, rng = parent_with(run, [0] * 4, [1] * 4), plain.random.Random(1)
    gametes = [run.gamete(parent, rng) for _ in range(4000)]
    for i, j in itertools.combinations(range(4), 2):
        assert_share([g[i] != g[j] for g in gametes], oracles.recombination(0.4 * (j - i)))


def test_that_mutation_changes_the_copies_that_are_handed_on():
    locus = {"name": "A", "frequency": 0.5, "mutation_to": 0.3, "mutation_from": 0.1}
    run = one_run(genome={"markers": 0}, loci=[locus])
    rng = plain.random.Random(1)
    for start, chance in ((0, 0.3), (1, 0.9)):
        parent = parent_with(run, [start], [start])
        assert_share([run.gamete(parent, rng)[0] for _ in range(3000)], chance)


# --- costs ------------------------------------------------------------------------------------

COST = {"lethal_equivalents_diploid": {"first_year": 6.0, "young_per_female": 4.0}}


@pytest.mark.parametrize("measured", ["here_now", "unrelated_parents"])
def test_that_inbreeding_costs_young_relative_to_where_survival_was_measured(measured):
    life = {"survival_measured": measured, "young_per_breeding_female": {"mean": 3.0}}
    life["yearly_survival"] = {"first_year": 0.4, "subadult": 1.0, "adult": 0.0001}
    made = case(
        plan={"releases": [release(0, 10)]},
        donors=["D"],
        recipient={"adults": 20, "adult_females": 10},
        life=life,
        inbreeding_cost=COST,
        time={"horizon_years": 1},
    )
    runs = plain.run(made, "P", 200, seed=3)
    costs = [math.exp(-3.0 * 0.25), 1.0]  # young of a resident father, of a released one
    here = measured == "here_now"
    young = 10 * 3.0 * (1.0 if here else math.exp(-2.0 * 0.25))
    expected = young * 0.5 * sum(min(1.0, 0.4 * c / (costs[0] if here else 1.0)) for c in costs)
    assert_mean([r.years[0]["flows"]["born"] for r in runs], young)
    assert_mean([sum(a.age == 1 for a in r.herd.animals if a.mother) for r in runs], expected)
    relative = plain.column(runs, "relative_first_year_survival", 1)
    assert_mean(relative, sum(costs) / 2)
    assert plain.column(runs, "relative_first_year_survival", 0)[0] == pytest.approx(costs[0])


def test_that_survival_above_one_is_capped_and_counted():
    life = {"yearly_survival": {"first_year": 0.8, "subadult": 1.0, "adult": 1.0}}
    made = case(
        plan={"releases": [release(0, 200)]},
        donors=["D"],
        life=life,
        inbreeding_cost=COST,
        time={"horizon_years": 1},
    )
    for each in plain.run(made, "P", 20):
        flows, fathers = each.years[0]["flows"], [a.father.source for a in born(each)]
        assert flows["capped"] == sum(fathers)  # all outbred young live, and all are counted
    assert sum(fathers)


def born(each):
    return [a for a in each.herd.animals if a.mother is not None]


@pytest.mark.parametrize("measured", ["here_now", "unrelated_parents"])
def test_that_tracked_fitness_is_relative_to_where_survival_was_measured(measured):
    loci = [
        {"name": "A", "fitness": [1.0, 0.8, 0.4], "frequency": 0.5},
        {"name": "B", "fitness": [0.6, 0.9, 0.7], "frequency": 0.3},
    ]
    run = one_run(life={"survival_measured": measured}, loci=loci, time={"horizon_years": 0})
    adults, w = run.herd.adults(), {(0, 0): 0.4 * 0.7, (1, 0): 0.8 * 0.7, (2, 1): 1.0 * 0.9}
    factors = [run.first_year_factor(run.herd, a) for a in adults]
    reference = 1.0 * 0.9
    if measured == "here_now":
        assert sum(factors) / len(factors) == pytest.approx(1.0)
        reference = sum(run.tracked_fitness(a) for a in adults) / len(adults)
    for (first, second), fitness in w.items():
        parent = parent_with(run, [0] * 20 + [first > 0, second > 0], [0] * 20 + [first > 1, 0])
        assert run.first_year_factor(run.herd, parent) == pytest.approx(fitness / reference)


def test_that_rare_alleles_are_those_of_the_starting_adults():
    made = generations(40, genome={"markers": 60}, time={"horizon_years": 8})
    sources = plain.Sources(made)
    sources.points, sources.chances = [[0.02], [0.5]], [0.5, 0.5]
    for each in plain.run(made, "P", 3, sources=sources):
        kept = [row["rare_alleles_kept"] for row in each.years]
        assert kept[0] == 1.0
        assert kept == sorted(kept, reverse=True)  # one generation a year: what is lost is lost
        assert kept[-1] < 1.0
        assert len(each.rare) > 5
        assert all(round(k * len(each.rare), 9).is_integer() for k in kept)


def test_that_a_cost_by_load_loci_is_refused():
    with pytest.raises(ValueError, match="load loci"):
        one_run(inbreeding_cost=COST | {"how": "by_load_loci"})


# --- mating -----------------------------------------------------------------------------------


@pytest.mark.parametrize(("form", "fathers"), [("open", 12), ("harems", 5)])
@pytest.mark.parametrize("unequal", [0.0, 1.0])
def test_that_two_young_share_a_father_as_often_as_the_weights_say(form, fathers, unequal):
    mating = {"form": form, "share_of_males_breeding": 0.4, "unequal_success": unequal}
    life = {"mating": mating, "young_per_breeding_female": {"counts": {"1": 1.0}}}
    made = case(recipient={"adults": 14, "adult_females": 2}, life=life)
    run = plain.Run(made, "P", 1, plain.Sources(made), genetics=True)
    sky = {"young": 1.0}
    shared = []
    for k in range(2500):
        first, second = run.breed(run.herd, sky, plain.random.Random(k))
        shared.append(first.father is second.father)
    assert_share(shared, oracles.same_father(fathers, unequal))


@pytest.mark.parametrize("form", ["open", "harems", "pairs"])
def test_that_unequal_males_raise_the_kinship_of_young(form):
    mating = {"form": form, "share_of_males_breeding": 0.4, "unequal_success": 1.0}
    made = generations(life={"mating": mating}, time={"horizon_years": 1})
    runs = plain.run(made, "P", 120, seed=4)
    one_mother = 1 / 10
    holder = oracles.same_father(4, 1.0)
    one_father = {
        "open": oracles.same_father(10, 1.0),
        "harems": one_mother + (1.0 - one_mother) * holder,  # sisters' father is one for a year
        "pairs": one_mother,
    }[form]
    expected = oracles.kinship_of_young(one_mother, one_father, 0.25)
    assert_mean(plain.column(runs, "kinship", 1), expected)


def test_that_with_counted_litters_good_and_bad_years_act_on_the_chance_to_breed():
    life = {"share_of_females_breeding": 0.8, "yearly_sd": {"young": 0.5}}
    life["young_per_breeding_female"] = {"counts": {"2": 1.0}}
    made = case(life=life, time={"horizon_years": 1})
    born_ = [r.years[0]["flows"]["born"] for r in plain.run(made, "P", 1500, genetics=False)]
    assert_mean(born_, 5 * 2 * oracles.mean_capped_at_one(0.8, 0.5))
    assert {b % 2 for b in born_} == {0}
    life |= {"yearly_sd": {"young": 0.0}, "survival_measured": "unrelated_parents"}
    made = case(life=life, time={"horizon_years": 1}, inbreeding_cost=COST)
    born_ = [r.years[0]["flows"]["born"] for r in plain.run(made, "P", 300)]
    assert_mean(born_, 5 * 2 * 0.8 * math.exp(-2.0 * 0.25))


def test_that_a_released_males_factor_weighs_his_chance_to_be_a_father():
    made = case(plan={"releases": [weighted(0, 5, 0.5)]}, donors=["D"], time={"horizon_years": 1})
    made["life_cycle"]["yearly_survival"] = {"first_year": 1.0, "subadult": 1.0, "adult": 1.0}
    made["life_cycle"]["young_per_breeding_female"] = {"mean": 4.0}
    runs = plain.run(made, "P", 100, seed=6)
    assert_share([a.father.source for r in runs for a in born(r)], 0.5 / 1.5)


def test_that_a_released_females_factor_multiplies_her_chance_to_breed_at_most_one():
    for factor, chance in ((0.5, 0.3), (3.0, 1.0)):
        made = case(plan={"releases": [weighted(6, 0, factor)]}, donors=["D"])
        made["life_cycle"] |= {"share_of_females_breeding": 0.6}
        made["life_cycle"]["young_per_breeding_female"] = {"counts": {"1": 1.0}}
        made["life_cycle"]["yearly_survival"] = dict.fromkeys(SURVIVAL, 1.0)
        made["time"]["horizon_years"] = 1
        runs = plain.run(made, "P", 150, seed=6)
        mothers = [sum(a.mother.source for a in born(r)) for r in runs]
        if chance == 1.0:
            assert set(mothers) == {6}
        else:
            assert_mean(mothers, 6 * chance)


def weighted(females, males, factor):
    return release(females, males, afterwards={"breeding_relative_to_residents": factor})


def faithful(together, survival, years=8):
    life = {
        "mating": {"form": "pairs", "stay_together": together},
        "yearly_survival": {"first_year": 0.2, "subadult": survival, "adult": survival},
        "young_per_breeding_female": {"counts": {"4": 1.0}},
        "share_of_females_breeding": 0.7,
    }
    recipient = {"adults": 16, "adult_females": 8}
    made = case(recipient=recipient, life=life, time={"horizon_years": years})
    return plain.run(made, "P", 3, seed=2)


def partners(each, sex):
    """Return how many partners each animal has had, by the young that live."""
    found = {}
    for a in born(each):
        one, other = (a.mother, a.father) if sex == "mother" else (a.father, a.mother)
        found.setdefault(one.number, set()).add(other.number)
    return [len(others) for others in found.values()]


def test_that_pairs_that_stay_together_last_while_both_live():
    for sex in ("mother", "father"):
        assert {n for r in faithful(True, 1.0) for n in partners(r, sex)} == {1}
        assert max(n for r in faithful(False, 1.0) for n in partners(r, sex)) > 2
        assert max(n for r in faithful(True, 0.7) for n in partners(r, sex)) > 1  # widowed


# --- releases, flow, donors -------------------------------------------------------------------


def test_that_released_animals_survive_to_breed_once_and_wait_untouched():
    life = {"first_breeding_age": {"female": 3, "male": 3}, "last_age": 9}
    life["die_offs"] = [DIE_OFF | {"chance_per_generation": 1.0, "lost_share": {"subadult": 0.9}}]
    after = {"survive_to_breed": 0.6}
    plan = {"releases": [release(8, 8, age=1, afterwards=after)]}
    made = case(plan=plan, donors=["D"], life=life, time={"horizon_years": 2})
    runs = plain.run(made, "P", 150, seed=6, genetics=False)
    assert set(plain.column(runs, "released", 1)) == {16}
    lost = [r.years[0]["flows"]["lost"] for r in runs]
    assert_mean(lost, 16 * 0.4)
    for each, gone in zip(runs, lost, strict=True):
        there = [a for a in each.newcomers if a in each.herd.animals]
        assert len(there) == 16 - gone  # two years as subadults, each with a die-off
        assert not any(a.waiting for a in there)


def test_that_loan_animals_breed_for_their_years_and_go_home():
    made = case(plan={"releases": [release(0, 4, loan_years=2)]}, donors=["D"])
    made["life_cycle"]["yearly_survival"] = dict.fromkeys(SURVIVAL, 1.0)
    made["time"]["horizon_years"] = 4
    each = plain.run(made, "P")[0]
    assert [row["flows"]["loan_over"] for row in each.years[:4]] == [0, 4, 0, 0]
    assert [row["donor_adults:D"] for row in each.years[:4]] == [100_000, 99_996, 100_000, 100_000]
    assert each.years[3]["donor_ancestry"] > 0.0


def test_that_steady_flow_is_poisson_of_both_sexes_and_never_counts_as_released():
    flow = {"donor": "D", "migrants_per_generation": 6.0, "from_year": 2002, "to_year": 2005}
    made = case(plan={"steady": [flow]}, donors=["D"], time={"generation_years": 3.0})
    runs = plain.run(made, "P", 300, seed=2, genetics=False)
    arrived = [[row["flows"]["steady"] for row in r.years[:-1]] for r in runs]
    assert sum(sum(a[:2]) + sum(a[6:]) for a in arrived) == 0
    assert_mean([sum(a) for a in arrived], 4 * 2.0)
    assert_mean([(sum(a) - 8.0) ** 2 for a in arrived], 8.0)
    assert_mean([sum(a.female for a in r.newcomers) for r in runs], 4.0)
    assert set(plain.column(runs, "released", 10)) == {0}


def test_that_a_donor_without_removal_is_the_same_under_every_plan():
    made = case(plan={"releases": [release(3, 3, first=2003)]}, donors=["D"])
    made["donors"][0] |= {"adults": 20, "life_cycle": "same", "drifts": True}
    runs = {plan: plain.run(made, plan, 5, seed=3) for plan in ("No releases", "P")}
    for none, some in zip(runs["No releases"], runs["P"], strict=True):
        for year, (a, b) in enumerate(zip(none.years, some.years, strict=True)):
            assert a["donor_adults_without:D"] == b["donor_adults_without:D"]
            assert a["donor_adults:D"] == a["donor_adults_without:D"]
            if year <= 3:
                assert a["donor_adults:D"] == b["donor_adults:D"]
                assert {k: v for k, v in a.items() if k != "flows"} == {
                    k: v for k, v in b.items() if k != "flows"
                }


def test_that_a_donor_gives_no_more_than_it_has():
    made = case(plan={"releases": [release(30, 0)]}, donors=["D"])
    made["donors"][0]["adults"] = 12
    each = plain.run(made, "P")[0]
    assert each.years[1]["released"] == 12
    assert each.years[1]["donor_adults:D"] == 0
    made["donors"][0]["life_cycle"] = "same"
    assert plain.run(made, "P")[0].years[1]["released"] == 6  # its females


def still(plan=None, **changes):
    """Return a case in which no young one lives and nobody else dies, the founders being young."""
    none = {"what": "no young", "year": 2000, "first_year_survival_times": 0.0}
    plan = plan or {}
    plan |= {"other_actions": [none, *plan.get("other_actions", [])]}
    made = case(plan=plan, **changes)
    made["life_cycle"]["yearly_survival"] = {"first_year": 0.5, "subadult": 1.0, "adult": 1.0}
    made["life_cycle"]["young_per_breeding_female"] = {"counts": {"12": 1.0}}
    return made


@pytest.mark.parametrize("drifts", [False, True])
def test_that_a_donor_herd_loses_what_it_gives_in_the_same_year_and_regains_a_loan(drifts):
    plan = {"releases": [release(5, 0, first=2001, every=2, times=2, loan_years=2)]}
    plan["releases"][0]["afterwards"] = {"survive_to_breed": 0.5}
    made = still(plan=plan, donors=["D"], time={"horizon_years": 6})
    made["donors"][0] |= {"life_cycle": "same", "adults": 20, "drifts": drifts}
    made["donors"][0]["adult_females"] = 20  # so none is born there
    for each in plain.run(made, "P", 5):
        lost = [row["flows"]["lost"] for row in each.years[:-1]]
        donor = [row["donor_adults:D"] for row in each.years]
        home = 20 - lost[1]
        assert donor == [20, 20, 15, home, home - 5, *[home - lost[3]] * 2]
        assert {row["donor_adults_without:D"] for row in each.years} == {20}
        assert [row["adults"] for row in each.years][2:4] == [15 - lost[1], 10]


def test_that_a_donor_herd_gives_the_animals_nearest_to_the_age_asked_for():
    made = case(plan={"releases": [release(3, 0, age=7)]}, donors=["D"], life={"last_age": 9})
    made["time"]["horizon_years"] = 0
    made["donors"][0] |= {"life_cycle": "same", "adults": 40, "drifts": True}
    run = plain.run(made, "P")[0]
    ages = sorted(abs(a.age - 7) for a in run.donor_herds["D"][0].animals if a.female)
    run.releases(2000, dict.fromkeys(("released", "lost", "steady"), 0))
    assert sorted(abs(a.age - 7) for a in run.newcomers) == ages[:3]


def test_that_money_and_newcomers_that_bred_add_up_from_the_year_after():
    cost = {"each_animal": 10.0, "each_event": 100.0}
    plan = {"releases": [release(2, 1, first=2001, every=2, times=2, cost=cost)]}
    plan["other_actions"] = [
        {"what": "a", "year": 2002, "until_year": 2004, "cost": 7.0, "carrying_capacity_times": 2.0}
    ]
    made = still(plan=plan, donors=["D"], time={"horizon_years": 5})
    each = plain.run(made, "P")[0]
    assert [row["cost"] for row in each.years] == [0, 0, 130, 137, 267, 267]
    assert [row["effective_migrants"] for row in each.years] == [0, 0, 3, 3, 6, 6]


def test_that_newcomers_without_young_are_not_effective_and_a_later_release_saves_nothing():
    plan = {"releases": [release(2, 0, first=2001), release(0, 2, first=2003)]}
    recipient = {"adults": 10, "adult_females": 10}  # no male before 2003
    each = plain.run(still(plan=plan, recipient=recipient, donors=["D"]), "P")[0]
    assert [row["effective_migrants"] for row in each.years[:5]] == [0, 0, 0, 0, 4]
    assert each.years[-1]["adult_males"] == 2
    assert {row["persists"] for row in each.years} == {0}


def test_that_a_ceiling_is_rounded_down_and_follows_the_actions_of_its_years():
    plan = {
        "other_actions": [
            {"what": "a", "year": 2000, "until_year": 2001, "carrying_capacity_times": 3.0},
            {"what": "b", "year": 2004, "carrying_capacity_times": 0.5},
        ]
    }
    recipient = {"adults": 20, "adult_females": 10, "carrying_capacity": 15.8}
    each = plain.run(still(plan=plan, recipient=recipient), "P")[0]
    assert [row["adults"] for row in each.years[:7]] == [20, 20, 20, 15, 15, 7, 7]


def test_that_the_ceiling_spares_neither_sex():
    recipient = {"adults": 30, "adult_females": 20, "carrying_capacity": 15}
    made = still(recipient=recipient, time={"horizon_years": 1})
    females = plain.column(plain.run(made, "P", 300, genetics=False), "adult_females", 1)
    assert_mean(females, 10.0)
    assert_mean([(f - 10.0) ** 2 for f in females], 15 * (2 / 3) * (1 / 3) * 15 / 29)


def test_that_sources_follow_the_forms_of_fst_and_its_default():
    made = case(donors=["D", "E"])
    made["donors"][0] |= {"gene_diversity": 0.7, "fst_to_recipient": 0.1, "fst_form": "nei"}
    made["donors"][1] |= {"gene_diversity": 0.5, "fst_to_recipient": 0.1}
    made["donors"][1]["kinship_among_released"] = 0.45
    sources = plain.Sources(made)
    rd, re = 0.65 / (1.0 - 0.2 / 1.1), 0.55 / 0.9
    assert sources.diversity[0][1:] == pytest.approx([rd, re])
    assert sources.diversity[1][2] == pytest.approx(max((rd + re) / 2, 0.6))
    assert not sources.kinship_changed
    assert sources.kinship[2][2] == 0.45
    assert sources.inbreeding == pytest.approx([0.25, 0.125, 0.375])
    made["donors"][0]["fst_to_donors"] = {"E": 0.25}
    assert plain.Sources(made).diversity[2][1] == pytest.approx(0.6 / (1.0 - 0.4))


# --- rules ------------------------------------------------------------------------------------


def ruled(rule, **plan):
    made = still(plan={"rules": [{"name": "r"} | rule]} | plan, donors=["D"])
    return plain.run(made, "P", seed=1)[0]


def test_that_a_stop_waits_for_its_surveys_and_its_delay_then_holds():
    rule = {"when": "released", "above": 2.5, "surveys": 2, "survey_every_years": 3}
    rule |= {"delay_years": 1, "then": "stop"}
    each = ruled(rule, releases=[release(1, 0, times=10)])
    # Read at 2000 (0), 2003 (3: held), 2006 (6: held); acts in 2007 before that year's release.
    assert [row["released"] for row in each.years] == [0, 1, 2, 3, 4, 5, 6, 7, 7, 7, 7]


def test_that_surveys_must_find_it_one_after_the_other():
    rule = {"name": "r", "when": "adults", "below": 10.0, "surveys": 2, "then": "stop"}
    made = case(plan={"rules": [rule]}, time={"horizon_years": 0})
    run, stopped = plain.run(made, "P")[0], []
    for year, adults in enumerate([9, 11, 9, None, 9, 10, 9, 8], 2000):
        run.rules(year, {"adults": adults})
        stopped.append(run.stopped)
    assert stopped == [False] * 7 + [True]


def test_that_a_rule_releases_at_most_so_often():
    rule = {"when": "adults", "below": 10.5, "surveys": 1, "then": "release", "at_most": 2}
    rule |= {"delay_years": 2, "release": {"donor": "D", "who": {"females": 3}}}
    each = ruled(rule)
    assert [row["adults"] for row in each.years[:6]] == [10, 10, 10, 13, 16, 16]


def test_that_a_survey_errs_by_its_sd():
    rule = {"when": "adults", "above": 12.0, "survey_sd": 2.0, "then": "stop"}
    made = case(plan={"rules": [{"name": "r"} | rule]}, time={"horizon_years": 1})
    runs = plain.run(made, "P", 1500, seed=1, genetics=False)
    assert_share([r.stopped for r in runs], 0.5 * math.erfc(1.0 / math.sqrt(2.0)))


# --- conservation -----------------------------------------------------------------------------


def busy(seed):
    life = {
        "first_breeding_age": {"female": 2, "male": 3},
        "last_age": 7,
        "yearly_survival": {"first_year": 0.5, "subadult": 0.7, "adult": 0.8},
        "young_per_breeding_female": {"mean": 3.0},
        "yearly_sd": {"first_year": 0.1, "subadult": 0.05, "adult": 0.05, "young": 0.3},
        "die_offs": [DIE_OFF],
        "mating": {"form": "harems", "share_of_males_breeding": 0.5, "unequal_success": 1.0},
    }
    plan = {
        "releases": [release(2, 2, every=3, times=3, age=1, loan_years=4)],
        "steady": [{"donor": "E", "migrants_per_generation": 4.0}],
    }
    made = case(
        plan=plan,
        donors=["D", "E"],
        recipient={"adults": 16, "adult_females": 9, "carrying_capacity": 25},
        life=life,
        inbreeding_cost=COST,
        time={"generation_years": 4.0},
    )
    made["donors"][0] |= {"life_cycle": "same", "adults": 30, "drifts": True}
    return plain.run(made, "P", 4, seed=seed)


def test_that_animals_are_neither_made_nor_lost_unseen():
    gone = ("lost", "first_year_deaths", "subadult_deaths", "adult_deaths")
    gone += ("old", "loan_over", "crowded")
    for each in busy(1):
        for now, then in itertools.pairwise(each.years):
            flows = now["flows"]
            change = flows["born"] + flows["released"] + flows["steady"]
            change -= sum(flows[key] for key in gone)
            assert then["animals"] - now["animals"] == change
            assert then["adults"] <= 25
            assert then["adults"] == then["adult_females"] + then["adult_males"]


def test_that_kinship_is_positive_semidefinite_and_ancestry_sums_to_the_whole():
    for each in busy(2):
        animals = each.herd.animals
        matrix = np.array([[each.kinship(a, b) for b in animals] for a in animals])
        assert np.linalg.eigvalsh(matrix)[0] > -1e-9
        assert np.all(matrix <= 1.0)
        for row in each.years:
            parts = row["donor_ancestry:D"] + row["donor_ancestry:E"]
            assert row["donor_ancestry"] == pytest.approx(parts)
            assert 0.0 <= parts <= 1.0


def test_that_the_same_seed_gives_the_same_lives_and_another_does_not():
    first, again, other = busy(3), busy(3), busy(4)
    assert [r.years for r in first] == [r.years for r in again]
    assert [r.years for r in first] != [r.years for r in other]


def test_that_an_edit_late_leaves_the_years_before_it_as_they_were():
    late = copy.deepcopy(base := case(donors=["D"]))
    late["plans"][1]["releases"] = [release(2, 2, first=2005)]
    for a, b in zip(plain.run(base, "P", 5), plain.run(late, "P", 5), strict=True):
        assert a.years[:5] == b.years[:5]
        assert a.years[5]["adults"] == b.years[5]["adults"]
        assert a.years[-1] != b.years[-1]
