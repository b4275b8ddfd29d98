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


def _line_cross(name: str, what: str) -> Input:
    return Input(
        name,
        "ln fitness",
        f"Effect on the logarithm of fitness {what}, measured from the F2 generation.",
        at_least=-10,
        at_most=10,
        source="Lynch 1991, Evolution 45:622",
    )


class Locus(Part):
    """One locus whose allele is followed by name."""

    name: Name
    role: Annotated[
        Literal["locally adapted", "harmful", "resistance", "neutral"],
        Input("Role", "", "What the named allele is to the recipient; the words change no result."),
    ] = "neutral"
    fitness: Annotated[
        tuple[Quantity, Quantity, Quantity],
        Input(
            "Fitness of AA, Aa, aa",
            "relative",
            "Survival of the young of each genotype against one another, where the recipient "
            "lives; A is the named allele.",
            at_least=0,
            at_most=1e6,
        ),
    ] = Field(default_factory=lambda: (given(1), given(1), given(1)))
    frequency: Annotated[
        Quantity,
        Input(
            "Frequency in the recipient",
            "share of gene copies",
            "Share of the recipient’s gene copies at this locus that are the named allele.",
            at_least=0,
            at_most=1,
        ),
    ]
    donor_frequency: Annotated[
        FrozenMap[Quantity],
        Input(
            "Frequency in the donor",
            "share of gene copies",
            "Share of the donor’s gene copies at this locus that are the named allele; 0 if it "
            "lacks the allele.",
            at_least=0,
            at_most=1,
        ),
    ] = FrozenMap()
    mutation_to: Annotated[
        Quantity,
        _mutation(
            "Mutation to the allele",
            "The chance that a copy of another allele turns into the named one.",
        ),
    ] = _default(0)
    mutation_from: Annotated[
        Quantity,
        _mutation(
            "Mutation from the allele",
            "The chance that a copy of the named allele turns into another one.",
        ),
    ] = _default(0)


class MildSelection(Part):
    """The gamma distribution of selection against mild harmful alleles."""

    mean: Annotated[
        Quantity,
        Input(
            "Mean selection",
            "s",
            "Mean share of fitness that an animal with two copies of a mild harmful allele loses.",
            at_least=0,
            at_most=1,
        ),
    ]
    shape: Annotated[
        Quantity,
        Input(
            "Shape",
            "–",
            "Shape of the gamma distribution of that loss; below 1 most alleles are very mild.",
            above=0,
        ),
    ]


class Dominance(Part):
    """Dominance of harmful alleles."""

    mild: Annotated[
        Quantity,
        Input(
            "Dominance, mild",
            "h",
            "How much of the loss one copy of a mild allele causes already: 0 none, 0.5 half of "
            "it.",
            at_least=0,
            at_most=1,
        ),
    ] = _default(0.25)
    lethal: Annotated[
        Quantity,
        Input(
            "Dominance, lethal",
            "h",
            "How much of the loss one copy of a lethal allele causes already: 0 none, 0.5 half "
            "of it.",
            at_least=0,
            at_most=1,
        ),
    ] = _default(0.02)


class Load(Part):
    """Hidden harmful alleles, where the inbreeding cost is modelled by loci."""

    loci: Annotated[
        Quantity,
        Input(
            "Load loci",
            "loci",
            "Number of loci that can carry a harmful allele.",
            at_least=1,
            at_most=100_000,
            whole=True,
        ),
    ] = _default(400)
    from_lethals: Annotated[
        Quantity,
        Input(
            "Share from lethals",
            "share of the lethal equivalents",
            "Share of the inbreeding cost that comes from lethal alleles; mild ones cause the "
            "rest.",
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
            "Mean number of new harmful mutations in each newborn animal.",
            at_least=0,
            at_most=100,
        ),
    ] = _default(0)


class LineCross(Part):
    """Additive, dominance and epistatic effects of crossing on ln fitness."""

    a: Annotated[Quantity, _line_cross("Additive effect", "of alleles added up")] = _default(0)
    d: Annotated[
        Quantity, _line_cross("Dominance effect", "of having one allele of each population")
    ] = _default(0)
    aa: Annotated[
        Quantity,
        _line_cross(
            "Additive by additive effect",
            "of alleles at two loci that come from the same population",
        ),
    ] = _default(0)
    ad: Annotated[
        Quantity,
        _line_cross(
            "Additive by dominance effect",
            "of homozygotes at one locus together with heterozygotes at another",
        ),
    ] = _default(0)
    dd: Annotated[
        Quantity,
        _line_cross("Dominance by dominance effect", "of heterozygotes at two loci together"),
    ] = _default(0)


class IncompatiblePairs(Part):
    """Pairs of loci that do not go together in mixed animals."""

    count: Annotated[
        Quantity,
        Input(
            "Incompatible pairs",
            "pairs",
            "Number of pairs of loci at which a recipient’s and a donor’s allele do not go "
            "together.",
            at_least=0,
            at_most=1000,
            whole=True,
        ),
    ] = _default(0)
    loss: Annotated[
        Quantity,
        Input(
            "Loss per pair",
            "share of fitness",
            "Share of fitness lost by an animal that has two copies of both alleles of such a "
            "pair.",
            at_least=0,
            at_most=1,
        ),
    ] = _default(0)
    shape: Annotated[
        tuple[Quantity, Quantity],
        Input(
            "Shape",
            "share of the loss",
            "Share of that loss in animals with one copy at one of the two loci, and with one "
            "copy at both.",
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
            "Share of fitness lost by animals that carry two forms of a chromosome.",
            at_least=0,
            at_most=1,
        ),
    ] = _default(0)


class Genome(Part):
    """The simulated genome."""

    chromosomes: Annotated[
        Quantity,
        Input(
            "Chromosome pairs",
            "pairs",
            "Number of chromosome pairs of the simulated animals.",
            at_least=1,
            at_most=500,
            whole=True,
        ),
    ] = _default(20)
    morgans_each: Annotated[
        Quantity | None,
        Input(
            "Map length of each",
            "Morgans",
            "Length of each chromosome on the genetic map; left out, every locus is passed on by "
            "itself.",
            above=0,
            at_most=10,
        ),
    ] = None
    markers: Annotated[
        Quantity,
        Input(
            "Neutral markers",
            "loci",
            "Number of loci without effect from which diversity is read.",
            at_least=1,
            at_most=1_000_000,
            whole=True,
        ),
    ] = _default(200)


class OptimumJump(Part):
    """A sudden change of the best trait value."""

    year: Annotated[
        Quantity,
        Input(
            "Year of the jump",
            "year",
            "The year in which the best trait value changes at once.",
            whole=True,
        ),
    ]
    by: Annotated[
        Quantity,
        Input(
            "Size of the jump",
            "phenotypic SD",
            "How far the best trait value moves in that year; negative for downwards.",
        ),
    ]


class Trait(Part):
    """A trait that must follow its optimum; values in the recipient's phenotypic SD."""

    name: Annotated[str | None, Input("Trait", "", "What the trait is called.")] = None
    heritability: Annotated[
        Quantity,
        Input(
            "Heritability",
            "share of phenotypic variance",
            "Share of the variance between animals that is additive genetic, in the recipient at "
            "the start.",
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
        Quantity,
        Input(
            "Optimum at the start",
            "phenotypic SD",
            "The best trait value minus the recipient’s mean, at the start.",
        ),
    ] = _default(0)
    optimum_shift_per_year: Annotated[
        Quantity,
        Input(
            "Shift of the optimum",
            "phenotypic SD a year",
            "How far the best trait value moves each year; negative for downwards.",
        ),
    ] = _default(0)
    optimum_jump: OptimumJump | None = None
    mutational_variance: Annotated[
        Quantity,
        Input(
            "Mutational variance",
            "share of the environmental variance per generation",
            "Additive genetic variance that mutation adds in each generation.",
            at_least=0,
            at_most=1,
            published="about 0.001 (0.0001–0.01)",
            source="Lynch & Hill 1986, Evolution 40:915 (range from memory)",
        ),
    ] = _default(0.001)
    loci: Annotated[
        Quantity,
        Input(
            "Trait loci",
            "loci",
            "Number of loci of equal effect that make the trait.",
            at_least=1,
            at_most=10_000,
            whole=True,
        ),
    ] = _default(50)
    unit: Annotated[
        str | None,
        Input(
            "Unit of the trait",
            "",
            "The unit in which the trait is measured; it serves labels only.",
        ),
    ] = None
    phenotypic_sd: Annotated[
        Quantity | None,
        Input(
            "Phenotypic SD",
            "trait’s unit",
            "Standard deviation of the trait among the recipient’s animals; it serves labels only.",
            above=0,
        ),
    ] = None
    mean: Annotated[
        Quantity | None,
        Input(
            "Mean",
            "trait’s unit",
            "Mean of the trait in the recipient at the start; it serves labels only.",
        ),
    ] = None
