"""Rules, releases, steady flow and loans: who comes, who leaves, what the donor loses."""

from __future__ import annotations

import math

from rescue_planner.kernels.animals import draw_loci, give_weight, release_slot, take_slot
from rescue_planner.kernels.donors import take_from
from rescue_planner.kernels.draws import normal, poisson
from rescue_planner.kernels.genomes import make_founder
from rescue_planner.kernels.herd import (
    ARRIVED,
    COST_SO_FAR,
    DONE,
    FACTOR,
    FEMALE,
    FIRST_FEMALE,
    FLOW_DONOR,
    FLOW_FROM,
    FLOW_RATE,
    FLOW_UNTIL,
    FULL,
    LEAVES,
    LEFT,
    LET_AGE,
    LET_COST_EACH,
    LET_COST_EVENT,
    LET_DONOR,
    LET_FACTOR,
    LET_FEMALES,
    LET_LOAN,
    LET_SURVIVE,
    LET_YEAR,
    LIVING,
    LOST,
    MALE,
    ORIGIN,
    RELEASE_THEN,
    RELEASED,
    RULE_ABOVE,
    RULE_AT_MOST,
    RULE_BELOW,
    RULE_COLUMN,
    RULE_DELAY,
    RULE_EVERY,
    RULE_RELEASE,
    RULE_SD,
    RULE_SURVEYS,
    RULE_THEN,
    SHORT,
    STOP,
    STOP_YEAR,
    TOP,
    WAITS,
    YEAR_COST,
    Herd,
    Plan,
)
from rescue_planner.kernels.inner import inner
from rescue_planner.kernels.relatives import add_founder
from rescue_planner.kernels.streams import FLOW, RELEASE, SURVEY, uniform


@inner
def read_rules(plan: Plan, herd: Herd, year: int) -> None:
    """Let every rule look at the census as its survey sees it; stops first.

    One survey error is drawn for each rule and year, whether there is a survey or not. A rule acts
    where its condition has held `surveys` times running; then the count begins anew.
    """
    for rule in range(plan.rules.shape[0]):
        error = normal(herd.streams, SURVEY) * plan.rules[rule, RULE_SD]
        if year % int(plan.rules[rule, RULE_EVERY]) != 0:
            continue
        seen = herd.census[int(plan.rules[rule, RULE_COLUMN])] + error
        met = not math.isnan(seen)
        if not math.isnan(plan.rules[rule, RULE_ABOVE]):
            met = met and seen > plan.rules[rule, RULE_ABOVE]
        if not math.isnan(plan.rules[rule, RULE_BELOW]):
            met = met and seen < plan.rules[rule, RULE_BELOW]
        herd.acted[rule, 0] = herd.acted[rule, 0] + 1 if met else 0
    for then in (STOP, RELEASE_THEN):
        for rule in range(plan.rules.shape[0]):
            if int(plan.rules[rule, RULE_THEN]) == then:
                act(plan, herd, year, rule)


@inner
def act(plan: Plan, herd: Herd, year: int, rule: int) -> None:
    """Let one rule act where its condition has held long enough at a survey of this year."""
    if year % int(plan.rules[rule, RULE_EVERY]) != 0:
        return
    if herd.acted[rule, 0] < int(plan.rules[rule, RULE_SURVEYS]):
        return
    when = year + int(plan.rules[rule, RULE_DELAY])
    if int(plan.rules[rule, RULE_THEN]) == STOP:
        if herd.acted[rule, 1] == 0 and when < herd.due.shape[1]:
            herd.due[rule, when] += 1
        herd.acted[rule, 1] += 1
        herd.number[STOP_YEAR] = min(herd.number[STOP_YEAR], when)
        return
    if year >= herd.number[STOP_YEAR]:
        return
    herd.acted[rule, 0] = 0
    if herd.acted[rule, 1] < int(plan.rules[rule, RULE_AT_MOST]):
        herd.acted[rule, 1] += 1
        if when < herd.due.shape[1]:
            herd.due[rule, when] += 1


@inner
def end_loans(herd: Herd, year: int) -> None:
    """Take animals whose loan ends this year out of the herd, before breeding."""
    kept = 0
    for at in range(herd.number[LIVING]):
        slot = herd.order[at]
        if herd.who[LEAVES, slot] == year:
            release_slot(herd, slot)
            herd.number[LEFT] += 1
        else:
            herd.order[kept] = slot
            kept += 1
    herd.number[LIVING] = kept


@inner
def bring(plan: Plan, herd: Herd, k: int, donor: int, sex: int, age: int, factor: float) -> int:
    """Add one animal of a donor that will live to breed; return its slot, or -1."""
    slot = take_slot(herd, sex, age)
    if slot < 0:
        return -1
    herd.who[ORIGIN, slot] = donor + 1
    herd.who[WAITS, slot] = 1 if age < int(plan.rates[0, FIRST_FEMALE + sex]) else 0
    herd.traits[FACTOR, slot] = factor
    give_weight(plan, herd, k, slot)
    make_founder(herd.streams, k, herd.thresholds, donor + 1, plan.valid, herd.genome, slot)
    draw_loci(plan, herd, k, donor + 1, slot)
    add_founder(herd.kin, donor + 1, slot, herd.number[TOP], plan.own[donor + 1])
    herd.number[ARRIVED] += 1
    return slot


@inner
def let_go(plan: Plan, herd: Herd, year: int, row: int) -> int:
    """Carry out one release."""
    donor = int(plan.releases[row, LET_DONOR])
    age = int(plan.releases[row, LET_AGE])
    loan = int(plan.releases[row, LET_LOAN])
    herd.weather[COST_SO_FAR] += plan.releases[row, LET_COST_EVENT]
    for sex in (FEMALE, MALE):
        for _ in range(int(plan.releases[row, LET_FEMALES + sex])):
            if not take_from(plan, herd, donor, sex, age):
                herd.number[SHORT] += 1
                continue
            herd.number[RELEASED] += 1
            herd.weather[COST_SO_FAR] += plan.releases[row, LET_COST_EACH]
            if uniform(herd.streams, RELEASE) >= plan.releases[row, LET_SURVIVE]:
                herd.number[LOST] += 1
                continue
            slot = bring(plan, herd, RELEASE, donor, sex, age, plan.releases[row, LET_FACTOR])
            if slot < 0:
                return FULL
            if loan > 0:
                herd.who[LEAVES, slot] = year + loan
    return DONE


@inner
def flow_in(plan: Plan, herd: Herd, year: int) -> int:
    """Bring in the animals of steady flow: Poisson in number, each sex with chance one half.

    They are wanderers that leave their population anyway: the donor's numbers stay as they are.
    """
    for row in range(plan.steady.shape[0]):
        coming = poisson(herd.streams, FLOW, plan.steady[row, FLOW_RATE])
        if not plan.steady[row, FLOW_FROM] <= year < plan.steady[row, FLOW_UNTIL]:
            continue
        donor = int(plan.steady[row, FLOW_DONOR])
        for _ in range(coming):
            sex = FEMALE if uniform(herd.streams, FLOW) < 0.5 else MALE
            age = int(plan.rates[0, FIRST_FEMALE + sex])
            if bring(plan, herd, FLOW, donor, sex, age, 1.0) < 0:
                return FULL
    return DONE


@inner
def arrivals(plan: Plan, herd: Herd, year: int) -> int:
    """Do the year's rules, loans, releases and steady flow, and count their money."""
    read_rules(plan, herd, year)
    end_loans(herd, year)
    herd.weather[COST_SO_FAR] += plan.yearly[YEAR_COST, year]
    if year >= herd.number[STOP_YEAR]:
        return DONE
    for row in range(plan.releases.shape[0]):
        if plan.releases[row, LET_YEAR] == year and let_go(plan, herd, year, row) == FULL:
            return FULL
    for rule in range(plan.rules.shape[0]):
        if int(plan.rules[rule, RULE_THEN]) == RELEASE_THEN:
            for _ in range(herd.due[rule, year]):
                if let_go(plan, herd, year, int(plan.rules[rule, RULE_RELEASE])) == FULL:
                    return FULL
    return flow_in(plan, herd, year)
