"""The expected depth: the average course of one plan, as closed recursions.

Axes: n parameter draws, D donors, G steps. Order in a step: rules, releases join the breeders,
breeding, selection among the young, mutation, drift. Sources stand in the functions of `theory`.
"""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import dataclass, replace

import numpy as np
from numpy.typing import NDArray

from rescue_planner.projection import trait_course
from rescue_planner.projection.growth import Effects, Growth, yearly_growth
from rescue_planner.projection.rules import RuleBook, act, open_book
from rescue_planner.projection.schedule import nobody
from rescue_planner.projection.setup import Setup
from rescue_planner.projection.trait_course import Mixing, TraitState
from rescue_planner.theory import diversity as div
from rescue_planner.theory import flow, inbreeding, selection
from rescue_planner.theory.arrays import total
from rescue_planner.theory.trait import sustainable_shift

FloatArray = NDArray[np.float64]
Take = Callable[[int, dict[str, FloatArray]], None]


@dataclass(frozen=True, slots=True, eq=False)
class Step:
    """What one step used: shares of mothers, fathers and gene copies (n, D), Ne (n,).

    `newcomers` (n,) counts those that bred. A step is `still` where nobody came in any column:
    what flow would leave as it is need not be computed.
    """

    mothers: FloatArray
    fathers: FloatArray
    shares: FloatArray
    newcomers: FloatArray
    ne: FloatArray
    still: bool


@dataclass(frozen=True, slots=True, eq=False)
class Course:
    """One plan's average course.

    `values` maps a measure to (n, G + 1). At each t, `between` (n, D) and `donors` (n, D, D) are
    the diversities, and `capped` (n,) marks first-year survival that met 1.
    """

    setup: Setup
    values: dict[str, FloatArray]
    steps: tuple[Step, ...]
    between: tuple[FloatArray, ...]
    donors: tuple[FloatArray, ...]
    capped: tuple[NDArray[np.bool_], ...]
    book: RuleBook


@dataclass(slots=True, eq=False)
class _State:
    """The state at one t; arrays are (n,), between and ancestry (n, D), donors (n, D, D)."""

    h: FloatArray
    between: FloatArray
    donors: FloatArray
    ancestry: FloatArray
    relative_survival: FloatArray
    adults: FloatArray
    loci: list[FloatArray]
    trait: TraitState | None
    released: FloatArray
    migrants: FloatArray
    cost: FloatArray


class _Walk:
    """Carries one plan from t = 0 to G; the only mutable thing in this module.

    Each t's measures are handed to `take`, and kept only by who takes them: many draws then work
    in the same small memory from step to step. The rest of the course is kept on request.
    """

    def __init__(self, setup: Setup, take: Take, keep: bool) -> None:
        self.take, self.keep = take, keep
        self.setup = setup
        self.nobody = nobody(setup.draws, len(setup.donors))
        self.state = self._start()
        self.book = open_book(setup)
        self.effects_at_start = self._effects(0)
        self.growth: Growth | None = None
        self._grow(0)
        self.row: dict[str, FloatArray] = {}
        self.steps: list[Step] = []
        self.between: list[FloatArray] = []
        self.donors: list[FloatArray] = []
        self.capped: list[NDArray[np.bool_]] = []

    def run(self) -> None:
        """Walk all steps."""
        for t in range(self.setup.steps + 1):
            self._record(t)
            if t < self.setup.steps:
                self._advance(t)

    def _start(self) -> _State:
        given = self.setup
        h = given.distances.recipient
        zero = np.zeros(given.draws)
        f = inbreeding.inbreeding(h, given.h_reference)
        return _State(
            h=h,
            between=given.distances.between,
            donors=given.distances.donors,
            ancestry=given.ancestry,
            relative_survival=np.asarray(inbreeding.survival_factor(f, given.lethal_first_year)),
            adults=given.adults,
            loci=[locus.frequency for locus in given.loci],
            trait=None if given.trait is None else trait_course.trait_start(given.trait),
            released=zero,
            migrants=zero,
            cost=zero,
        )

    # what is read at t

    def _lag(self, t: int) -> FloatArray:
        given, state = self.setup, self.state
        assert given.trait is not None
        assert state.trait is not None
        years = t * given.generation_years
        return trait_course.optimum(given.trait, years, given.start_year) - state.trait.mean

    def _trait_fitness(self, lag: FloatArray | float) -> FloatArray:
        given, state = self.setup.trait, self.state.trait
        if given is None or state is None:
            return np.ones(self.setup.draws)
        return trait_course.fitness(given, state, lag)

    def _effects(self, t: int) -> Effects:
        given, state = self.setup, self.state
        lag: FloatArray | float = 0.0 if given.trait is None else self._lag(t)
        f = inbreeding.inbreeding(state.h, given.h_reference)
        return Effects(
            inbreeding=state.relative_survival,
            trait=self._trait_fitness(lag),
            actions=given.schedule.first_year_times[t],
            young=np.asarray(inbreeding.survival_factor(f, given.lethal_young)),
        )

    def _grow(self, t: int) -> None:
        """Take the growth at t, as it is (row 0) and with the trait at its optimum (row 1).

        Both come from one call, and each t is computed once: the root finding costs more than
        all the rest of a step.
        """
        life = self.setup.life
        if life is None:
            return
        start = self.effects_at_start
        if not life.here_now:
            start = replace(start, trait=self._trait_fitness(0.0))
        now = self._effects(t)
        both = replace(now, trait=np.stack([now.trait, self._trait_fitness(0.0)]))
        self.growth = yearly_growth(life, both, start)

    def _record(self, t: int) -> None:
        given, state = self.setup, self.state
        row: dict[str, FloatArray] = {}
        capped = np.zeros(given.draws, dtype=bool)
        if given.life is not None:
            row["adults"] = state.adults
        row["gene_diversity"] = state.h
        row["gene_diversity_kept"] = state.h / given.distances.recipient
        row["inbreeding"] = np.asarray(inbreeding.inbreeding(state.h, given.h_reference))
        row["relative_first_year_survival"] = state.relative_survival
        row["donor_ancestry"] = total(state.ancestry)
        for i, name in enumerate(given.donors):
            row[f"donor_ancestry:{name}"] = state.ancestry[:, i]
        if self.growth is not None:
            row["yearly_growth"], capped = self.growth.rate[0], self.growth.capped[0]
        self._record_trait(t, row)
        for locus, frequency in zip(given.loci, state.loci, strict=True):
            row[f"allele_frequency:{locus.name}"] = frequency
        row["released"] = state.released
        row["effective_migrants"] = state.migrants
        row["cost"] = state.cost
        self.row = row
        self.take(t, row)
        if self.keep:
            self.between.append(state.between)
            self.donors.append(state.donors)
            self.capped.append(capped)

    def _record_trait(self, t: int, row: dict[str, FloatArray]) -> None:
        given, state = self.setup.trait, self.state.trait
        if given is None or state is None:
            return
        row["additive_variance_kept"] = state.additive / given.heritability
        row["trait_mean"] = state.mean
        row["trait_lag"] = self._lag(t)
        if self.growth is not None:
            with np.errstate(divide="ignore"):  # no growth at all: no shift can be followed
                log_growth = np.log(self.growth.rate[1])
            r_max = np.maximum(0.0, self.setup.generation_years * log_growth)
            row["sustainable_shift"] = np.asarray(
                sustainable_shift(
                    state.additive, trait_course.environmental(given), given.width2, r_max
                )
            )

    # the step from t to t + 1

    def _size_factor(self) -> FloatArray | None:
        if not self.setup.size_follows_adults:
            return None
        return self.state.adults / self.setup.adults

    def _flow(self, t: int) -> Step:
        given, plan = self.setup, self.setup.schedule
        coming = plan.arrivals[t] or self.nobody
        females, males = coming.females, coming.males
        if self.book.stopped.any():
            going = self._going()[:, None]
            females, males = females * going, males * going
        factor = self._size_factor()
        if factor is None:
            breeders_f, breeders_m = given.females, given.males
            ne = given.size * plan.size_times[t]
        else:
            breeders_f = np.maximum(given.females * factor, 0.5)
            breeders_m = np.maximum(given.males * factor, 0.5)
            ne = np.maximum(given.size * factor, 1.0)
        newcomers = total(females + males)
        if not newcomers.any():
            return Step(females, males, females, newcomers, ne, still=True)
        mothers = np.asarray(flow.parent_shares(females, breeders_f))
        fathers = np.asarray(flow.parent_shares(males, breeders_m))
        shares = np.asarray(flow.gene_copy_shares(mothers, fathers))
        return Step(mothers, fathers, shares, newcomers, ne, still=False)

    def _going(self) -> FloatArray:
        """1 where releases go on, 0 where a rule has stopped them, (n,)."""
        return (~self.book.stopped).astype(np.float64)

    def _advance(self, t: int) -> None:
        given, state, plan = self.setup, self.state, self.setup.schedule
        act(self.book, given, t, self.row)
        step = self._flow(t)
        if self.keep:
            self.steps.append(step)
        relative = self._young(step)
        h_pool = state.h
        if not step.still:
            h_pool = np.asarray(div.pooled(state.h, state.between, state.donors, step.shares))
        self._advance_trait(t, step, h_pool)
        self._advance_loci(step)
        state.h = np.asarray(div.drifted(h_pool, step.ne))
        if not step.still:
            state.between = np.asarray(div.between_after(state.between, state.donors, step.shares))
            state.ancestry = np.asarray(flow.ancestry_after(state.ancestry, step.shares))
        state.donors = self._drifted_donors()
        state.relative_survival = relative
        going, coming = self._going(), plan.arrivals[t] or self.nobody
        state.released = state.released + coming.animals * going
        state.migrants = state.migrants + step.newcomers
        state.cost = state.cost + coming.cost * going + plan.action_cost[t]
        self._grow(t + 1)
        if self.growth is not None:
            self._advance_adults(t, coming.survivors * going, self.growth.rate[0])

    def _young(self, step: Step) -> FloatArray:
        given, state = self.setup, self.state
        if step.still:
            f = inbreeding.inbreeding(state.h, given.h_reference)
            return np.asarray(inbreeding.survival_factor(f, given.lethal_first_year))
        n, d = state.between.shape
        whole = np.moveaxis(np.empty((d + 1, d + 1, n)), -1, 0)
        whole[:, 0, 0] = state.h
        whole[:, 0, 1:] = whole[:, 1:, 0] = state.between
        whole[:, 1:, 1:] = state.donors
        return np.asarray(
            inbreeding.young_survival(
                _with_residents(step.mothers),
                _with_residents(step.fathers),
                whole,
                given.h_reference,
                given.lethal_first_year,
            )
        )

    def _advance_trait(self, t: int, step: Step, h_pool: FloatArray) -> None:
        given, state = self.setup, self.state
        if given.trait is None or state.trait is None:
            return
        own = np.diagonal(state.donors, axis1=-2, axis2=-1)
        gain = np.asarray(div.diversity_from_mixing(h_pool, state.h, own, step.shares))
        mixing = Mixing(step.shares, gain, given.distances.recipient)
        years = t * given.generation_years
        best = trait_course.optimum(given.trait, years, given.start_year)
        state.trait = trait_course.next_trait(given.trait, state.trait, mixing, best, step.ne)

    def _advance_loci(self, step: Step) -> None:
        for i, locus in enumerate(self.setup.loci):
            mixed = self.state.loci[i]
            if not step.still:
                mixed = np.asarray(flow.mixed(mixed, locus.donor_frequency, step.shares))
            selected = selection.after_selection(mixed, locus.fitness)
            if locus.mutates:
                selected = selection.after_mutation(
                    selected, locus.mutation_to, locus.mutation_from
                )
            self.state.loci[i] = np.asarray(selected)

    def _drifted_donors(self) -> FloatArray:
        drifts = self.setup.donor_drifts
        if not drifts.any():
            return self.state.donors
        donors = self.state.donors.copy()
        for i in np.flatnonzero(drifts):
            donors[:, i, i] = div.drifted(donors[:, i, i], self.setup.donor_size[:, i])
        return donors

    def _advance_adults(self, t: int, survivors: FloatArray, rate: FloatArray) -> None:
        given, state = self.setup, self.state
        adults = (state.adults + survivors) * rate**given.generation_years
        if given.carrying_capacity is not None:
            adults = np.minimum(
                adults, given.carrying_capacity * given.schedule.capacity_times[t + 1]
            )
        state.adults = adults


def _with_residents(shares: FloatArray) -> FloatArray:
    """Put the residents' share before the donors': (n, D) -> (n, D + 1)."""
    n, d = shares.shape
    whole = np.empty((d + 1, n)).T
    whole[:, 0] = 1.0 - total(shares)
    whole[:, 1:] = shares
    return whole


def expected_course(setup: Setup) -> Course:
    """Return the average course of one plan.

    `setup.schedule` takes up the releases that rules add, so a setup serves one course.
    """
    rows: list[dict[str, FloatArray]] = []
    walk = _Walk(setup, lambda _t, row: rows.append(row), keep=True)
    walk.run()
    return Course(
        setup,
        {key: np.stack([row[key] for row in rows]).T for key in rows[0]},
        tuple(walk.steps),
        tuple(walk.between),
        tuple(walk.donors),
        tuple(walk.capped),
        walk.book,
    )


def expected_values(setup: Setup, take: Take) -> None:
    """Hand the measures of each t to `take`, (n,) each, and keep nothing."""
    _Walk(setup, take, keep=False).run()
