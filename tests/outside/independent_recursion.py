"""A slow, plain reading of the method, to hold beside the program.

It takes a raw case (the dictionary that `case.json` holds) and gives every value of the expected
and the exact depth. It imports nothing of the program and was written from the method alone
(docs/method.md), with floats, dictionaries and loops. It is long for one module, so that it can be
read through beside the method and needs no other file. Letters: t = 0..G counts steps of one
generation T; H is a gene diversity, "r" the recipient, d and e donors; m a share of parents.

Readings, where the method leaves a choice
------------------------------------------
1.  A year y lies at s(y) = (y - start) / T steps. It belongs to step floor(s + 1e-9).
2.  A range of years takes in the whole of its last year. An action is in force at time t when
    s(year) <= t + 1e-9 and t < s(until_year + 1) - 1e-9; in the step [t, t+1) when
    s(year) < t + 1 - 1e-9 and t < s(until_year + 1) - 1e-9.
3.  Gene diversities between and within donors are those before the step, in H_pool, in H_rd', in
    the pairs of sources and in the trait's G_b. Only a donor with `drifts` changes, by its own Ne,
    and H_de between donors stays as it was. z_d and V_d use the donor's diversity at the start.
4.  fst_to_donors: the donor that comes first in the case and states it gives value and fst_form.
5.  A rule fires when the value is strictly above `above`, or strictly below `below`, whichever is
    given. Where both are, both must hold (a band): "outside of a band" can be said with two rules,
    a band cannot. The method says neither; this reading was "or" before it met the program. All
    stop rules are looked at before any release rule of the same step; a rule is looked
    at afresh each step; a firing counts towards `at_most` even if its release falls past the end.
    Rules on a measure without an expected value here do nothing; `surveys` do nothing.
6.  A release a rule adds comes in step floor(t + delay_years / T + 1e-9), with `who` once.
    `delay_years` of a stop does nothing.
7.  carrying_capacity_times acts on Ne in every step in which its action is in force, unless
    effective_size_follows_adults; on K at the end of a step by the point rule; the floor of one on
    Ne and of 0.5 on breeders belongs to effective_size_follows_adults only.
8.  first_year_survival_times at t by the point rule; it is not divided by its value at t = 0.
9.  each_event is paid once for each date of a release; an action is paid in the step of its year,
    even where a stop is in force; what falls in step G or later is never paid, nor released.
10. V_P in the mean fitness at t, here and in the divisor at t = 0, is G_A + D + V_E at that time.
    `here_now`: w at t = 0 is taken at the lag of t = 0; in sustainable_shift this divisor stays.
11. A trait's jump acts once s(year) <= t + 1e-9.
12. 2Ne of the exact chain is floor(2 Ne + 0.5), at least 2, Ne that of the step.
13. Where the mean fitness is 0 at a frequency of exactly 0 or 1 the frequency stays.
14. donor_ancestry, relative_first_year_survival, released, effective_migrants and cost are there in
    every case (0, or 1 where nothing is lost); adults and yearly_growth only with a life cycle,
    trait measures only with a trait, sustainable_shift only with both.
15. breeding_females and breeding_males left out are adults / 2, also where adult_females is given.
16. Adults at t = 0 are those given, also above K; no number is rounded to whole animals.
17. The exact depth has the tracked loci and nothing else; the expected depth has their mean
    frequency, and nothing on keeping or fixing an allele.
18. The relative survival at t = 0, the divisor under `here_now`, is that of mean F, without pairs.
19. A life cycle's rates, a locus's fitness and donor frequencies, and a trait's heritability,
    width, loci and mutational variance have no default here: they must be there.
20. Steady flow without from_year begins at the start, without to_year goes on for good.
"""

import math

import numpy as np
from scipy.stats import binom

TOLERANCE = 1e-9
QUANTILES = {"q05": 0.05, "q25": 0.25, "q50": 0.5, "q75": 0.75, "q95": 0.95}


def number(value, default=None):
    """Return the plain number of an entry, its best value, or the default."""
    if isinstance(value, dict):
        value = value.get("best")
    return default if value is None else value


def project(case):
    """Return {(plan, depth, measure, statistic): [value at t = 0, ..., G]}."""
    series = {}
    for plan in case["plans"]:
        records, steps = expected_course(case, plan)
        for measure in records[0]:
            key = (plan["name"], "expected", measure, "mean")
            series[key] = [record[measure] for record in records]
        for locus in case.get("loci") or []:
            for (measure, statistic), values in exact_course(locus, steps).items():
                series[(plan["name"], "exact", f"{measure}:{locus['name']}", statistic)] = values
    return series


def value_at_year(case, values, year):
    """Return the value a target on this year is checked with: the last t reached by then."""
    return values[min(step_of(case, year), len(values) - 1)]


# --- time ------------------------------------------------------------------------------------


def generation(case):
    return float(number(case["time"]["generation_years"]))


def last_step(case):
    return math.ceil(number(case["time"]["horizon_years"]) / generation(case) - TOLERANCE)


def start_year(case):
    return number(case["time"]["start_year"])


def steps_until(case, year):
    return (number(year) - start_year(case)) / generation(case)


def step_of(case, year):
    return math.floor(steps_until(case, year) + TOLERANCE)


def not_yet_ended(case, action, t):
    until = number(action.get("until_year"))
    return until is None or t < steps_until(case, until + 1) - TOLERANCE


def in_force_at(case, action, t):
    return steps_until(case, action["year"]) <= t + TOLERANCE and not_yet_ended(case, action, t)


def in_force_in_step(case, action, t):
    begun = steps_until(case, action["year"]) < t + 1 - TOLERANCE
    return begun and not_yet_ended(case, action, t)


def product_of(case, plan, field, in_force, t):
    product = 1.0
    for action in plan.get("other_actions") or []:
        if in_force(case, action, t):
            product *= number(action.get(field), 1.0)
    return product


# --- the expected depth ----------------------------------------------------------------------


def expected_course(case, plan):
    """Return the measures at every t, and what each step did to a tracked locus."""
    state = state_at_start(case)
    memory = {"stopped": False, "waiting": [], "fired": {}}
    records, steps = [], []
    for t in range(last_step(case) + 1):
        if t > 0 and case.get("life_cycle"):
            grow(case, plan, state, t)
        records.append(measures(case, plan, state, t))
        if t == 0:
            state["relative_0"], state["inbreeding_0"] = state["relative"], records[0]["inbreeding"]
        if t < last_step(case):
            releases = releases_of_step(case, plan, t, records[-1], memory)
            flow = flow_of_step(case, plan, state, t, (releases, memory["stopped"]))
            steps.append(flow)
            take_step(case, plan, state, t, (releases, flow))
    return records, steps


def state_at_start(case):
    recipient, donors = case["recipient"], case.get("donors") or []
    h = number(recipient["gene_diversity"])
    within = {d["name"]: number(d["gene_diversity"]) for d in donors}
    between = {d["name"]: (h + within[d["name"]]) / 2 / (1 - hudson(d)) for d in donors}
    ancestry = recipient.get("donor_ancestry_at_start") or {}
    trait = case.get("trait")
    inbreeding = 1 - h / number(recipient["reference_gene_diversity"])
    return {
        "h": h,
        "h_0": h,
        "within": within,
        "within_0": dict(within),
        "to_donor": between,
        "among": among_donors(donors, within, between),
        "ancestry": {d["name"]: number(ancestry.get(d["name"]), 0.0) for d in donors},
        "p": {x["name"]: number(x["frequency"]) for x in case.get("loci") or []},
        "relative": math.exp(-lethals(case, "first_year") / 2 * max(0.0, inbreeding)),
        "adults": float(number(recipient["adults"])),
        "z": 0.0,
        "genic": number(trait["heritability"]) if trait else None,
        "held": 0.0,
        "released": 0.0,
        "effective_migrants": 0.0,
        "cost": 0.0,
    }


def hudson(donor, value=None):
    """Return FST in Hudson's form; Nei's two-population G gives 2G / (1 + G)."""
    fst = number(donor["fst_to_recipient"] if value is None else value)
    return 2 * fst / (1 + fst) if donor.get("fst_form") == "nei" else fst


def among_donors(donors, within, to_recipient):
    """Return {(d, e): diversity between two different donors}, both ways round."""
    among = {}
    for d in donors:
        for e in donors:
            one, two = d["name"], e["name"]
            if one == two or (one, two) in among:
                continue
            stated = [
                hudson(a, a["fst_to_donors"][b["name"]])
                for a, b in ((d, e), (e, d))
                if b["name"] in (a.get("fst_to_donors") or {})
            ]
            mean_within = (within[one] + within[two]) / 2
            if stated:
                value = mean_within / (1 - stated[0])
            else:
                value = max((to_recipient[one] + to_recipient[two]) / 2, mean_within)
            among[one, two] = among[two, one] = value
    return among


def lethals(case, stage):
    cost = case.get("inbreeding_cost") or {}
    return number((cost.get("lethal_equivalents_diploid") or {}).get(stage), 0.0)


def measures(case, plan, state, t):
    """Return every measure with an expected value at t."""
    record = {
        "gene_diversity": state["h"],
        "gene_diversity_kept": state["h"] / state["h_0"],
        "inbreeding": inbreeding_now(case, state),
        "relative_first_year_survival": state["relative"],
        "donor_ancestry": sum(state["ancestry"].values()),
        "released": state["released"],
        "effective_migrants": state["effective_migrants"],
        "cost": state["cost"],
    }
    for donor, share in state["ancestry"].items():
        record[f"donor_ancestry:{donor}"] = share
    for locus, p in state["p"].items():
        record[f"allele_frequency:{locus}"] = p
    if case.get("trait"):
        va = state["genic"] + state["held"]
        record["additive_variance_kept"] = va / number(case["trait"]["heritability"])
        record["trait_mean"] = state["z"]
        record["trait_lag"] = optimum(case, t) - state["z"]
    if case.get("life_cycle"):
        record["adults"] = state["adults"]
        record["yearly_growth"] = yearly_growth(case, plan, state, t, at_lag_zero=False)
        if case.get("trait"):
            record["sustainable_shift"] = sustainable_shift(case, plan, state, t)
    return record


def inbreeding_now(case, state):
    return 1 - state["h"] / number(case["recipient"]["reference_gene_diversity"])


# --- rules, releases, flow -------------------------------------------------------------------


def holds(rule, record):
    value = record.get(rule["when"])
    if value is None:
        return False
    above, below = number(rule.get("above")), number(rule.get("below"))
    return (above is None or value > above) and (below is None or value < below)


def releases_of_step(case, plan, t, record, memory):
    """Return the releases that happen in step t, rules first."""
    rules = plan.get("rules") or []
    if any(rule["then"] == "stop" and holds(rule, record) for rule in rules):
        memory["stopped"] = True
    if memory["stopped"]:
        return []
    for i, rule in enumerate(rules):
        fired = memory["fired"].get(i, 0)
        allowed = fired < number(rule.get("at_most"), 1)
        if rule["then"] == "release" and allowed and holds(rule, record):
            memory["fired"][i] = fired + 1
            delay = number(rule.get("delay_years"), 0) / generation(case)
            memory["waiting"].append((math.floor(t + delay + TOLERANCE), rule["release"]))
    happening = [release for step, release in memory["waiting"] if step == t]
    for release in plan.get("releases") or []:
        when = release["when"]
        for k in range(number(when.get("times"), 1)):
            year = number(when["first_year"]) + k * number(when.get("every_years"), 1)
            if step_of(case, year) == t:
                happening.append(release)
    return happening


def heads(release, sex):
    return number(release["who"].get(sex), 0)


def afterwards(release, field):
    return number((release.get("afterwards") or {}).get(field), 1.0)


def flow_of_step(case, plan, state, t, happening):
    """Return newcomers' shares by donor (mothers, fathers, parents) and Ne in step t."""
    releases, stopped = happening
    donors = [d["name"] for d in case.get("donors") or []]
    effective = {"females": dict.fromkeys(donors, 0.0), "males": dict.fromkeys(donors, 0.0)}
    for release in releases:
        per_head = afterwards(release, "survive_to_breed")
        per_head *= afterwards(release, "breeding_relative_to_residents")
        for sex, by_donor in effective.items():
            by_donor[release["donor"]] += heads(release, sex) * per_head
    for steady in [] if stopped else plan.get("steady") or []:
        first = max(t, steps_until(case, number(steady.get("from_year"), start_year(case))))
        to_year = number(steady.get("to_year"), math.inf)
        last = min(t + 1, steps_until(case, to_year + 1))
        for by_donor in effective.values():
            part = number(steady["migrants_per_generation"]) * max(0.0, last - first)
            by_donor[steady["donor"]] += part / 2
    factor = followed(case, state)
    uf = shares(effective["females"], breeders(case, "breeding_females", factor))
    um = shares(effective["males"], breeders(case, "breeding_males", factor))
    arrived = sum(effective["females"].values()) + sum(effective["males"].values())
    m = {d: (uf[d] + um[d]) / 2 for d in donors}
    ne = effective_size(case, plan, t, factor)
    return {"uf": uf, "um": um, "m": m, "arrived": arrived, "ne": ne}


def shares(effective, residents):
    everyone = residents + sum(effective.values())
    return {donor: newcomers / everyone for donor, newcomers in effective.items()}


def followed(case, state):
    """Return adults now over adults at the start, or None where Ne is held."""
    if not case["recipient"].get("effective_size_follows_adults"):
        return None
    return state["adults"] / number(case["recipient"]["adults"])


def breeders(case, field, factor):
    recipient = case["recipient"]
    given = number(recipient.get(field), number(recipient["adults"]) / 2)
    return given if factor is None else max(0.5, given * factor)


def effective_size(case, plan, t, factor):
    given = number(plan.get("effective_size"), number(case["recipient"]["effective_size"]))
    if factor is not None:
        return max(1.0, given * factor)
    return given * product_of(case, plan, "carrying_capacity_times", in_force_in_step, t)


# --- one step --------------------------------------------------------------------------------


def take_step(case, plan, state, t, happened):
    """Change the state from t to t + 1; all that is read is read before anything is changed."""
    releases, flow = happened
    m, total = flow["m"], sum(flow["m"].values())
    kept = 1 - 1 / (2 * flow["ne"])
    pool = pooled_diversity(state, m)
    state["relative"] = relative_survival(case, state, flow)
    if case.get("trait"):
        step_trait(case, state, t, (m, pool, kept))
    to_donor = {
        d: (1 - total) * state["to_donor"][d] + sum(m[e] * between(state, e, d) for e in m)
        for d in m
    }
    state["h"], state["to_donor"] = kept * pool, to_donor
    for d in case.get("donors") or []:
        if d.get("drifts"):
            state["within"][d["name"]] *= 1 - 1 / (2 * number(d["effective_size"]))
    state["ancestry"] = {d: (1 - total) * a + m[d] for d, a in state["ancestry"].items()}
    for locus in case.get("loci") or []:
        state["p"][locus["name"]] = before_drift(locus, state["p"][locus["name"]], m)
    state["effective_migrants"] += flow["arrived"]
    state["survivors"] = 0.0
    for release in releases:
        animals = heads(release, "females") + heads(release, "males")
        price = release.get("cost") or {}
        state["released"] += animals
        state["survivors"] += animals * afterwards(release, "survive_to_breed")
        state["cost"] += animals * number(price.get("each_animal"), 0.0)
        state["cost"] += number(price.get("each_event"), 0.0)
    for action in plan.get("other_actions") or []:
        if step_of(case, action["year"]) == t:
            state["cost"] += number(action.get("cost"), 0.0)


def between(state, i, j):
    """Return the diversity between two sources; "" stands for the residents."""
    if i == j:
        return state["within"][i] if i else state["h"]
    if not i or not j:
        return state["to_donor"][i or j]
    return state["among"][i, j]


def pooled_diversity(state, m):
    share = {"": 1 - sum(m.values()), **m}
    return sum(share[i] * share[j] * between(state, i, j) for i in share for j in share)


def relative_survival(case, state, flow):
    b = lethals(case, "first_year")
    reference = number(case["recipient"]["reference_gene_diversity"])
    mothers = {"": 1 - sum(flow["uf"].values()), **flow["uf"]}
    fathers = {"": 1 - sum(flow["um"].values()), **flow["um"]}
    total = 0.0
    for i in mothers:
        for j in fathers:
            f_of_young = max(0.0, 1 - between(state, i, j) / reference)
            total += mothers[i] * fathers[j] * math.exp(-b / 2 * f_of_young)
    return total


def before_drift(locus, p, m):
    """Return the frequency after flow, selection and mutation."""
    p = (1 - sum(m.values())) * p
    p += sum(share * number(locus["donor_frequency"][d]) for d, share in m.items())
    w_two, w_one, w_none = (number(w) for w in locus["fitness"])
    with_named = p * (p * w_two + (1 - p) * w_one)
    mean = with_named + (1 - p) * (p * w_one + (1 - p) * w_none)
    if mean > 0 or p not in (0.0, 1.0):
        p = with_named / mean
    forth, back = number(locus.get("mutation_from"), 0.0), number(locus.get("mutation_to"), 0.0)
    return (1 - forth) * p + back * (1 - p)


# --- the trait -------------------------------------------------------------------------------


def optimum(case, t):
    trait = case["trait"]
    theta = number(trait.get("optimum_at_start"), 0.0)
    theta += number(trait.get("optimum_shift_per_year"), 0.0) * t * generation(case)
    jump = trait.get("optimum_jump")
    if jump and steps_until(case, jump["year"]) <= t + TOLERANCE:
        theta += number(jump["by"])
    return theta


def step_trait(case, state, t, mixing):
    m, pool, kept = mixing
    trait, total = case["trait"], sum(m.values())
    va_0 = number(trait["heritability"])
    donors = {d["name"]: d for d in case.get("donors") or []}
    z_d = {d: number(x.get("trait_mean_difference"), 0.0) for d, x in donors.items()}
    per_diversity = va_0 / state["h_0"]
    v_d = {
        d: number(x.get("additive_variance"), per_diversity * state["within_0"][d])
        for d, x in donors.items()
    }
    z = (1 - total) * state["z"] + sum(m[d] * z_d[d] for d in m)
    vb = (1 - total) * state["z"] ** 2 + sum(m[d] * z_d[d] ** 2 for d in m) - z**2
    within = (1 - total) * state["h"] + sum(m[d] * state["within"][d] for d in m)
    g_b = max(vb / (2 * number(trait["loci"])), per_diversity * (pool - within))
    genic = (1 - total) * state["genic"] + sum(m[d] * v_d[d] for d in m) + g_b
    held = (1 - total) * state["held"] / 2 + vb / 2 - g_b
    va, ve = genic + held, 1 - va_0
    w2 = number(trait["selection_width_sd"]) ** 2
    state["z"] = z + va * (optimum(case, t) - z) / (w2 + va + ve)
    state["genic"] = kept * genic + number(trait["mutational_variance"]) * ve
    state["held"] = kept * held


def mean_fitness(case, va, lag):
    w2 = number(case["trait"]["selection_width_sd"]) ** 2
    vp = va + 1 - number(case["trait"]["heritability"])
    return math.sqrt(w2 / (w2 + vp)) * math.exp(-(lag**2) / (2 * (w2 + vp)))


def sustainable_shift(case, plan, state, t):
    growth = yearly_growth(case, plan, state, t, at_lag_zero=True)
    r_max = max(0.0, generation(case) * math.log(growth)) if growth > 0 else 0.0
    va, ve = state["genic"] + state["held"], 1 - number(case["trait"]["heritability"])
    w2 = number(case["trait"]["selection_width_sd"]) ** 2
    return va * math.sqrt(2 * r_max / (w2 + va + ve))


# --- numbers ---------------------------------------------------------------------------------


def grow(case, plan, state, t):
    """Set the adults of t from those of t - 1, with the growth of t."""
    growth = yearly_growth(case, plan, state, t, at_lag_zero=False)
    state["adults"] = (state["adults"] + state["survivors"]) * growth ** generation(case)
    capacity = number(case["recipient"].get("carrying_capacity"))
    if capacity is not None:
        capacity *= product_of(case, plan, "carrying_capacity_times", in_force_at, t)
        state["adults"] = min(capacity, state["adults"])


def yearly_growth(case, plan, state, t, *, at_lag_zero):
    first_year, young = stage_factors(case, state, t, at_lag_zero=at_lag_zero)
    cycle = case["life_cycle"]
    survival = cycle["yearly_survival"]
    first_year *= number(survival["first_year"])
    first_year *= product_of(case, plan, "first_year_survival_times", in_force_at, t)
    births = number(cycle["share_of_females_breeding"]) * mean_young(cycle) * young
    births *= number(cycle.get("females_among_young"), 0.5) * min(1.0, first_year)
    maturity, oldest = number(cycle["first_breeding_age"]["female"]), number(cycle["last_age"])
    matrix = np.zeros((oldest, oldest))
    for age in range(1, oldest + 1):
        if age >= maturity:
            matrix[0, age - 1] = births
        if age < oldest:
            stage = "subadult" if age < maturity else "adult"
            matrix[age, age - 1] = number(survival[stage])
    return float(max(abs(np.linalg.eigvals(matrix))))


def stage_factors(case, state, t, *, at_lag_zero):
    """Return what inbreeding and the trait do to first-year survival and to young per female."""
    here_now = case["life_cycle"].get("survival_measured", "here_now") == "here_now"
    b_young = lethals(case, "young_per_female")
    first_year = state["relative"]
    young = math.exp(-b_young / 2 * max(0.0, inbreeding_now(case, state)))
    if here_now and t > 0:
        first_year /= state["relative_0"]
        young /= math.exp(-b_young / 2 * max(0.0, state["inbreeding_0"]))
    elif here_now:
        first_year, young = 1.0, 1.0
    if case.get("trait"):
        va = state["genic"] + state["held"]
        lag = 0.0 if at_lag_zero else optimum(case, t) - state["z"]
        divisor = mean_fitness(case, va, 0.0)
        if here_now:
            divisor = mean_fitness(case, number(case["trait"]["heritability"]), optimum(case, 0))
        first_year *= mean_fitness(case, va, lag) / divisor
    return first_year, young


def mean_young(cycle):
    young = cycle["young_per_breeding_female"]
    if "counts" in young:
        return sum(float(count) * number(chance) for count, chance in young["counts"].items())
    return number(young["mean"])


# --- the exact depth -------------------------------------------------------------------------


def exact_course(locus, steps):
    """Return {(measure, statistic): values} of the Wright-Fisher chain of one locus."""
    points = {number(locus["frequency"]): 1.0}
    course = {}
    for t in range(len(steps) + 1):
        for key, value in summary(points).items():
            course.setdefault(key, []).append(value)
        if t < len(steps):
            copies = max(2, math.floor(2 * steps[t]["ne"] + 0.5))
            chances = np.zeros(copies + 1)
            for p, chance in points.items():
                q = before_drift(locus, p, steps[t]["m"])
                q = min(1.0, max(0.0, q))  # a frequency is one; this only takes off rounding
                chances += chance * binom.pmf(range(copies + 1), copies, q)
            points = {k / copies: float(chance) for k, chance in enumerate(chances)}
    return course


def summary(points):
    mean = sum(p * chance for p, chance in points.items())
    spread = sum((p - mean) ** 2 * chance for p, chance in points.items())
    result = {
        ("allele_frequency", "mean"): mean,
        ("allele_frequency", "sd"): math.sqrt(spread),
        ("allele_kept", "share"): sum(chance for p, chance in points.items() if p > 0),
        ("allele_fixed", "share"): sum(chance for p, chance in points.items() if p == 1),
    }
    for name, q in QUANTILES.items():
        so_far = 0.0
        for p in sorted(points):
            so_far += points[p]
            if so_far >= q - 1e-12:
                result["allele_frequency", name] = p
                break
    return result
