"""Inbreeding coefficient F and what it costs young animals.

F is measured against a reference population: F = 1 - H / H_reference. The cost uses lethal
equivalents, always given here *per diploid animal* (2B of the literature); the exponent holds half
of them. Sources: Morton, Crow & Muller 1956 (PNAS 42:855), Charlesworth & Charlesworth 1987, from
memory; Ralls, Ballou & Templeton 1988 (Conserv. Biol. 2:185).
"""

import numpy as np

from rescue_planner.theory.arrays import FloatArray, Numbers, floats
from rescue_planner.theory.size import retained


def inbreeding(h: Numbers, h_reference: Numbers) -> FloatArray:
    """Return F = 1 - H / H_reference; (...), below 0 where mixing raised H above the reference."""
    return 1.0 - floats(h) / floats(h_reference)


def inbreeding_after(ne: Numbers, generations: Numbers, start: Numbers = 0.0) -> FloatArray:
    """Return F after t generations of drift: 1 - (1 - F_0) (1 - 1/(2 Ne))^t.

    Parameters
    ----------
    ne : (...) array
        Constant effective size, animals, at least 0.5.
    generations : (...) array
        t, not negative.
    start : (...) array
        F_0.

    Returns
    -------
    (...) array
        F relative to the base of F_0. Source: Wright 1931.
    """
    return 1.0 - (1.0 - floats(start)) * retained(ne) ** floats(generations)


def survival_factor(f: Numbers, lethal_equivalents_diploid: Numbers) -> FloatArray:
    """Return exp(-(B/2) max(0, F)), survival relative to an animal that isn't inbred.

    Parameters
    ----------
    f : (...) array
        Inbreeding coefficient; below 0 there is no cost and no bonus.
    lethal_equivalents_diploid : (...) array
        B, lethal equivalents per *diploid* animal over the stage.

    Returns
    -------
    (...) array
        Factor, 0 to 1 for B at or above 0. Source: Morton, Crow & Muller 1956.
    """
    return np.exp(-0.5 * floats(lethal_equivalents_diploid) * np.maximum(0.0, floats(f)))


def young_survival(
    mother_shares: Numbers,
    father_shares: Numbers,
    diversity: Numbers,
    h_reference: Numbers,
    lethal_equivalents_diploid: Numbers,
) -> FloatArray:
    """Return mean relative survival of young whose parents come from several sources.

    sum_ij u_i v_j exp(-(B/2) max(0, 1 - H_ij / H_reference)): the mean of the factor, not the
    factor of the mean F, which is smaller (Jensen), most so in the first generation after a
    release.

    Parameters
    ----------
    mother_shares, father_shares : (..., S) array
        Share of mothers (fathers) from each source, residents first; each sums to 1.
    diversity : (..., S, S) array
        H_ij between sources before the step, symmetric; a source's own H on the diagonal.
    h_reference : (...) array
        Gene diversity at which F = 0.
    lethal_equivalents_diploid : (...) array
        B, lethal equivalents per *diploid* animal.

    Returns
    -------
    (...) array
        Relative survival, 0 to 1.
    """
    u, v, h = floats(mother_shares), floats(father_shares), floats(diversity)
    survival: FloatArray | float = 0.0
    # diversity is symmetric: a pair of sources counts once, with both ways to mate
    for i in range(u.shape[-1]):
        for j in range(i + 1):
            both = u[..., i] * v[..., j]
            if i != j:
                both = both + u[..., j] * v[..., i]
            f = inbreeding(h[..., i, j], h_reference)
            survival = survival + both * survival_factor(f, lethal_equivalents_diploid)
    return np.asarray(survival)[()]


def stage_split(f: Numbers, lethal_equivalents_diploid: Numbers, steps: Numbers) -> FloatArray:
    """Return the factor for each of `steps` equal steps of a stage that carries B as a whole.

    exp(-(B/2) max(0, F) / steps), so that the product over the stage is `survival_factor`. An equal
    split is an assumption. Shapes (...).
    """
    return survival_factor(f, floats(lethal_equivalents_diploid) / floats(steps))


def rescue_ratio(
    f_before: Numbers, f_after: Numbers, lethal_equivalents_diploid: Numbers
) -> FloatArray:
    """Return survival after over survival before: exp((B/2) (F_before - F_after)), F below 0 as 0.

    Shapes (...); B per *diploid* animal. Both F homogeneous: right after a release use
    `young_survival`.
    """
    fall: FloatArray = np.maximum(0.0, floats(f_before)) - np.maximum(0.0, floats(f_after))
    return np.exp(0.5 * floats(lethal_equivalents_diploid) * fall)


def generations_until_back(f_before: Numbers, f_after: Numbers, ne: Numbers) -> FloatArray:
    """Return generations until drift alone has raised F back to its value before the rescue.

    t = ln[(1 - F_before) / (1 - F_after)] / ln(1 - 1/(2 Ne)); no more newcomers, no purging.

    Parameters
    ----------
    f_before, f_after : (...) array
        F before and just after the rescue, both below 1.
    ne : (...) array
        Constant effective size, animals, above 0.5.

    Returns
    -------
    (...) array
        Generations; 0 where F did not fall.
    """
    ratio = np.log1p(-floats(f_before)) - np.log1p(-floats(f_after))
    generations: FloatArray = np.maximum(0.0, ratio / np.log(retained(ne)))
    return generations
