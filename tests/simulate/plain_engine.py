"""Simulated animals, one object each: slow, obvious, written from the method's words alone.

A second opinion on the compiled engine: it shares no code with it and takes a raw case (a
dictionary as in the case file). `run` gives replicates; each holds one dictionary of measures a
year, read at the census. None stands for "nothing to read" (no adults, no young, no pairs).

Left out, with their place in `Run.first_year_factor`: trait, mixing cost, load loci, and real
genotypes brought in. A case whose cost is `by_load_loci` is refused.

Readings (where the words leave a choice):

Founders
 1. Adult females left out: half the adults, rounded half up; males are the rest.
 2. Each founder's age is drawn by itself from the stable distribution of its sex (survival by that
    sex's first breeding age, growth of the female matrix at the start, other actions not counted).
 3. F of an animal is the kinship within its own source; `kinship_among_released` replaces the
    kinship of pairs of that donor's animals, not their F. The set of source kinships (one row a
    source) is made positive semidefinite by leaving out negative eigenvalues.
 4. A tracked locus: nearest whole count (half up) among the copies of *all* residents, subadults
    too; a released animal's copies are drawn one by one with the donor's frequency.
 5. Earlier donor ancestry: each founder copy is of the donor's origin with that chance, by itself,
    whatever its allele.
 6. Markers: frequencies drawn anew in each replicate (the same for all plans); c is the largest
    constant with c * max H <= 0.45 for which a distribution exists. Where none exists for any c,
    the set nearest by the sum of absolute changes at c = 0.45 / max H is used. The rest of the
    distribution is free; here it is the one with the fewest rare alleles, so rare_alleles_kept
    compares between engines only where both are given the same frequencies. Markers lie evenly
    along chromosomes, taken in turn; tracked locus k is in the middle of chromosome k.
Census
 7. Genetic measures, tracked alleles too, are read in living adults, residents and newcomers alike.
    Observed heterozygosity is divided by c as well. gene_diversity_kept is relative to the case's
    own gene diversity. rare alleles: either allele, 0 < frequency < 5 % in the starting adults.
 8. realised_effective_size: T rounded half up to L whole years, the ratio raised to T/L; None if
    mean kinship did not rise.
 9. effective_migrants: newcomers (released or steady) with at least one young born so far.
10. relative_first_year_survival: mean of exp(-(B/2) max(0, F)) over all young born in the year
    before, dead or not, not divided; at the start from the founders' F.
11. donor_adults: with removal; donor_adults_without beside it.
Rules
12. After a rule has acted the count of surveys starts anew; a survey without a value breaks it.
    With two bounds either is enough. A rule's release that falls due after a stop is dropped.
Weather
13. With counts, weather, die-offs and the mother's F all multiply the chance to breed, at most 1
    after all of them.
14. Each donor has weather and die-offs of its own, the same with and without removal.
Releases
15. Age left out: the first breeding age of each sex. Loan animals leave alive at the end of year
    release + loan_years - 1, before crowding, and go back to the donor (also as young ones).
16. A donor with a life cycle is a herd. With `drifts` its animals carry genes and are themselves
    released; without, only its numbers are simulated, and released animals are fresh draws from the
    donor as the case gives it. Asked age: the donor animals of that sex nearest to it in age, at
    random among equals; the animal has the asked age where it is a fresh draw. A donor without a
    life cycle loses what it gives and does not grow. No more are released than it has.
    `fewest_left` and `most_removed_per_year` do not stop a release. The tracked loci are neutral
    in a donor.
17. Steady flow is not taken from the donor's numbers; its animals are fresh draws.
Breeding
18. Male weights: gamma drawn anew each year. Pairs use the animal's factor only. Holders of harems
    are drawn at random (round half up, at least one); the weights then spread the females.
19. stay_together: a male whose mate lives is not free, also in a year in which she does not breed.
20. Mutation acts on each copy handed on, in the gamete.
Survival and crowding
21. `here_now`: tracked loci are one factor, the product over loci; its mean is over this
    replicate's starting adults.
22. Other actions count in every year from `year` to `until_year`; K for crowding at the end of a
    year is that year's.
23. Gradual crowding: A is the census number of adults, g the growth at the start; no crowding where
    g is at most 1. No crowding without a carrying capacity.
"""

import functools
import itertools
import math
import random

import numpy as np
from scipy.optimize import linprog
from scipy.special import betaincinv, ndtr

CLASSES = ("first_year", "subadult", "adult")
MOST_MARKER_DIVERSITY = 0.45


def number(value, default=None):
    """Return a plain number from a number or a quantity object."""
    if isinstance(value, dict):
        value = value.get("best")
    return default if value is None else value


def half_up(value):
    return math.floor(value + 0.5)


def poisson(rng, mean):
    """Return a Poisson number by multiplying uniforms (Knuth), in parts where the mean is large."""
    count = 0
    while mean > 20.0:
        count += poisson(rng, 20.0)
        mean -= 20.0
    product, limit = rng.random(), math.exp(-mean)
    while product > limit:
        count += 1
        product *= rng.random()
    return count


def choose(rng, animals, weights):
    """Return one animal by weight, or None if no weight is above 0."""
    total = sum(weights)
    if not animals or total <= 0.0:
        return None
    mark = rng.random() * total
    for animal, weight in zip(animals, weights, strict=True):
        mark -= weight
        if mark < 0.0:
            return animal
    return max(zip(weights, range(len(animals)), animals, strict=True))[2]


class Animal:
    """One animal; `copies` are two lists of allele + 2 * origin, one entry a locus."""

    def __init__(self, number_, female, age, source):
        self.number, self.female, self.age, self.source = number_, female, age, source
        self.mother = self.father = self.copies = self.mate = self.leaves = None
        self.inbreeding, self.factor = 0.0, 1.0
        self.waiting = self.bred = False


@functools.cache
def dominant(matrix):
    """Return the largest absolute eigenvalue of a square matrix given as bytes."""
    entries = np.frombuffer(matrix)
    size = math.isqrt(entries.size)
    return float(max(abs(np.linalg.eigvals(entries.reshape(size, size)))))


class Life:
    """A life cycle as plain numbers."""

    def __init__(self, raw, generation_years):
        ages, survival = raw["first_breeding_age"], raw["yearly_survival"]
        self.first = {True: number(ages["female"]), False: number(ages["male"])}
        self.last = number(raw["last_age"])
        self.survival = {name: number(survival[name]) for name in CLASSES}
        self.here_now = raw.get("survival_measured", "here_now") == "here_now"
        self.share = number(raw["share_of_females_breeding"])
        litter = raw["young_per_breeding_female"]
        self.counts = litter.get("counts")
        if self.counts:
            self.counts = [(int(size), number(p)) for size, p in self.counts.items()]
            self.young = sum(size * p for size, p in self.counts)
        else:
            self.young = number(litter["mean"])
        self.females = number(raw.get("females_among_young"), 0.5)
        mating = raw.get("mating", {})
        self.form = mating.get("form", "open")
        self.holders = number(mating.get("share_of_males_breeding"), 1.0)
        self.unequal = number(mating.get("unequal_success"), 0.0)
        self.together = mating.get("stay_together", False)
        self.gradual = raw.get("crowding", "ceiling") == "gradual"
        sd = raw.get("yearly_sd", {})
        self.sd = {name: number(sd.get(name), 0.0) for name in (*CLASSES, "young")}
        self.correlation = number(raw.get("survival_young_correlation"), 1.0)
        self.die_offs = []
        for each in raw.get("die_offs", []):
            chance = 1.0 - (1.0 - number(each["chance_per_generation"])) ** (1.0 / generation_years)
            lost = each.get("lost_share", {})
            lost = {name: number(lost.get(name), 0.0) for name in CLASSES}
            lost["young"] = number(each.get("young_lost_share"), 0.0)
            self.die_offs.append((each["name"], chance, lost))
        self.fewest = number(raw.get("fewest_adults"), 2)
        if max(self.first.values()) > self.last:
            raise ValueError("no animal lives to its first breeding age")

    def class_of(self, animal):
        return "adult" if animal.age >= self.first[animal.female] else "subadult"

    def matrix(self, first_year_times=1.0, young_times=1.0):
        """Return the female age matrix counted just before breeding."""
        matrix = np.zeros((self.last, self.last))
        first_year = min(1.0, self.survival["first_year"] * first_year_times)
        births = self.share * self.young * young_times * self.females * first_year
        for age in range(1, self.last + 1):
            adult = age >= self.first[True]
            if adult:
                matrix[0, age - 1] = births
            if age < self.last:
                matrix[age, age - 1] = self.survival["adult" if adult else "subadult"]
        return matrix

    def growth(self, first_year_times=1.0, young_times=1.0):
        """Return the dominant eigenvalue of the age matrix."""
        return dominant(self.matrix(first_year_times, young_times).tobytes())

    def stable_ages(self, female, growth):
        """Return the relative numbers at ages 1..last of a sex."""
        shares, alive = [], 1.0
        growth = growth if growth > 1e-9 else 1.0  # no births: as many of each age as live to it
        for age in range(1, self.last + 1):
            shares.append(alive * growth ** (1 - age))
            alive *= self.survival["adult" if age >= self.first[female] else "subadult"]
        return shares

    def weather(self, rng):
        """Return this year's survival by class, the factor of young, and the die-offs' names."""
        z = rng.gauss(0.0, 1.0)
        r = 2.0 * math.sin(math.pi * self.correlation / 6.0)
        z_young = r * z + math.sqrt(max(0.0, 1.0 - r * r)) * rng.gauss(0.0, 1.0)
        sky = {}
        for name in CLASSES:
            mean, sd = self.survival[name], self.sd[name]
            sky[name] = mean
            if sd > 0.0:
                if sd * sd >= mean * (1.0 - mean):
                    raise ValueError(f"no beta has mean {mean} and SD {sd}")
                c = mean * (1.0 - mean) / sd**2 - 1.0
                sky[name] = float(betaincinv(mean * c, (1.0 - mean) * c, ndtr(z)))
        sigma = math.sqrt(math.log1p(self.sd["young"] ** 2))
        sky["young"] = math.exp(sigma * z_young - sigma * sigma / 2.0)
        names = []
        for name, chance, lost in self.die_offs:
            if rng.random() < chance:
                names.append(name)
                for key, share in lost.items():
                    sky[key] *= 1.0 - share
        return sky, names


class Sources:
    """The recipient (0) and the donors (1..): diversities, kinships, marker frequencies."""

    def __init__(self, case):
        recipient, donors = case["recipient"], case.get("donors", [])
        reference = number(recipient["reference_gene_diversity"])
        self.names = [None, *[donor["name"] for donor in donors]]
        within = [number(recipient["gene_diversity"])]
        within += [number(donor["gene_diversity"]) for donor in donors]
        n = len(within)
        h = np.diag(within).astype(float)
        for i, j in itertools.combinations(range(n), 2):
            fst = self._fst(donors, i, j)
            if fst is not None:
                h[i, j] = h[j, i] = (within[i] + within[j]) / 2.0 / (1.0 - fst)
        for i, j in itertools.combinations(range(1, n), 2):
            if self._fst(donors, i, j) is None:
                h[i, j] = max((h[0, i] + h[0, j]) / 2.0, (within[i] + within[j]) / 2.0)
                h[j, i] = h[i, j]
        self.diversity, kinship = h.tolist(), 1.0 - h / reference
        among = [None, *[number(donor.get("kinship_among_released")) for donor in donors]]
        for i, value in enumerate(among):
            kinship[i, i] = kinship[i, i] if value is None else value
        values, vectors = np.linalg.eigh(kinship)
        self.kinship_changed = bool(values[0] < -1e-12)
        if self.kinship_changed:
            kinship = (vectors * np.maximum(values, 0.0)) @ vectors.T
        self.kinship = kinship.tolist()
        self.inbreeding = [
            self.kinship[i][i] if among[i] is None else 1.0 - within[i] / reference
            for i in range(n)
        ]
        self._solve_markers()

    @staticmethod
    def _fst(donors, i, j):
        if i == 0:
            fst = number(donors[j - 1]["fst_to_recipient"])
            form = donors[j - 1].get("fst_form", "hudson")
        else:
            first, second = donors[i - 1], donors[j - 1]
            fst = number(first.get("fst_to_donors", {}).get(second["name"]))
            form = first.get("fst_form", "hudson")
            if fst is None:
                fst = number(second.get("fst_to_donors", {}).get(first["name"]))
                form = second.get("fst_form", "hudson")
        return 2.0 * fst / (1.0 + fst) if fst is not None and form == "nei" else fst

    def _solve_markers(self):
        """Find frequencies and their chances such that expected diversities are c times the case's.

        With x = p - 1/2, E[x_i x_j] = (1/2 - c H_ij) / 2: linear in the chances of grid points and
        in c. Largest c first, then the least fourth moment (fewest one-allele markers).
        """
        h, n = np.array(self.diversity), len(self.names)
        levels = {1: 41, 2: 41, 3: 13, 4: 7}.get(n, 5)
        points = np.array(list(itertools.product(np.linspace(-0.5, 0.5, levels), repeat=n)))
        pairs = list(itertools.combinations_with_replacement(range(n), 2))
        most = MOST_MARKER_DIVERSITY / float(h.max())
        rows = [np.ones(len(points)), *[points[:, i] * points[:, j] for i, j in pairs]]
        moment = np.array(rows)
        push = np.array([0.0, *[h[i, j] / 2.0 for i, j in pairs]])
        right = np.array([1.0, *[0.25 for _ in pairs]])
        fourth = np.sum(points**4, axis=1)
        found = linprog(
            np.append(fourth, -1000.0),
            A_eq=np.column_stack([moment, push]),
            b_eq=right,
            bounds=[(0.0, 1.0)] * len(points) + [(0.0, most)],
        )
        self.markers_changed = found.x is None or found.x[-1] < 1e-6
        if self.markers_changed:
            slack = np.vstack([np.zeros((1, 2 * len(pairs))), np.eye(len(pairs), 2 * len(pairs))])
            slack[1:, len(pairs) :] = -np.eye(len(pairs))
            found = linprog(
                np.append(1e-4 * fourth, np.ones(2 * len(pairs))),
                A_eq=np.column_stack([moment, slack]),
                b_eq=right - push * most,
                bounds=[(0.0, 1.0)] * len(points) + [(0.0, None)] * (2 * len(pairs)),
            )
        self.c = most if self.markers_changed else float(found.x[-1])
        chances = np.maximum(found.x[: len(points)], 0.0)
        self.points = [(points[k] + 0.5).tolist() for k in np.flatnonzero(chances > 1e-12)]
        self.chances = chances[chances > 1e-12].tolist()

    def frequencies(self, rng, markers):
        """Return one list of frequencies (a value a source) per marker."""
        drawn = rng.choices(self.points, self.chances, k=markers)
        return [p if rng.random() < 0.5 else [1.0 - x for x in p] for p in drawn]


class Herd:
    """Animals that live together: the recipient's or a donor's, with their rates."""

    def __init__(self, name, source, life, genetic):
        self.name, self.source, self.life, self.genetic = name, source, life, genetic
        self.animals, self.capacity = [], None
        self.first_year_cost = self.young_cost = 0.0
        self.start_cost = self.start_young = self.start_tracked = self.growth = 1.0

    def adults(self):
        return [a for a in self.animals if a.age >= self.life.first[a.female]]


class Run:
    """One replicate of one plan."""

    def __init__(self, case, plan, key, sources, genetics=True):
        self.case, self.key, self.sources, self.genetics = case, key, sources, genetics
        self.plan = next(p for p in case["plans"] if p["name"] == plan)
        time, genome = case["time"], case.get("genome", {})
        self.start = number(time["start_year"])
        self.horizon = number(time["horizon_years"])
        self.generation = number(time["generation_years"])
        if not case.get("life_cycle"):
            raise ValueError("animals cannot be simulated without a life cycle")
        if case.get("inbreeding_cost", {}).get("how", "by_inbreeding") != "by_inbreeding":
            raise ValueError("load loci are not part of this engine")
        self.loci = case.get("loci", []) if genetics else []
        self.markers = number(genome.get("markers"), 200) if genetics else 0
        self._lay_out(number(genome.get("chromosomes"), 20), number(genome.get("morgans_each")))
        self.donors = {d["name"]: d for d in case.get("donors", [])}
        self.born_so_far, self.known_kinships = 0, {}
        self.years, self.log, self.newcomers = [], [], []
        self.tally = {"released": 0, "cost": 0.0}
        self.stopped, self.persists, self.relative = False, True, None
        self.rule_state = [{"held": 0, "fired": 0} for _ in self.plan.get("rules", [])]
        self.due = []
        self.marker_frequencies = self.sources.frequencies(self.stream("markers"), self.markers)
        self._found()

    def stream(self, purpose, year=None, herd=None):
        """Return the stream of a purpose: the plan is no part of its key."""
        return random.Random(f"{self.key}|{year}|{purpose}|{herd}")

    # --- genome -------------------------------------------------------------------------------

    def _lay_out(self, chromosomes, morgans):
        """Place the loci: `chromosomes` holds lists of (position in Morgans, locus)."""
        self.morgans, count = morgans, self.markers
        self.chromosomes = [[] for _ in range(chromosomes)]
        for k in range(count):
            on = range(k % chromosomes, count, chromosomes)
            place = (k // chromosomes + 0.5) / len(on)
            self.chromosomes[k % chromosomes].append((place * (morgans or 0.0), k))
        for k in range(len(self.loci)):
            spot = (0.5 * (morgans or 0.0), count + k)
            self.chromosomes[k % chromosomes].append(spot)
        for chromosome in self.chromosomes:
            chromosome.sort()

    def gamete(self, parent, rng):
        """Hand on one copy of every locus."""
        if self.morgans is None:
            handed = [a if rng.random() < 0.5 else b for a, b in zip(*parent.copies, strict=True)]
        else:
            handed = self.linked_gamete(parent, rng)
        for k, locus in enumerate(self.loci):
            copy = handed[self.markers + k]
            chance = number(locus.get("mutation_from" if copy % 2 else "mutation_to"), 0.0)
            if chance and rng.random() < chance:
                handed[self.markers + k] = copy ^ 1
        return handed

    def linked_gamete(self, parent, rng):
        """Walk along each chromosome, changing strands at Poisson points (no interference)."""
        handed = [0] * (self.markers + len(self.loci))
        for chromosome in self.chromosomes:
            strand = rng.random() < 0.5
            breaks = sorted(rng.random() * self.morgans for _ in range(poisson(rng, self.morgans)))
            for position, locus in chromosome:
                while breaks and breaks[0] < position:
                    breaks.pop(0)
                    strand = not strand
                handed[locus] = parent.copies[strand][locus]
        return handed

    def fresh_copies(self, source, rng):
        """Return copies of a founder of a source, tracked loci by frequency."""
        copies = []
        for _ in range(2):
            copy = [int(rng.random() < p[source]) + 2 * source for p in self.marker_frequencies]
            for locus in self.loci:
                if source:
                    p = number(locus["donor_frequency"].get(self.sources.names[source]), 0.0)
                else:
                    p = number(locus["frequency"])
                copy.append(int(rng.random() < p) + 2 * source)
            copies.append(copy)
        return copies

    # --- pedigree -----------------------------------------------------------------------------

    def kinship(self, a, b):
        """Return the coefficient of kinship, by the parents of the younger of the two."""
        if a is b:
            return 0.5 * (1.0 + a.inbreeding)
        if a.number < b.number:
            a, b = b, a
        if a.mother is None and b.mother is None:
            return self.sources.kinship[a.source][b.source]
        key = (a.number, b.number)
        if key not in self.known_kinships:
            young, other = (a, b) if a.mother is not None else (b, a)
            through = self.kinship(young.mother, other) + self.kinship(young.father, other)
            self.known_kinships[key] = 0.5 * through
        return self.known_kinships[key]

    def new_animal(self, female, age, source):
        self.born_so_far += 1
        animal = Animal(self.born_so_far, female, age, source)
        animal.inbreeding = self.sources.inbreeding[source]
        return animal

    # --- founders -----------------------------------------------------------------------------

    def _found(self):
        recipient = self.case["recipient"]
        cost = self.case.get("inbreeding_cost", {}).get("lethal_equivalents_diploid", {})
        life = Life(self.case["life_cycle"], self.generation)
        self.herd = self._found_herd(None, 0, recipient, life, cost, self.genetics)
        self._place_tracked_copies()
        self._place_earlier_ancestry(recipient.get("donor_ancestry_at_start", {}))
        self._refer_tracked_to_start()
        if not self.genetics and (self.herd.first_year_cost or self.herd.young_cost):
            raise ValueError("a cost of inbreeding needs genetics")
        self.donor_herds, self.donor_left = {}, {}
        for index, name in enumerate(self.sources.names[1:], 1):
            donor = self.donors[name]
            if donor.get("life_cycle"):
                raw = donor["life_cycle"]
                raw = self.case["life_cycle"] if raw == "same" else raw
                genetic = self.genetics and bool(donor.get("drifts", False))
                loads = donor.get("lethal_equivalents_diploid", {}) if genetic else {}
                self.donor_herds[name] = [
                    self._found_herd(name, index, donor, Life(raw, self.generation), loads, genetic)
                    for _ in ("with removal", "without")
                ]
            else:
                self.donor_left[name] = number(donor["adults"])
        self.rare = self._rare_alleles()

    def _found_herd(self, name, source, group, life, cost, genetic):
        herd = Herd(name, source, life, genetic)
        herd.capacity = number(group.get("carrying_capacity"))
        herd.first_year_cost = number(cost.get("first_year"), 0.0)
        herd.young_cost = number(cost.get("young_per_female"), 0.0)
        start = max(0.0, self.sources.inbreeding[source])
        start_cost = math.exp(-herd.first_year_cost / 2.0 * start)
        start_young = math.exp(-herd.young_cost / 2.0 * start)
        if life.here_now:
            herd.start_cost, herd.start_young = start_cost, start_young
            herd.growth = life.growth()
        else:
            herd.growth = life.growth(start_cost, start_young)
        rng = self.stream("founders", herd=name)
        adults = number(group["adults"])
        females = number(group.get("adult_females"), half_up(adults / 2.0))
        for female, count in ((True, females), (False, adults - females)):
            shares, first = life.stable_ages(female, herd.growth), life.first[female]
            below, above = shares[: first - 1], shares[first - 1 :]
            ages = rng.choices(range(first, life.last + 1), above, k=count)
            subadults = half_up(count * sum(below) / sum(above))
            if subadults:
                ages += rng.choices(range(1, first), below, k=subadults)
            for age in ages:
                animal = self.new_animal(female, age, source)
                animal.copies = self.fresh_copies(source, rng) if genetic else None
                herd.animals.append(animal)
        return herd

    def _place_tracked_copies(self):
        rng, spots = self.stream("tracked copies"), []
        for animal in self.herd.animals:
            spots += [(animal, 0), (animal, 1)]
        for k, locus in enumerate(self.loci):
            count = half_up(number(locus["frequency"]) * len(spots))
            for place, (animal, strand) in enumerate(rng.sample(spots, len(spots))):
                animal.copies[strand][self.markers + k] = int(place < count)

    def _place_earlier_ancestry(self, shares):
        rng = self.stream("earlier ancestry")
        shares = {self.sources.names.index(d): number(a) for d, a in shares.items() if number(a)}
        if not shares or not self.genetics:
            return
        origins, weights = [0, *shares], [1.0 - sum(shares.values()), *shares.values()]
        for animal in self.herd.animals:
            for copy in animal.copies:
                for locus, origin in enumerate(rng.choices(origins, weights, k=len(copy))):
                    copy[locus] += 2 * origin

    def tracked_fitness(self, animal):
        """Return the product over tracked loci of the fitness of the animal's genotype."""
        product = 1.0
        for k, locus in enumerate(self.loci):
            named = sum(copy[self.markers + k] % 2 for copy in animal.copies)
            product *= number(locus["fitness"][2 - named]) if locus.get("fitness") else 1.0
        return product

    def _refer_tracked_to_start(self):
        if self.herd.life.here_now:
            adults = self.herd.adults()
            values = [self.tracked_fitness(a) for a in adults] if self.loci else [1.0]
            reference = sum(values) / len(values) if values else 1.0
        else:
            best = [max(number(w) for w in locus.get("fitness", [1.0])) for locus in self.loci]
            reference = math.prod(best)
        if reference <= 0.0:
            raise ValueError("the starting adults' mean fitness is 0")
        self.herd.start_tracked = reference

    # --- the census ---------------------------------------------------------------------------

    def _marker_counts(self, adults):
        return [
            sum(a.copies[0][k] % 2 + a.copies[1][k] % 2 for a in adults)
            for k in range(self.markers)
        ]

    def _rare_alleles(self):
        adults, rare = self.herd.adults(), []
        copies = 2 * len(adults)
        for k, count in enumerate(self._marker_counts(adults)):
            for allele, there in ((1, count), (0, copies - count)):
                if 0 < there < 0.05 * copies:
                    rare.append((k, allele))
        return rare

    def census(self, year):
        """Read every measure; nothing changes."""
        adults = self.herd.adults()
        females = sum(a.female for a in adults)
        if len(adults) < self.herd.life.fewest or females in (0, len(adults)):
            self.persists = False
        row = {
            "year": year,
            "adults": len(adults),
            "adult_females": females,
            "adult_males": len(adults) - females,
            "animals": len(self.herd.animals),
            "young": sum(a.age == 1 for a in self.herd.animals),
            "persists": int(self.persists),
            "released": self.tally["released"],
            "effective_migrants": sum(a.bred for a in self.newcomers),
            "cost": self.tally["cost"],
            "relative_first_year_survival": self.relative,
        }
        if not self.years:
            start = max(0.0, self.sources.inbreeding[0])
            row["relative_first_year_survival"] = math.exp(-self.herd.first_year_cost / 2.0 * start)
        for name in self.donors:
            herds = self.donor_herds.get(name)
            without = len(herds[1].adults()) if herds else number(self.donors[name]["adults"])
            row[f"donor_adults:{name}"] = len(herds[0].adults()) if herds else self.donor_left[name]
            row[f"donor_adults_without:{name}"] = without
        if self.genetics:
            self._read_genes(row, adults)
        self.years.append(row)
        return row

    def _read_genes(self, row, adults):
        n, markers = len(adults), self.markers
        keys = ["gene_diversity", "gene_diversity_kept", "observed_heterozygosity", "inbreeding"]
        keys += ["kinship", "rare_alleles_kept", "realised_effective_size"]
        row.update(dict.fromkeys(keys))
        if n and markers:
            counts = self._marker_counts(adults)
            within = sum(1.0 - (c / (2 * n)) ** 2 - (1.0 - c / (2 * n)) ** 2 for c in counts)
            row["gene_diversity"] = within / markers * 2 * n / (2 * n - 1) / self.sources.c
            row["gene_diversity_kept"] = row["gene_diversity"] / self.sources.diversity[0][0]
            mixed = sum(
                a.copies[0][k] % 2 != a.copies[1][k] % 2 for a in adults for k in range(markers)
            )
            row["observed_heterozygosity"] = mixed / (n * markers) / self.sources.c
            kept = sum((c if allele else 2 * n - c) > 0 for c, allele in self._rare_counts(counts))
            row["rare_alleles_kept"] = kept / len(self.rare) if self.rare else None
        if n:
            row["inbreeding"] = sum(a.inbreeding for a in adults) / n
        if n > 1:
            pairs = [self.kinship(a, b) for a, b in itertools.combinations(adults, 2)]
            row["kinship"] = sum(pairs) / len(pairs)
        self._read_effective_size(row)
        self._read_ancestry(row, adults)
        for k, locus in enumerate(self.loci):
            name, place = locus["name"], markers + k
            count = sum(copy[place] % 2 for a in adults for copy in a.copies)
            row[f"allele_frequency:{name}"] = count / (2 * n) if n else None
            row[f"allele_kept:{name}"] = int(count > 0) if n else None
            row[f"allele_fixed:{name}"] = int(count == 2 * n) if n else None

    def _rare_counts(self, counts):
        return [(counts[k], allele) for k, allele in self.rare]

    def _read_effective_size(self, row):
        years = max(1, half_up(self.generation))
        now = row["kinship"]
        before = self.years[-years]["kinship"] if len(self.years) >= years else None
        if now is None or before is None or now <= before or now >= 1.0:
            return
        kept = ((1.0 - now) / (1.0 - before)) ** (self.generation / years)
        row["realised_effective_size"] = 1.0 / (2.0 * (1.0 - kept))

    def _read_ancestry(self, row, adults):
        n, markers = len(adults), self.markers
        total = [0.0] * n
        for index, name in enumerate(self.sources.names[1:], 1):
            shares = [
                sum(c // 2 == index for copy in a.copies for c in copy[:markers]) / (2 * markers)
                if markers
                else 0.0
                for a in adults
            ]
            total = [x + y for x, y in zip(total, shares, strict=True)]
            row[f"donor_ancestry:{name}"] = sum(shares) / n if n and markers else None
        mean = sum(total) / n if n else 0.0
        spread = math.sqrt(sum((x - mean) ** 2 for x in total) / n) if n else None
        row["donor_ancestry"] = mean if n and markers else None
        row["donor_ancestry_sd"] = spread if markers else None

    # --- 1. rules -----------------------------------------------------------------------------

    def rules(self, year, row):
        """Survey the census, note what falls due, and act on what is due this year."""
        rng = self.stream("surveys", year)
        for rule, state in zip(self.plan.get("rules", []), self.rule_state, strict=True):
            noise = rng.gauss(0.0, 1.0) * number(rule.get("survey_sd"), 0.0)
            if (year - self.start) % number(rule.get("survey_every_years"), 1):
                continue
            value = row.get(rule["when"])
            above, below = number(rule.get("above")), number(rule.get("below"))
            held = value is not None and (
                (above is not None and value + noise > above)
                or (below is not None and value + noise < below)
            )
            state["held"] = state["held"] + 1 if held else 0
            most = 1 if rule["then"] == "stop" else number(rule.get("at_most"), 1)
            if state["held"] >= number(rule.get("surveys"), 1) and state["fired"] < most:
                state["held"], state["fired"] = 0, state["fired"] + 1
                self.due.append((year + number(rule.get("delay_years"), 0), rule))
                self.log.append((year, "rule", rule["name"], value + noise))
        if any(due == year and rule["then"] == "stop" for due, rule in self.due):
            self.stopped = True
            self.log.append((year, "stop", None, None))

    # --- 3. releases --------------------------------------------------------------------------

    def actions(self, year):
        """Return (times on K, times on first-year survival) of the actions in force."""
        capacity = first_year = 1.0
        for action in self.plan.get("other_actions", []):
            until = number(action.get("until_year"), math.inf)
            if number(action["year"]) <= year <= until:
                capacity *= number(action.get("carrying_capacity_times"), 1.0)
                first_year *= number(action.get("first_year_survival_times"), 1.0)
        return capacity, first_year

    def releases(self, year, flows):
        for action in self.plan.get("other_actions", []):
            if number(action["year"]) == year:
                self.tally["cost"] += number(action.get("cost"), 0.0)
        rng = self.stream("releases", year)
        planned = []
        for release in self.plan.get("releases", []):
            when = release["when"]
            first, every = number(when["first_year"]), number(when.get("every_years"), 1)
            times = number(when.get("times"), 1)
            if year in [first + k * every for k in range(times)]:
                planned.append(release)
        planned += [r["release"] for due, r in self.due if due == year and r["then"] == "release"]
        if self.stopped:
            return
        for release in planned:
            self.let_go(release, year, rng, flows)
        for steady in self.plan.get("steady", []):
            begin = number(steady.get("from_year"), self.start)
            end = number(steady.get("to_year"), self.start + self.horizon)
            if begin <= year <= end:
                mean = number(steady["migrants_per_generation"]) / self.generation
                for _ in range(poisson(rng, mean)):
                    female = rng.random() < 0.5
                    source = self.sources.names.index(steady["donor"])
                    animal = self.fresh(female, self.herd.life.first[female], source, rng)
                    self.join(animal, 1.0)
                    flows["steady"] += 1

    def fresh(self, female, age, source, rng):
        animal = self.new_animal(female, age, source)
        animal.copies = self.fresh_copies(source, rng) if self.genetics else None
        return animal

    def join(self, animal, factor):
        animal.factor, animal.bred, animal.mate = factor, False, None
        animal.waiting = animal.age < self.herd.life.first[animal.female]
        self.newcomers.append(animal)
        self.herd.animals.append(animal)

    def let_go(self, release, year, rng, flows):
        who, after, cost = (release.get(k) or {} for k in ("who", "afterwards", "cost"))
        survive = number(after.get("survive_to_breed"), 1.0)
        factor = number(after.get("breeding_relative_to_residents"), 1.0)
        count = 0
        for female, key in ((True, "females"), (False, "males")):
            age = number(who.get("age"), self.herd.life.first[female])
            for _ in range(number(who.get(key), 0)):
                animal = self.take_from_donor(release["donor"], female, age, rng)
                if animal is None:
                    self.log.append((year, "donor empty", release["donor"], None))
                    continue
                count += 1
                flows["released"] += 1
                if rng.random() >= survive:
                    flows["lost"] += 1
                    continue
                loan = number(release.get("loan_years"))
                animal.leaves = None if loan is None else year + loan
                self.join(animal, factor)
        self.tally["released"] += count
        self.tally["cost"] += count * number(cost.get("each_animal"), 0.0)
        self.tally["cost"] += number(cost.get("each_event"), 0.0)

    def take_from_donor(self, donor, female, age, rng):
        """Return the animal that the donor loses, or None if it has none to give."""
        source = self.sources.names.index(donor)
        if donor not in self.donor_herds:
            if self.donor_left[donor] < 1:
                return None
            self.donor_left[donor] -= 1
            return self.fresh(female, age, source, rng)
        herd = self.donor_herds[donor][0]
        there = [a for a in herd.animals if a.female == female]
        if not there:
            return None
        nearest = min(abs(a.age - age) for a in there)
        taken = rng.choice([a for a in there if abs(a.age - age) == nearest])
        herd.animals.remove(taken)
        return taken if herd.genetic else self.fresh(female, age, source, rng)

    # --- 4. breeding --------------------------------------------------------------------------

    def breed(self, herd, sky, rng):
        """Return this year's young."""
        life = herd.life
        females = [a for a in herd.adults() if a.female]
        males = [a for a in herd.adults() if not a.female]
        if not males:
            return []
        breeding = []
        for female in females:
            times = math.exp(-herd.young_cost / 2.0 * max(0.0, female.inbreeding))
            times *= sky["young"] / herd.start_young
            chance = life.share * female.factor * (times if life.counts else 1.0)
            if rng.random() < chance:  # a chance above 1 is as good as 1
                breeding.append((female, times))
        rng.shuffle(breeding)
        young = []
        for female, times, father_of_one in self.mate(herd, breeding, males, rng):
            if life.counts:
                sizes, chances = zip(*life.counts, strict=True)
                size = rng.choices(sizes, chances)[0]
            else:
                size = poisson(rng, life.young * times)
            for _ in range(size):
                father = father_of_one()
                if father is not None:
                    young.append(self.born(herd, female, father, rng))
        return young

    def mate(self, herd, breeding, males, rng):
        """Return (female, her young's factor, a function that names a young's father)."""
        life = herd.life
        if life.form == "pairs":
            return self.pair_up(herd, breeding, males, rng)
        if life.unequal > 0.0:
            shape = life.unequal**-2
            weights = [rng.gammavariate(shape, 1.0 / shape) * a.factor for a in males]
        else:
            weights = [a.factor for a in males]
        if sum(weights) <= 0.0:  # all gamma draws too small for a double
            weights = [float(a.factor > 0.0) for a in males]
        if life.form == "open":
            return [(f, t, lambda: choose(rng, males, weights)) for f, t in breeding]
        places = rng.sample(range(len(males)), max(1, half_up(life.holders * len(males))))
        holders, theirs = [males[k] for k in places], [weights[k] for k in places]
        matings = []
        for female, times in breeding:
            holder = choose(rng, holders, theirs)
            matings.append((female, times, lambda holder=holder: holder))
        return matings

    def pair_up(self, herd, breeding, males, rng):
        here = {a.number for a in herd.animals}
        free, matings = list(males), []
        if herd.life.together:
            free = [a for a in males if a.mate is None or a.mate.number not in here]
        for female, times in breeding:
            mate = female.mate if herd.life.together else None
            if mate is None or mate.number not in here:
                mate = choose(rng, free, [a.factor for a in free])
                if mate is None:
                    continue
                free.remove(mate)
                if herd.life.together:
                    female.mate, mate.mate = mate, female
            matings.append((female, times, lambda mate=mate: mate))
        return matings

    def born(self, herd, mother, father, rng):
        mother.bred = father.bred = True
        animal = self.new_animal(rng.random() < herd.life.females, 0, herd.source)
        if herd.genetic:
            animal.mother, animal.father = mother, father
            animal.inbreeding = self.kinship(mother, father)
            animal.copies = [self.gamete(mother, rng), self.gamete(father, rng)]
        return animal

    # --- 5. survival --------------------------------------------------------------------------

    def first_year_factor(self, herd, animal):
        """Return what multiplies first-year survival (later: trait, load loci, mixing cost)."""
        cost = math.exp(-herd.first_year_cost / 2.0 * max(0.0, animal.inbreeding))
        factor = cost / herd.start_cost
        if self.loci and herd.source == 0:
            factor *= self.tracked_fitness(animal) / herd.start_tracked
        return factor

    def survive(self, herd, young, sky, first_year_times, flows):
        """Leave in the herd the animals that live through the year, young ones at the end."""
        rng, living = flows["rng"], []
        for animal in herd.animals:
            kind = herd.life.class_of(animal)
            if animal.waiting or rng.random() < sky[kind]:
                living.append(animal)
            else:
                flows[f"{kind}_deaths"] += 1
        for animal in young:
            chance = sky["first_year"] * first_year_times * self.first_year_factor(herd, animal)
            if chance > 1.0:
                flows["capped"] += 1
            if rng.random() < chance:
                living.append(animal)
            else:
                flows["first_year_deaths"] += 1
        herd.animals = living

    # --- 6. ageing and crowding ---------------------------------------------------------------

    def grow_older(self, herd, year, capacity_times, flows):
        staying = []
        for animal in herd.animals:
            animal.age += 1
            if animal.age > herd.life.last:
                flows["old"] += 1
            elif animal.leaves is not None and animal.leaves <= year + 1:
                flows["loan_over"] += 1
                self.give_back(animal)
            else:
                staying.append(animal)
                if animal.age >= herd.life.first[animal.female]:
                    animal.waiting = False
        herd.animals = staying
        if herd.capacity is not None and not herd.life.gradual:
            adults = herd.adults()
            excess = len(adults) - math.floor(herd.capacity * capacity_times)
            if excess > 0:
                gone = {a.number for a in flows["rng"].sample(adults, excess)}
                herd.animals = [a for a in herd.animals if a.number not in gone]
                flows["crowded"] += excess

    def give_back(self, animal):
        name = self.sources.names[animal.source]
        if name in self.donor_herds:
            animal.leaves, animal.factor, animal.waiting = None, 1.0, False
            self.returning.append((name, animal))
        elif name in self.donor_left:
            self.donor_left[name] += 1

    def crowd_factor(self, herd, adults, capacity_times):
        """Return the times on first-year survival of gradual crowding."""
        if herd.capacity is None or not herd.life.gradual or herd.growth <= 1.0:
            return 1.0
        return 1.0 / (1.0 + (herd.growth - 1.0) * adults / (herd.capacity * capacity_times))

    # --- a year -------------------------------------------------------------------------------

    def live(self, herd, year, start_adults, actions):
        """Weather, breeding, survival, age and crowding of one herd; return what happened."""
        name = herd.name
        keys = ("born", "capped", "old", "loan_over", "crowded")
        flows = dict.fromkeys(keys, 0) | {f"{kind}_deaths": 0 for kind in CLASSES}
        sky, die_offs = herd.life.weather(self.stream("weather", year, name))
        if herd is self.herd:
            self.log += [(year, "die-off", which, None) for which in die_offs]
        young = self.breed(herd, sky, self.stream("breeding", year, name))
        flows["born"] = len(young)
        if herd is self.herd:
            costs = [math.exp(-herd.first_year_cost / 2 * max(0.0, a.inbreeding)) for a in young]
            self.relative = sum(costs) / len(costs) if costs else None
        capacity_times, first_year_times = actions
        first_year_times *= self.crowd_factor(herd, start_adults, capacity_times)
        flows["rng"] = self.stream("survival", year, name)
        self.survive(herd, young, sky, first_year_times, flows)
        self.grow_older(herd, year, capacity_times, flows)
        del flows["rng"]
        return flows

    def go(self):
        """Live all years; return self."""
        for year in range(self.start, self.start + self.horizon + 1):
            row = self.census(year)
            if year == self.start + self.horizon:
                break
            self.rules(year, row)
            before, self.returning = row["adults"], []
            flows = dict.fromkeys(("released", "lost", "steady"), 0)
            herds = [herd for pair in self.donor_herds.values() for herd in pair]
            counted = [len(herd.adults()) for herd in herds]
            self.releases(year, flows)
            flows |= self.live(self.herd, year, before, self.actions(year))
            for herd, adults in zip(herds, counted, strict=True):
                self.live(herd, year, adults, (1.0, 1.0))
            for name, animal in self.returning:
                self.donor_herds[name][0].animals.append(animal)
            row["flows"] = flows
        return self


def run(case, plan="No releases", replicates=1, seed=1, genetics=True, sources=None):
    """Return finished `Run`s of one plan.

    `genetics=False` leaves out genes and pedigree; `sources` may carry marker frequencies (`points`
    with their `chances`, and `c`) other than this engine's own.
    """
    sources = sources or Sources(case)
    return [Run(case, plan, (seed, k), sources, genetics).go() for k in range(replicates)]


def column(runs, measure, step):
    """Return a measure's values at a census (index from the start), one a run."""
    return [each.years[step].get(measure) for each in runs]
