"""The population in trouble and the populations that could give animals."""

from __future__ import annotations

from typing import Annotated, Literal

from pydantic import Field, StrictBool

from rescue_planner.case.base import Name, Part, given
from rescue_planner.case.inputs import Input
from rescue_planner.case.life import InbreedingLoad, LifeCycle
from rescue_planner.case.quantity import FrozenMap, Quantity

Markers = Literal["microsatellites", "SNPs", "pedigree", "history"]
FstForm = Literal["hudson", "nei"]
YesNoUnknown = Literal["yes", "no", "unknown"]

GeneDiversity = Annotated[
    Quantity,
    Input(
        "Gene diversity",
        "probability, 0 to 1",
        "Expected heterozygosity: the chance that two gene copies drawn at random differ.",
        above=0,
        at_most=1,
        caution="Compare only values from the same markers and the same kind of estimate.",
    ),
]


class Recipient(Part):
    """The small, isolated population that may receive animals."""

    name: Name
    who_is_counted: Annotated[
        str | None,
        Input("Who is counted", "", "Which animals the numbers count, and when in the year."),
    ] = None
    adults: Annotated[
        Quantity,
        Input(
            "Adults",
            "animals",
            "Adults alive at one time, before breeding.",
            above=0,
            caution="A census is not the effective size; both are asked for.",
        ),
    ]
    adult_females: Annotated[
        Quantity | None,
        Input(
            "Adult females",
            "animals",
            "Females among the adults counted; left out, half of them.",
            at_least=0,
        ),
    ] = None
    breeding_females: Annotated[
        Quantity | None,
        Input(
            "Breeding females",
            "animals per generation",
            "Females that leave young in a generation; newcomers are measured against them. Left "
            "out, half of the adults.",
            at_least=0,
        ),
    ] = None
    breeding_males: Annotated[
        Quantity | None,
        Input(
            "Breeding males",
            "animals per generation",
            "Males that leave young in a generation; newcomers are measured against them. Left "
            "out, half of the adults.",
            at_least=0,
        ),
    ] = None
    effective_size: Annotated[
        Quantity,
        Input(
            "Effective size (Ne)",
            "animals per generation",
            "The size of an ideal population that loses diversity as fast as this one.",
            at_least=1,
            published="Ne is about 0.1 to 0.2 of the adults counted in many wild populations; "
            "0.10–0.11 on average over long counts",
            source="Frankham 1995, Genet. Res. 66:95 (192 estimates, 102 species); "
            "the range 0.1–0.2 from memory",
            caution="Per generation, not per breeding season. Never enter the census here.",
        ),
    ]
    effective_size_follows_adults: Annotated[
        StrictBool,
        Input(
            "Ne follows the adults",
            "",
            "Whether effective size rises and falls with the number of adults, instead of being "
            "held; it needs a life cycle.",
        ),
    ] = False
    gene_diversity: GeneDiversity
    reference_gene_diversity: Annotated[
        Quantity,
        Input(
            "Reference gene diversity",
            "probability, 0 to 1",
            "Gene diversity of the outbred state that inbreeding is measured against: the "
            "population before its decline, or a large one like it.",
            above=0,
            at_most=1,
            caution="Use the same markers as for the recipient.",
        ),
    ]
    markers: Annotated[
        Markers | None,
        Input("Markers", "", "What the gene diversities were measured or reckoned from."),
    ] = None
    carrying_capacity: Annotated[
        Quantity | None,
        Input(
            "Carrying capacity",
            "adults",
            "The most adults that the place can hold; left out, numbers are not limited.",
            above=0,
        ),
    ] = None
    isolated_since: Annotated[
        Quantity | None,
        Input("Isolated since", "year", "The year since when no animal has come in.", whole=True),
    ] = None
    yearly_trend: Annotated[
        Quantity | None,
        Input(
            "Yearly trend",
            "times a year",
            "Counts of one year divided by counts of the year before; 1 is steady.",
            above=0,
            at_most=10,
        ),
    ] = None
    donor_ancestry_at_start: Annotated[
        FrozenMap[Quantity],
        Input(
            "Donor ancestry at the start",
            "share of gene copies",
            "Share of the recipient’s gene copies that already came from this donor.",
            at_least=0,
            at_most=1,
        ),
    ] = FrozenMap()


class Screen(Part):
    """Answers about a donor that bear on the risk of mixing; unknown is its own answer."""

    same_species: Annotated[
        YesNoUnknown | None,
        Input("Same species", "", "Whether donor and recipient are the same species."),
    ] = None
    fixed_chromosome_differences: Annotated[
        YesNoUnknown | None,
        Input(
            "Fixed chromosome differences",
            "",
            "Whether the chromosomes of the two populations always differ in number or form.",
        ),
    ] = None
    years_apart: Annotated[
        Quantity | None,
        Input(
            "Years apart",
            "years",
            "Years since the two populations last exchanged animals.",
            at_least=0,
            published="Risk of harm by mixing is called low below 500 years apart, if species, "
            "chromosomes and environment are the same",
            source="Frankham et al. 2011, Conserv. Biol. 25:465",
            caution="A screen, not a law: populations apart for much longer have been mixed "
            "without harm.",
        ),
    ] = None
    environment_differs: Annotated[
        Literal["no", "some", "much", "unknown"] | None,
        Input(
            "Environment differs",
            "",
            "How much the places differ in which the two populations live.",
        ),
    ] = None
    generations_apart: Annotated[
        Quantity | None,
        Input(
            "Generations apart",
            "generations",
            "Generations since the two populations last exchanged animals.",
            at_least=0,
        ),
    ] = None


class Donor(Part):
    """A population that could give animals."""

    name: Name
    kind: Annotated[
        Literal["wild", "captive"] | None,
        Input("Wild or captive", "", "Whether the donor lives in the wild or in human care."),
    ] = None
    adults: Annotated[
        Quantity | None,
        Input("Adults", "animals", "Adults of the donor alive before breeding.", above=0),
    ] = None
    effective_size: Annotated[
        Quantity | None,
        Input(
            "Effective size (Ne)",
            "animals per generation",
            "Effective size of the donor; used where the donor drifts.",
            at_least=1,
        ),
    ] = None
    drifts: Annotated[
        StrictBool,
        Input(
            "Drifts",
            "",
            "Whether the donor loses gene diversity by its own drift; otherwise it is held "
            "constant.",
        ),
    ] = False
    gene_diversity: GeneDiversity
    fst_to_recipient: Annotated[
        Quantity,
        Input(
            "FST to the recipient",
            "FST, 0 to below 1",
            "How far apart donor and recipient are genetically: 0 is one population.",
            at_least=0,
            below=1,
            caution="Say which form it is: Hudson’s, or Nei’s for two populations.",
        ),
    ]
    fst_form: Annotated[
        FstForm,
        Input(
            "Form of FST",
            "",
            "Whether the FST values of this donor are of Hudson’s form or Nei’s for two "
            "populations.",
        ),
    ] = "hudson"
    fst_to_donors: Annotated[
        FrozenMap[Quantity],
        Input(
            "FST to another donor",
            "FST, 0 to below 1",
            "How far apart two donors are genetically, in the form of FST chosen for this donor; "
            "left out, it is assumed.",
            at_least=0,
            below=1,
        ),
    ] = FrozenMap()
    most_removed_per_year: Annotated[
        Quantity | None,
        Input(
            "Most removed a year",
            "animals a year",
            "The most animals that the donor’s managers allow to be taken in one year.",
            at_least=0,
            caution="Removal limits are set by those responsible for the donor population.",
        ),
    ] = None
    fewest_left: Annotated[
        Quantity | None,
        Input(
            "Fewest left",
            "adults",
            "Adults that must stay in the donor, by the word of those responsible for it.",
            at_least=0,
        ),
    ] = None
    carrying_capacity: Annotated[
        Quantity | None,
        Input(
            "Carrying capacity",
            "adults",
            "The most adults that the donor’s place can hold.",
            above=0,
        ),
    ] = None
    life_cycle: Literal["same"] | LifeCycle | None = None
    lethal_equivalents_diploid: InbreedingLoad | None = None
    kinship_among_released: Annotated[
        Quantity | None,
        Input(
            "Kinship among released",
            "probability, −1 to 1",
            "Mean kinship among the animals released, where they are a known group.",
            at_least=-1,
            at_most=1,
        ),
    ] = None
    trait_mean_difference: Annotated[
        Quantity,
        Input(
            "Trait mean against the recipient’s",
            "phenotypic SD",
            "The donor’s mean of the trait minus the recipient’s.",
        ),
    ] = Field(default_factory=lambda: given(0))
    additive_variance: Annotated[
        Quantity | None,
        Input(
            "Additive variance",
            "recipient’s phenotypic variance at the start = 1",
            "The donor’s additive genetic variance of the trait; left out, it follows from the "
            "gene diversities.",
            at_least=0,
        ),
    ] = None
    screen: Screen | None = None
    disease_status: Annotated[
        str | None,
        Input(
            "Disease status",
            "",
            "What is known of the donor’s health; the projection does not use it.",
        ),
    ] = None
