"""Gene diversity within and between the populations of a case, at the start."""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from rescue_planner.case.document import Case
from rescue_planner.case.population import Donor
from rescue_planner.case.quantity import Quantity
from rescue_planner.theory.diversity import between_from_fst, hudson_from_nei

FloatArray = NDArray[np.float64]
Read = Callable[[str, Quantity | float], FloatArray]


@dataclass(frozen=True, slots=True, eq=False)
class Distances:
    """Diversities at the start: recipient (n,), to donors (n, D), donors (n, D, D).

    `assumed` names the pairs of donors whose FST was not given.
    """

    recipient: FloatArray
    between: FloatArray
    donors: FloatArray
    assumed: tuple[tuple[str, str], ...]

    @property
    def matrix(self) -> FloatArray:
        """All diversities (n, D + 1, D + 1), the recipient first."""
        n, d = self.between.shape
        whole = np.empty((n, d + 1, d + 1))
        whole[:, 0, 0] = self.recipient
        whole[:, 0, 1:] = self.between
        whole[:, 1:, 0] = self.between
        whole[:, 1:, 1:] = self.donors
        return whole


def distances(case: Case, read: Read) -> Distances:
    """Return the diversities of `case`; `read` gives each input as (n,) values.

    FST is turned to Hudson's form. Where two donors' FST is not given, their diversity between
    is the larger of each one's means with the recipient or the other donor, as
    max((H_rd + H_re)/2, (H_d + H_e)/2).
    """
    recipient = read("recipient.gene_diversity", case.recipient.gene_diversity)
    n, count = recipient.size, len(case.donors)
    # a pair's draws lie side by side in memory: steps add whole columns
    between = np.zeros((count, n)).T
    donors = np.moveaxis(np.zeros((count, count, n)), -1, 0)
    for i, donor in enumerate(case.donors):
        own = read(f"donors[{i}].gene_diversity", donor.gene_diversity)
        donors[:, i, i] = own
        fst = _hudson(donor, read(f"donors[{i}].fst_to_recipient", donor.fst_to_recipient))
        between[:, i] = between_from_fst(recipient, own, fst)
    assumed = []
    for i in range(count):
        for j in range(i + 1, count):
            own_i, own_j = donors[:, i, i], donors[:, j, j]
            apart = _fst_between(case, i, j, read)
            if apart is None:
                assumed.append((case.donors[i].name, case.donors[j].name))
                value = np.maximum((between[:, i] + between[:, j]) / 2, (own_i + own_j) / 2)
            else:
                value = between_from_fst(own_i, own_j, apart)
            donors[:, i, j] = donors[:, j, i] = value
    return Distances(recipient, between, donors, tuple(assumed))


def _hudson(donor: Donor, fst: FloatArray) -> FloatArray:
    return np.asarray(hudson_from_nei(fst) if donor.fst_form == "nei" else fst)


def _fst_between(case: Case, i: int, j: int, read: Read) -> FloatArray | None:
    """Return the FST of two donors in Hudson's form, whichever of them states it."""
    for one, other in ((i, j), (j, i)):
        donor, name = case.donors[one], case.donors[other].name
        if name in donor.fst_to_donors:
            path = f"donors[{one}].fst_to_donors.{name}"
            return _hudson(donor, read(path, donor.fst_to_donors[name]))
    return None
