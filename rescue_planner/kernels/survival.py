"""Survival, ageing, crowding, and the young that stay take their slots."""

from __future__ import annotations

import math

from rescue_planner.kernels.animals import give_weight, release_slot, take_slot
from rescue_planner.kernels.draws import shuffle
from rescue_planner.kernels.genomes import fill_mask, pass_on
from rescue_planner.kernels.herd import (
    AGE,
    DAM,
    DIED,
    DONE,
    FIRST_FEMALE,
    FULL,
    GRADUAL,
    KEPT,
    LAST_AGE,
    LIVING,
    REMOVED,
    SEX,
    SIRE,
    TOP,
    WAITS,
    WEATHER_SURVIVAL,
    YEAR_CAPACITY,
    YOUNG_LIVED,
    YOUNG_SEX,
    Herd,
    Plan,
)
from rescue_planner.kernels.inner import inner
from rescue_planner.kernels.relatives import add_young
from rescue_planner.kernels.streams import CROWDING, DEATH, GAMETES, YOUNG, uniform


@inner
def live_on(plan: Plan, herd: Herd) -> int:
    """Let animals live or die and grow older; return how many of the order stay.

    Those that stay move to the front of the order, those that are gone to `list_a`, from its
    start; their slots stay taken, since young may be theirs. One number is drawn for every
    animal; released ones that wait for their first breeding age cannot die by it.
    """
    kept, gone = 0, 0
    last = int(plan.rates[0, LAST_AGE])
    for at in range(herd.number[LIVING]):
        slot = herd.order[at]
        first = int(plan.rates[0, FIRST_FEMALE + herd.who[SEX, slot]])
        row = WEATHER_SURVIVAL + (2 if herd.who[AGE, slot] >= first else 1)
        dies = uniform(herd.streams, DEATH) >= herd.weather[row]
        if herd.who[WAITS, slot] == 1:
            dies = False
        herd.who[AGE, slot] += 1
        if herd.who[AGE, slot] >= first:
            herd.who[WAITS, slot] = 0
        if dies or herd.who[AGE, slot] > last:
            herd.list_a[gone] = slot
            gone += 1
        else:
            herd.order[kept] = slot
            kept += 1
    herd.number[DIED] += gone
    herd.number[LIVING] = kept
    return gone


@inner
def crowd(plan: Plan, herd: Herd, year: int, gone: int) -> int:
    """Remove adults above the ceiling at random, new ones included; return how many are gone.

    Young that lived count where their sex breeds at age 1; they stand in the list as -1 - i.
    """
    capacity = plan.yearly[YEAR_CAPACITY, year]
    if plan.rates[0, GRADUAL] == 1.0 or math.isinf(capacity):
        return gone
    adults = 0
    for at in range(herd.number[LIVING]):
        slot = herd.order[at]
        if herd.who[AGE, slot] >= int(plan.rates[0, FIRST_FEMALE + herd.who[SEX, slot]]):
            herd.list_b[adults] = slot
            adults += 1
    for i in range(herd.number[YOUNG_LIVED]):
        if plan.rates[0, FIRST_FEMALE + herd.young[YOUNG_SEX, i]] <= 1.0:
            if adults == herd.list_b.size:
                return -1
            herd.list_b[adults] = -1 - i
            adults += 1
    excess = adults - math.floor(capacity)
    if excess <= 0:
        return gone
    shuffle(herd.streams, CROWDING, herd.list_b, adults)
    for at in range(excess):
        here = herd.list_b[at]
        if here < 0:
            herd.young[KEPT, -1 - here] = 0
        else:
            herd.who[AGE, here] = -1
    herd.number[REMOVED] += excess
    kept = 0
    for at in range(herd.number[LIVING]):
        slot = herd.order[at]
        if herd.who[AGE, slot] < 0:
            herd.list_a[gone] = slot
            gone += 1
        else:
            herd.order[kept] = slot
            kept += 1
    herd.number[LIVING] = kept
    return gone


@inner
def settle(plan: Plan, herd: Herd) -> int:
    """Give each young that stays a slot, its genome and its row of kinship."""
    for i in range(herd.number[YOUNG_LIVED]):
        if herd.young[KEPT, i] == 0:
            continue
        slot = take_slot(herd, herd.young[YOUNG_SEX, i], 1)
        if slot < 0:
            return FULL
        give_weight(plan, herd, YOUNG, slot)
        for side in range(2):
            parent = herd.young[DAM if side == 0 else SIRE, i]
            fill_mask(herd.streams, GAMETES, plan.chromosomes, plan.ends, herd.mask)
            pass_on(herd.genome, parent, slot, side, herd.mask)
            herd.loci[slot, side] = herd.young_loci[i, side]
        add_young(herd.kin, herd.young[DAM, i], herd.young[SIRE, i], slot, herd.number[TOP])
    return DONE


@inner
def live_and_age(plan: Plan, herd: Herd, year: int) -> int:
    """Do a year's survival, ageing and crowding, and let the young join."""
    gone = crowd(plan, herd, year, live_on(plan, herd))
    if gone < 0 or settle(plan, herd) == FULL:
        return FULL
    for i in range(gone):
        release_slot(herd, herd.list_a[i])
    return DONE
