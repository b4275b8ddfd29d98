"""Varied, valid, invented raw cases, the same ones from the same seed.

Sizes are small (so that the exact chain is quick), numbers awkward: generations that don't divide
the horizon, events in a last part of a year, at the start and at the end, numbers given as ranges,
and much left out, so that the defaults are used too.
"""

import json
import random

HORIZONS = [  # years, years per generation
    (21, 0.7),
    (20, 2.5),
    (20, 3.3),
    (31, 1.7),
    (18, 1.0),
    (40, 4.0),
    (23, 2.5),
    (33, 3.3),
    (7, 0.7),
    (50, 6.2),
    (3, 4.5),
    (44, 2.2),  # 33 / 2.2 is a little less than 15 in floats
    (38, 6.3333333333),  # as written by hand: three steps end a little before 19 years
]
UNTRACKED = ["kinship", "observed_heterozygosity", "persists", "rare_alleles_kept", "young"]
START = 2027


def random_cases(count=65, seed=2027):
    """Return `count` pairs (name, raw case)."""
    return [(f"case {i:02d}", Draw(random.Random(1000 * seed + i), i).case()) for i in range(count)]


class Draw:
    """Draws one case; the running number makes sure that every feature has its turn."""

    def __init__(self, rng, i):
        self.rng, self.i = rng, i
        self.horizon, self.generation = HORIZONS[i % len(HORIZONS)]
        self.donors = ["Northern hills", "Outer isle", "Breeding station"][: i % 4]
        self.has_cycle = i % 3 != 0
        self.has_trait = i % 5 in (0, 2, 3)
        self.loci = ["bill colour", "resistance", "stunted"][: (i // 2) % 4]
        self.follows = self.has_cycle and i % 4 in (1, 3)

    def between(self, low, high, digits=4):
        return round(self.rng.uniform(low, high), digits)

    def maybe(self, chance=0.5):
        return self.rng.random() < chance

    def entry(self, value, half_width):
        """Return the number plain, or as the best of a range."""
        if self.maybe(0.7):
            return value
        low, high = round(value - half_width, 6), round(value + half_width, 6)
        return {"best": value, "low": low, "high": high, "shape": "triangular", "origin": "guessed"}

    def years(self, most):
        """Return a number of whole years, often one at which a step ends."""
        ends = [t * self.generation for t in range(1, 80) if t * self.generation < most + 0.5]
        ends = [round(end) for end in ends if abs(end - round(end)) < 1e-6]
        if ends and self.maybe(0.4):
            return self.rng.choice(ends)
        return self.rng.randint(0, most)

    def year(self):
        return START + self.years(self.horizon)

    def case(self):
        case = {
            "format": "rescue case",
            "version": 1,
            "title": f"Invented case {self.i}",
            "time": {
                "start_year": START,
                "horizon_years": self.horizon,
                "generation_years": self.generation,
            },
            "recipient": self.recipient(),
        }
        if self.donors:
            case["donors"] = [self.donor(k) for k in range(len(self.donors))]
        if self.loci:
            case["loci"] = [self.locus(name) for name in self.loci]
        if self.has_cycle:
            case["life_cycle"] = self.life_cycle()
        if self.i % 4 != 3:
            lethals = {"first_year": self.entry(self.between(0.5, 9), 0.2)}
            if self.maybe():
                lethals["young_per_female"] = self.between(0.2, 3)
            case["inbreeding_cost"] = {"lethal_equivalents_diploid": lethals}
        if self.has_trait:
            case["trait"] = self.trait()
        if self.maybe():
            case["run"] = {"replicates": 100, "seed": 1}
        case["targets"] = [self.target() for _ in range(2)]
        names = ["Trickle", "Waves", "Watchful", "Everything"]
        plans = [self.plan(name) for name in self.rng.sample(names, self.rng.randint(1, 4))]
        case["plans"] = [{"name": "No releases"}, *plans]
        return case

    # --- who is there ------------------------------------------------------------------------

    def recipient(self):
        adults = self.rng.randint(18, 61)
        self.adults, self.size = adults, self.rng.choice([3, 4.25, 6.3, 8, 9.5, 11, 14.7])
        self.reference, self.h = self.between(0.6, 0.75), self.between(0.25, 0.5)
        if self.i % 11 == 7:  # more diverse than the reference: inbreeding below 0
            self.h = self.reference + 0.03
        recipient = {
            "name": "Fen",
            "adults": self.entry(adults, 5),
            "effective_size": self.entry(self.size, 0.5),
            "gene_diversity": self.entry(self.h, 0.02),
            "reference_gene_diversity": self.reference,
        }
        if self.maybe(0.6):
            females = adults // 2 + self.rng.randint(-3, 3)
            recipient["adult_females"] = females
            recipient["breeding_females"] = self.rng.randint(3, females)
            recipient["breeding_males"] = self.rng.randint(2, adults - females)
        if self.follows or self.maybe(0.2):
            recipient["effective_size_follows_adults"] = self.follows
        if self.follows or self.maybe(0.6):  # a bound on Ne, so that the chain stays quick
            recipient["carrying_capacity"] = adults + self.rng.randint(-2, 25)
        if self.donors and self.maybe(0.4):
            recipient["donor_ancestry_at_start"] = {self.donors[-1]: self.between(0, 0.2)}
        return recipient

    def donor(self, k):
        name = self.donors[k]
        donor = {
            "name": name,
            "kind": self.rng.choice(["wild", "captive"]),
            "adults": self.rng.randint(60, 900),
            "effective_size": self.between(20, 55, 1),
            "gene_diversity": self.entry(self.between(0.4, 0.7), 0.02),
            "fst_to_recipient": self.entry(self.between(0.05, 0.4), 0.03),
        }
        if self.maybe():
            donor["fst_form"] = self.rng.choice(["hudson", "nei"])
        if self.maybe():
            donor["drifts"] = self.maybe(0.7)
        if k > 0 and self.maybe(0.6):
            donor["fst_to_donors"] = {self.donors[k - 1]: self.entry(self.between(0.05, 0.3), 0.03)}
        if k == 0 and len(self.donors) == 3 and self.maybe():
            donor["fst_to_donors"] = {self.donors[2]: self.between(0.02, 0.3)}
        if self.maybe():
            donor["most_removed_per_year"] = 400
        if self.maybe():
            donor["trait_mean_difference"] = self.entry(self.between(-2, 2), 0.1)
        if self.maybe(0.4):
            donor["additive_variance"] = self.rng.choice([None, 0.0, self.between(0.1, 0.6)])
        return donor

    def locus(self, name):
        fitness = {
            "bill colour": [1.0, self.between(0.9, 1), self.between(0.8, 0.98)],
            "resistance": self.rng.choice([[1.0, 1.0, 1.0], [0.9, 1.0, 0.85], [1.0, 0.8, 0.95]]),
            "stunted": self.rng.choice([[0.0, 0.95, 1.0], [0.6, 1.0, 1.0]]),
        }[name]
        locus = {
            "name": name,
            "role": {"stunted": "harmful", "resistance": "resistance"}.get(name, "locally adapted"),
            "fitness": [self.entry(w, 0.0) for w in fitness],
            "frequency": self.rng.choice([0.5, 1.0, 0.0, *[self.between(0.02, 0.95)] * 5]),
            "donor_frequency": {d: self.rng.choice([0, 1, 0.35, 0.081]) for d in self.donors},
        }
        if name == "stunted":
            locus["frequency"] = self.between(0.02, 0.4)
            locus["donor_frequency"] = {d: self.rng.choice([0, 0.05]) for d in self.donors}
        if self.maybe(0.4):
            locus["mutation_to"], locus["mutation_from"] = 0.002, self.between(0, 0.01, 5)
        return locus

    def life_cycle(self):
        maturity = self.rng.randint(1, 3)
        adult, subadult = self.between(0.5, 0.85), self.between(0.5, 0.8)
        last_age = self.rng.randint(maturity, maturity + 7)
        cycle = {
            "first_breeding_age": {"female": maturity, "male": maturity},
            "last_age": last_age,
            "yearly_survival": {
                "first_year": self.entry(self.between(0.25, 0.75), 0.05),
                "subadult": subadult,
                "adult": self.entry(adult, 0.05),
            },
            "share_of_females_breeding": self.between(0.6, 1),
        }
        if self.maybe():
            cycle["young_per_breeding_female"] = {"mean": self.entry(self.between(1.5, 5), 0.3)}
        else:
            cycle["young_per_breeding_female"] = {"counts": {"1": 0.2, "2": 0.3, "4": 0.5}}
        if self.maybe():
            cycle["females_among_young"] = self.between(0.4, 0.6)
        if self.maybe(0.7):
            ways = ["here_now", "unrelated_parents"]
            cycle["survival_measured"] = ways[self.i % 2]
        return cycle

    def trait(self):
        trait = {
            "name": "laying day",
            "heritability": self.entry(self.between(0.15, 0.6), 0.05),
            "selection_width_sd": self.between(2, 5),
            "optimum_at_start": self.rng.choice([0.0, self.between(-1, 1)]),
            "optimum_shift_per_year": self.between(-0.03, 0.05),
            "mutational_variance": self.rng.choice([0.0, 0.001]),
            "loci": self.rng.choice([5, 50]),
        }
        if self.maybe():
            trait["optimum_jump"] = {"year": self.year(), "by": self.between(-1, 1)}
        return trait

    def target(self):
        measures = ["gene_diversity_kept", "inbreeding", "donor_ancestry"]
        if self.has_cycle:
            measures.append("adults")
        for name in self.loci:
            measures += [f"allele_frequency:{name}", f"allele_kept:{name}"]
        return {
            "measure": self.rng.choice(measures),
            self.rng.choice(["at_least", "at_most"]): self.between(0.1, 0.9),
            "by_year": self.year(),
        }

    # --- what is done ------------------------------------------------------------------------

    def plan(self, name):
        plan = {"name": name}
        if self.maybe(0.3):
            plan["effective_size"] = self.entry(self.between(4, 13), 0.5)
        if self.donors and name in ("Trickle", "Everything"):
            plan["steady"] = [self.steady() for _ in range(self.rng.randint(1, 2))]
        if self.donors and name in ("Waves", "Watchful", "Everything"):
            plan["releases"] = [self.dated_release() for _ in range(self.rng.randint(1, 3))]
        if name in ("Watchful", "Everything"):
            plan["rules"] = [self.rule(k) for k in range(self.rng.randint(1, 4))]
        if self.maybe(0.6):
            plan["other_actions"] = [self.action() for _ in range(self.rng.randint(1, 3))]
        return plan

    def steady(self):
        first, last = sorted([self.year(), self.year()])
        steady = {
            "donor": self.rng.choice(self.donors),
            "migrants_per_generation": self.entry(self.between(0.2, 4), 0.1),
        }
        if self.maybe(0.8):
            steady["from_year"] = first
        if self.maybe(0.8):
            steady["to_year"] = last
        return steady

    def release(self):
        release = {
            "donor": self.rng.choice(self.donors),
            "who": {"females": self.rng.randint(1, 4)},
        }
        if self.maybe(0.7):
            release["who"] |= {"males": self.rng.randint(0, 3), "age": self.rng.randint(1, 2)}
        if self.maybe(0.7):
            release["afterwards"] = {"survive_to_breed": self.entry(self.between(0.3, 0.9), 0.05)}
            if self.maybe():
                release["afterwards"]["breeding_relative_to_residents"] = self.between(0.4, 1)
        if self.maybe(0.7):
            release["cost"] = {"each_animal": 2500, "each_event": self.rng.choice([0, 8000])}
        return release

    def dated_release(self):
        when = {"first_year": self.year()}
        if self.maybe(0.7):
            every, times = self.rng.randint(1, 5), self.rng.randint(1, 6)
            left = START + self.horizon - when["first_year"]
            when |= {"every_years": every, "times": min(times, left // every + 1)}
        return self.release() | {"when": when}

    def condition(self):
        """Return a measure with a bound, or with two, near where it may run."""
        above = {
            "donor_ancestry": self.between(0.1, 0.6),
            "inbreeding": 1 - self.h / self.reference + self.between(-0.1, 0.1),
            "effective_migrants": self.between(1, 9),
            "released": self.rng.randint(0, 12),
        }
        below = {
            "gene_diversity": self.h + self.between(-0.15, 0.1),
            "gene_diversity_kept": self.between(0.6, 1.2),
            "relative_first_year_survival": self.between(0.1, 0.7),
        }
        if self.donors:
            above[f"donor_ancestry:{self.donors[0]}"] = self.between(0.05, 0.4)
        if self.loci:
            below[f"allele_frequency:{self.loci[0]}"] = self.between(0.1, 0.9)
        if self.has_cycle:
            below["adults"] = self.adults * self.between(0.6, 1.3)
            below["yearly_growth"] = self.between(0.8, 1.3)
        if self.has_trait:
            above["trait_lag"] = self.between(-0.2, 0.6)
        bounds = [(m, "above", x) for m, x in above.items()]
        bounds += [(m, "below", x) for m, x in below.items()]
        if self.maybe(0.15):
            bounds = [(self.rng.choice(UNTRACKED), "above", -1)]
        measure, side, bound = self.rng.choice(bounds)
        condition = {"when": measure, side: bound}
        if self.maybe(0.2):  # a band: above one value and below another
            condition["above"] = bound - (self.between(0.02, 0.4) if side == "below" else 0)
            condition["below"] = condition["above"] + self.between(0.02, 0.4)
        return condition

    def rule(self, k):
        rule = {"name": f"rule {k + 1}", **self.condition(), "then": "stop"}
        if self.maybe(0.3):
            rule |= {"surveys": 2, "survey_every_years": 2, "survey_sd": 0.03}
        if self.donors and self.maybe(0.75):
            rule |= {"then": "release", "release": self.release()}
            if self.maybe():
                rule["at_most"] = self.rng.randint(1, 4)
        if self.maybe():
            rule["delay_years"] = self.years(self.rng.choice([6, self.horizon]))
        return rule

    def action(self):
        action = {"what": "habitat work", "year": self.year()}
        if self.maybe():
            action["until_year"] = max(action["year"], self.year() - self.rng.randint(0, 1))
        if self.maybe(0.6):
            # Ne is at most the adults, and at least 3 here: three such actions leave it above 1
            action["carrying_capacity_times"] = self.rng.choice([0.8, 1.25, 1.1])
        if self.maybe(0.6):
            action["first_year_survival_times"] = self.rng.choice([0, self.between(0.7, 1.8)])
        if self.maybe(0.6):
            action["cost"] = self.entry(40000, 500)
        return action


def corner_cases():
    """Return pairs (name, raw case), each made for one corner that draws seldom meet."""
    three = {"donor": "D", "who": {"females": 3}}
    waves = three | {"when": {"first_year": START, "every_years": 3, "times": 5}}
    rule = {"name": "r", "then": "release", "release": three, "at_most": 2}
    always = rule | {"when": "inbreeding", "above": 0}
    plans = {
        # 33 / 2.2 is a little less than 15: the release belongs to step 15
        "a delay to the end of a step": {"rules": [always | {"delay_years": 33}]},
        # strictly above: three animals released don't do it, six do
        "a value on the bound above": {
            "releases": [waves],
            "rules": [rule | {"when": "released", "above": 3}],
        },
        "a value on the bound below": {
            "releases": [waves],
            "rules": [rule | {"when": "released", "below": 3, "at_most": 9}],
        },
        # diverse donors close to the recipient: between them at least their own mean diversity
        "donors alike": {"releases": [waves, waves | {"donor": "E"}]},
        "a rule that can fire no more than its release fits in": {
            "rules": [always | {"delay_years": 44}]
        },
    }
    return [(name, corner_case(plan)) for name, plan in plans.items()]


def corner_case(plan):
    return {
        "format": "rescue case",
        "version": 1,
        "title": "Invented corner",
        "time": {"start_year": START, "horizon_years": 44, "generation_years": 2.2},
        "recipient": {
            "name": "Fen",
            "adults": 40,
            "effective_size": 9,
            "gene_diversity": 0.3,
            "reference_gene_diversity": 0.7,
        },
        "donors": [
            {"name": "D", "kind": "wild", "gene_diversity": 0.68, "fst_to_recipient": 0.05},
            {"name": "E", "kind": "wild", "gene_diversity": 0.64, "fst_to_recipient": 0.04},
        ],
        "plans": [{"name": "No releases"}, {"name": "Plan"} | plan],
    }


def write_case(case, path):
    """Write the raw case as a bare case.json and return its path."""
    path.write_text(json.dumps(case, indent=2), encoding="utf-8")
    return path
