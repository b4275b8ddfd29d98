"""Tracked loci, hidden load, mixing cost, the genome and the trait."""

from __future__ import annotations

from typing import Annotated, Literal

from pydantic import Field

from rescue_planner.case.base import Name, Part, given
from rescue_planner.case.inputs import Input
from rescue_planner.case.quantity import FrozenMap, Quantity


def _default(value: float) -> Quantity:
    return Field(default_factory=lambda: given(value))


def _mutation(name: str, meaning: str) -> Input:
    return Input(name, "per gene copy and generation", meaning, at_least=0, at_most=1)


def _line_cross(name: str) -> Input:
    return Input(
        name,
        "ln fitness",
        "A line-cross effect on ln fitness, on the F2 scale.",
        at_least=-10,
        at_most=10,
        source="Lynch 1991, Evolution 45:622",
    )


class Locus(Part):
    """One locus whose allele is followed by name."""

    name: Name
    role: Literal["locally adapted", "harmful", "resistance", "neutral"] = "neutral"
    fitness: Annotated[
        tuple[Quantity, Quantity, Quantity],
        Input(
            "Fitness of AA, Aa, aa",
            "relative",
            "Relative viability of the three genotypes; A is the named allele.",
            at_least=0,
            at_most=1e6,
        ),
    ] = Field(default_factory=lambda: (given(1), given(1), given(1)))
    frequency: Annotated[
        Quantity,
        Input(
            "Frequency in the recipient",
            "share of gene copies",
            "Frequency of the named allele in the recipient.",
            at_least=0,
            at_most=1,
        ),
    ]
    donor_frequency: Annotated[
        FrozenMap[Quantity],
        Input(
            "Frequency in the donor",
            "share of gene copies",
            "Frequency of the named allele in the donor; 0 if it lacks the allele.",
            at_least=0,
            at_most=1,
        ),
    ] = FrozenMap()
    mutation_to: Annotated[
        Quantity, _mutation("Mutation to the allele", "Another allele turns into it.")
    ] = _default(0)
    mutation_from: Annotated[
        Quantity, _mutation("Mutation from the allele", "It turns into another allele.")
    ] = _default(0)


class MildSelection(Part):
    """The gamma distribution of selection against mild harmful alleles."""

    mean: Annotated[
        Quantity,
        Input("Mean selection", "s", "Mean loss of the homozygote.", at_least=0, at_most=1),
    ]
    shape: Annotated[Quantity, Input("Shape", "–", "Shape of the gamma distribution.", above=0)]


class Dominance(Part):
    """Dominance of harmful alleles."""

    mild: Annotated[
        Quantity, Input("Dominance, mild", "h", "h of mild alleles.", at_least=0, at_most=1)
    ] = _default(0.25)
    lethal: Annotated[
        Quantity, Input("Dominance, lethal", "h", "h of lethals.", at_least=0, at_most=1)
    ] = _default(0.02)


class Load(Part):
    """Hidden harmful alleles, where the inbreeding cost is modelled by loci."""

    loci: Annotated[
        Quantity, Input("Load loci", "loci", "Number.", at_least=1, at_most=100_000, whole=True)
    ] = _default(400)
    from_lethals: Annotated[
        Quantity,
        Input(
            "Share from lethals",
            "share of the lethal equivalents",
            "Share that lethal alleles cause.",
            at_least=0,
            at_most=1,
            published="about half of the viability load in fruit flies; little known for "
            "vertebrates",
            source="Simmons & Crow 1977, Annu. Rev. Genet. 11:49 (from memory)",
        ),
    ] = _default(0.4)
    mild_selection: MildSelection = MildSelection(mean=given(0.05), shape=given(0.5))
    dominance: Dominance = Dominance()
    mutations_per_genome: Annotated[
        Quantity,
        Input(
            "New harmful mutations",
            "per diploid genome and generation",
            "Number of new harmful mutations.",
            at_least=0,
            at_most=100,
        ),
    ] = _default(0)


class LineCross(Part):
    """Additive, dominance and epistatic effects of crossing on ln fitness."""

    a: Annotated[Quantity, _line_cross("Additive effect")] = _default(0)
    d: Annotated[Quantity, _line_cross("Dominance effect")] = _default(0)
    aa: Annotated[Quantity, _line_cross("Additive by additive effect")] = _default(0)
    ad: Annotated[Quantity, _line_cross("Additive by dominance effect")] = _default(0)
    dd: Annotated[Quantity, _line_cross("Dominance by dominance effect")] = _default(0)


class IncompatiblePairs(Part):
    """Pairs of loci that do not go together in mixed animals."""

    count: Annotated[
        Quantity,
        Input("Incompatible pairs", "pairs", "Number.", at_least=0, at_most=1000, whole=True),
    ] = _default(0)
    loss: Annotated[
        Quantity,
        Input(
            "Loss per pair",
            "share of fitness",
            "Loss of the double homozygote.",
            at_least=0,
            at_most=1,
        ),
    ] = _default(0)
    shape: Annotated[
        tuple[Quantity, Quantity],
        Input(
            "Shape",
            "share of the loss",
            "Loss with one and with two heterozygous loci.",
            at_least=0,
            at_most=1,
        ),
    ] = Field(default_factory=lambda: (given(0), given(0.5)))


class MixingCost(Part):
    """What mixing may cost."""

    line_cross: LineCross = LineCross()
    incompatible_pairs: IncompatiblePairs = IncompatiblePairs()
    chromosome_heterozygote_loss: Annotated[
        Quantity,
        Input(
            "Loss of chromosome heterozygotes",
            "share of fitness",
            "Loss in animals that carry two forms of a chromosome.",
            at_least=0,
            at_most=1,
        ),
    ] = _default(0)


class Genome(Part):
    """The simulated genome."""

    chromosomes: Annotated[
        Quantity, Input("Chromosome pairs", "pairs", "Number.", at_least=1, at_most=500, whole=True)
    ] = _default(20)
    morgans_each: Annotated[
        Quantity | None,
        Input("Map length of each", "Morgans", "Left out: all loci unlinked.", above=0, at_most=10),
    ] = None
    markers: Annotated[
        Quantity,
        Input("Neutral markers", "loci", "Number.", at_least=1, at_most=1_000_000, whole=True),
    ] = _default(200)


class OptimumJump(Part):
    """A sudden change of the best trait value."""

    year: Annotated[Quantity, Input("Year of the jump", "year", "When it comes.", whole=True)]
    by: Annotated[Quantity, Input("Size of the jump", "phenotypic SD", "How far it moves.")]


class Trait(Part):
    """A trait that must follow its optimum; values in the recipient's phenotypic SD."""

    name: str | None = None
    heritability: Annotated[
        Quantity,
        Input(
            "Heritability",
            "share of phenotypic variance",
            "Share of the variance that is additive genetic, in the recipient at the start.",
            at_least=0,
            at_most=1,
            published="0.25 (0.05–0.5) for life-history, 0.45 (0.2–0.7) for morphological traits",
            source="Mousseau & Roff 1987, Heredity 59:181 (from memory)",
        ),
    ]
    selection_width_sd: Annotated[
        Quantity,
        Input(
            "Width of selection",
            "phenotypic SD",
            "How far from the optimum fitness falls to 61 %; a larger width is weaker selection.",
            above=0,
            at_most=1000,
            published="about 3",
            source="from a median quadratic gradient of 0.10, Kingsolver et al. 2001, Am. Nat. "
            "157:245",
        ),
    ] = _default(3.0)
    optimum_at_start: Annotated[
        Quantity, Input("Optimum at the start", "phenotypic SD", "Best value minus the mean.")
    ] = _default(0)
    optimum_shift_per_year: Annotated[
        Quantity, Input("Shift of the optimum", "phenotypic SD a year", "How fast it moves.")
    ] = _default(0)
    optimum_jump: OptimumJump | None = None
    mutational_variance: Annotated[
        Quantity,
        Input(
            "Mutational variance",
            "share of the environmental variance per generation",
            "New additive variance by mutation.",
            at_least=0,
            at_most=1,
            published="about 0.001 (0.0001–0.01)",
            source="Lynch & Hill 1986, Evolution 40:915 (range from memory)",
        ),
    ] = _default(0.001)
    loci: Annotated[
        Quantity, Input("Trait loci", "loci", "Number.", at_least=1, at_most=10_000, whole=True)
    ] = _default(50)
    unit: str | None = None
    phenotypic_sd: Annotated[
        Quantity | None, Input("Phenotypic SD", "trait’s unit", "For labels only.", above=0)
    ] = None
    mean: Annotated[Quantity | None, Input("Mean", "trait’s unit", "For labels only.")] = None
