"""Life cycle and inbreeding cost."""

from __future__ import annotations

from rescue_planner.case.document import Case
from rescue_planner.case.edits import Edit, set_value
from rescue_planner.case.paths import format_path
from rescue_planner.desk.case_page.section import Section, SectionPlan
from rescue_planner.desk.evidence import inbreeding_cost_in_words, lethal_source_in_words

MEASURED = (("here_now", "here and now, inbreeding and all"),
            ("unrelated_parents", "on young of unrelated parents"))  # fmt: skip
FORMS = (("pairs", "pairs"), ("harems", "harems"), ("open", "open: any male may be the father"))
CROWDING = (("ceiling", "ceiling"), ("gradual", "gradual"))
HOW = (("by_inbreeding", "by each animal’s inbreeding"), ("by_load_loci", "by load loci"))


def _life(section: Section, case: Case) -> None:
    life = case.life_cycle
    if life is None:
        section.line(lambda _: "No life cycle entered: numbers of animals are not projected.")
        section.line(lambda _: "A life cycle added here begins with guesses, marked as such.")
        section.buttons(("Add a life cycle", _new_life))
        return
    at = "life_cycle"
    section.numbers(
        f"{at}.first_breeding_age.female",
        f"{at}.first_breeding_age.male",
        f"{at}.last_age",
        f"{at}.yearly_survival.first_year",
        f"{at}.yearly_survival.subadult",
        f"{at}.yearly_survival.adult",
    )
    section.choice(f"{at}.survival_measured", "First-year survival was measured", MEASURED)
    section.number(f"{at}.share_of_females_breeding")
    counts = life.young_per_breeding_female.counts
    if counts is None:
        section.number(f"{at}.young_per_breeding_female.mean")
    for count in counts or ():
        path = format_path(("life_cycle", "young_per_breeding_female", "counts", count))
        section.number(path, f"Chance of {count} young")
    section.number(f"{at}.females_among_young")
    section.choice(f"{at}.mating.form", "Mating", FORMS)
    section.number(f"{at}.mating.share_of_males_breeding")
    section.number(f"{at}.mating.unequal_success")
    section.choice(f"{at}.crowding", "Crowding", CROWDING)
    section.line(_growth, "small")
    section.line(_generation, "small")
    _years(section, case)
    section.buttons(("Remove the life cycle", lambda case: set_value(case, "life_cycle", None)))


def _growth(case: Case) -> str:
    from rescue_planner.projection.life_words import growth_words

    return growth_words(case)


def _generation(case: Case) -> str:
    from rescue_planner.projection.life_words import generation_words

    return generation_words(case)


def _years(section: Section, case: Case) -> None:
    at = "life_cycle"
    section.part("Good and bad years")
    section.numbers(*(f"{at}.yearly_sd.{name}" for name in ("first_year", "subadult", "adult",
                                                           "young")))  # fmt: skip
    section.number(f"{at}.survival_young_correlation")
    section.number(f"{at}.fewest_adults")
    for i, die_off in enumerate(case.life_cycle.die_offs if case.life_cycle else ()):
        section.part(f"Die-off: {die_off.name}")
        section.number(f"{at}.die_offs[{i}].chance_per_generation")
        for name, words in (("first_year", "first year"), ("subadult", "subadults"),
                            ("adult", "adults")):  # fmt: skip
            section.number(f"{at}.die_offs[{i}].lost_share.{name}", f"Share lost, {words}")
        section.number(f"{at}.die_offs[{i}].young_lost_share", "Share of the young lost")


def _new_life(case: Case) -> Edit:
    def guess(value: float) -> dict[str, object]:
        return {"best": value, "origin": "guessed", "source": "a place to begin; replace it"}

    return set_value(
        case,
        "life_cycle",
        {
            "first_breeding_age": {"female": guess(2), "male": guess(2)},
            "last_age": guess(10),
            "yearly_survival": {
                "first_year": guess(0.5), "subadult": guess(0.75), "adult": guess(0.85),
            },
            "share_of_females_breeding": guess(0.8),
            "young_per_breeding_female": {"mean": guess(1.0)},
        },
    )  # fmt: skip


def _cost(section: Section, _case: Case) -> None:
    at = "inbreeding_cost.lethal_equivalents_diploid"
    section.number(f"{at}.first_year", "First-year survival, diploid")
    section.unknown(f"{at}.first_year", "lethal equivalents, first year", forms=False)
    section.ways(f"{at}.first_year")
    section.number(f"{at}.young_per_female", "Young per female, diploid")
    section.line(inbreeding_cost_in_words, "")
    section.line(lethal_source_in_words)
    section.choice("inbreeding_cost.how", "How it acts", HOW)


LIFE = SectionPlan(
    "Life cycle",
    "Counted just before breeding. Needed where numbers of animals are to be projected.",
    lambda case: (
        case.life_cycle is None,
        case.life_cycle
        and (
            tuple(case.life_cycle.young_per_breeding_female.counts or ()),
            tuple(one.name for one in case.life_cycle.die_offs),
        ),
    ),
    _life,
)
COST = SectionPlan(
    "Inbreeding cost",
    "Lethal equivalents per diploid animal. A value printed per haploid genome or per gamete must "
    "be doubled. Left out, inbreeding costs nothing.",
    lambda _: 0,
    _cost,
)
