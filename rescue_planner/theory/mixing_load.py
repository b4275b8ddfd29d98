"""What crossing and gene flow do to the load: heterosis, its halving, and the load let in.

Frequencies q, selection s and dominance h of harmful alleles as in `load`; loads are losses of log
fitness, loci on the last axis. Sources: Falconer & Mackay 1996 chapter 14; Whitlock, Ingvarsson &
Hatfield 2000 (Heredity 84:452), from memory; the identities are derived.
"""

from typing import NamedTuple

from rescue_planner.theory.arrays import FloatArray, Numbers, floats, total
from rescue_planner.theory.load import Load, population_load


class CrossLoads(NamedTuple):
    """Realised load of two populations and their crosses, each (...), losses of log fitness.

    `f2` holds for every later generation of random mating without selection. `backcross` is the
    F1 mated to the first parent.
    """

    first: FloatArray
    second: FloatArray
    f1: FloatArray
    f2: FloatArray
    backcross: FloatArray


def _between(q_one: Numbers, q_two: Numbers, s: Numbers, h: Numbers) -> FloatArray:
    one, two, h_ = floats(q_one), floats(q_two), floats(h)
    both = one * two
    mixed = one * (1.0 - two) + two * (1.0 - one)
    return total(floats(s) * (both + mixed * h_))


def cross_loads(q_one: Numbers, q_two: Numbers, s: Numbers, h: Numbers) -> CrossLoads:
    """Return the load of both parents, F1, F2 and the backcross to the first parent.

    Parameters
    ----------
    q_one, q_two : (..., L) array
        Frequencies of the harmful alleles in the two populations, each random-mating.
    s, h : (..., L) array
        Selection against the homozygote, dominance.

    Returns
    -------
    CrossLoads
        Each (...). Free of linkage: loads add over loci.
    """
    pool = 0.5 * (floats(q_one) + floats(q_two))
    return CrossLoads(
        _between(q_one, q_one, s, h),
        _between(q_two, q_two, s, h),
        _between(q_one, q_two, s, h),
        _between(pool, pool, s, h),
        _between(pool, q_one, s, h),
    )


def heterosis(q_one: Numbers, q_two: Numbers, s: Numbers, h: Numbers) -> FloatArray:
    """Return the gain in log fitness of F1 over the parents' mean.

    sum (q_1 - q_2)^2 s (1/2 - h). Half of it is left in the F2 and after, and in a backcross
    against the mean weighted by ancestry. Shapes as in `cross_loads`; (...).
    """
    apart = floats(q_one) - floats(q_two)
    return total(apart**2 * floats(s) * (0.5 - floats(h)))


def mixed_load(
    q_recipient: Numbers, q_donor: Numbers, s: Numbers, h: Numbers, ancestry: Numbers
) -> Load:
    """Return the load of a recipient once donor ancestry has mixed in and mating is random.

    From the mixed frequencies (1 - a) q_r + a q_d; the masked part equals
    (1-a) B_r + a B_d + a (1-a) sum s (1-2h) (q_r - q_d)^2.

    Parameters
    ----------
    q_recipient, q_donor : (..., L) array
        Frequencies of the harmful alleles before.
    s, h : (..., L) array
        Selection against the homozygote, dominance.
    ancestry : (...) array
        a, donor ancestry, 0 to 1.

    Returns
    -------
    Load
        Each (...). Realised load falls at first and masked load rises: the load is hidden, not
        gone, and comes back if the recipient stays small.
    """
    a = floats(ancestry)[..., None]
    return population_load((1.0 - a) * floats(q_recipient) + a * floats(q_donor), s, h)
