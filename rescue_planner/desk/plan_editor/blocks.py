"""Releases, steady flow, rules and other actions of one plan, each as a sentence."""

from __future__ import annotations

from PySide6.QtWidgets import QWidget

from rescue_planner.case.document import Case
from rescue_planner.case.measures import keys, measure_of, title
from rescue_planner.case.plans import Plan, Rule
from rescue_planner.desk.context import Desk
from rescue_planner.desk.fields import TextField
from rescue_planner.desk.plan_editor.sentence import Block, Sentence
from rescue_planner.projection import plan_reading


def donor_choices(case: Case) -> list[tuple[str, str]]:
    """Return the donors as choices."""
    return [(donor.name, donor.name) for donor in case.donors]


def measure_choices(case: Case) -> list[tuple[str, str]]:
    """Return the measures that a rule can read."""
    return [(key, lowered(title(key))) for key in keys(case)]


def rule_unit(case: Case, key: str) -> str:
    """Return the unit of a rule's bound: shares are written from 0 to 1."""
    measure = measure_of(key)
    if measure.kind == "share":
        return "share, 1 = 100 %"
    return measure.unit.replace("currency", case.currency or "currency")


def lowered(name: str) -> str:
    """Return a name for the middle of a sentence."""
    return name[:1].lower() + name[1:]


def _animals(sentence: Sentence, case: Case, at: str, name: str) -> None:
    """Write who comes from where, and what becomes of them."""
    females, males = f"{at}.who.females", f"{at}.who.males"
    sentence.number(females, f"{name}: females").counted(females, "female", "females").say("and")
    sentence.number(males, f"{name}: males").counted(males, "male", "males").say("of age")
    sentence.number(f"{at}.who.age", f"{name}: age in years").say("years from")
    sentence.choice(f"{at}.donor", donor_choices(case), f"{name}: donor")
    sentence.say("– of these, a share of")
    sentence.number(f"{at}.afterwards.survive_to_breed", f"{name}: share that survives to breed")
    sentence.say("survives to breed, and breeds")
    sentence.number(
        f"{at}.afterwards.breeding_relative_to_residents", f"{name}: breeding against residents"
    )
    sentence.say("times as well as residents. On loan for")
    sentence.number(f"{at}.loan_years", f"{name}: years on loan, empty for good")
    money = case.currency or "units of money"
    sentence.say("years (empty: for good). Costs:")
    sentence.number(f"{at}.cost.each_animal", f"{name}: cost of each animal")
    sentence.say(f"{money} an animal and")
    sentence.number(f"{at}.cost.each_event", f"{name}: cost of each event")
    sentence.say(f"{money} an event.")


class ReleaseBlock(Block):
    """One release as a sentence."""

    def __init__(self, desk: Desk, case: Case, plan: int, index: int) -> None:
        super().__init__(desk)
        at, name = f"plans[{plan}].releases[{index}]", f"Release {index + 1}"
        self.index = index
        line = self.sentence
        line.say("In").number(f"{at}.when.first_year", f"{name}: first year")
        line.say("and then every").number(f"{at}.when.every_years", f"{name}: years between")
        line.counted(f"{at}.when.every_years", "year,", "years,")
        line.number(f"{at}.when.times", f"{name}: how many times")
        line.counted(f"{at}.when.times", "time", "times").say("in all: release")
        _animals(line, case, at, name)
        self.duplicate = self.act("Duplicate", f"Duplicate release {index + 1}")
        self.remove = self.act("Remove", f"Remove release {index + 1}")

    def refresh(self, case: Case, plan: Plan) -> None:
        """Say what the release comes to."""
        release = plan.releases[self.index]
        first = float(release.when.first_year.best)
        whole = plan_reading.fate(release, self.index)
        in_all = f"{whole.sentence()}. " if whole.events > 1 else ""
        self.show_words(
            f"{plan_reading.chain(release).sentence()}, each time. {in_all}"
            f"{plan_reading.generation_sentence(case, first)}"
        )


class SteadyBlock(Block):
    """One steady flow as a sentence."""

    def __init__(self, desk: Desk, case: Case, plan: int, index: int) -> None:
        super().__init__(desk)
        at, name = f"plans[{plan}].steady[{index}]", f"Steady flow {index + 1}"
        self.index = index
        line = self.sentence
        line.number(f"{at}.migrants_per_generation", f"{name}: newcomers per generation")
        line.say("newcomers that breed per generation from")
        line.choice(f"{at}.donor", donor_choices(case), f"{name}: donor")
        line.say("from").number(f"{at}.from_year", f"{name}: first year, empty for the start")
        line.say("to").number(f"{at}.to_year", f"{name}: last year, empty for good")
        line.say("(empty: from the start, for good).")
        self.remove = self.act("Remove", f"Remove steady flow {index + 1}")

    def refresh(self, case: Case, plan: Plan) -> None:
        """Say what the flow comes to."""
        self.show_words(plan_reading.flow_words(plan_reading.steady_flow(case, plan, self.index)))


class RuleBlock(Block):
    """One rule as a sentence."""

    def __init__(self, desk: Desk, case: Case, plan: int, index: int, rule: Rule) -> None:
        super().__init__(desk)
        at, name = f"plans[{plan}].rules[{index}]", f"Rule “{rule.name}”"
        self.index = index
        line = self.sentence
        line.say(f"{name}: when").choice(f"{at}.when", measure_choices(case), f"{name}: measure")
        line.say("is above").number(f"{at}.above", f"{name}: acts above, empty for no bound")
        line.say("or below").number(f"{at}.below", f"{name}: acts below, empty for no bound")
        line.say("in").number(f"{at}.surveys", f"{name}: surveys in a row")
        line.say("surveys in a row, one every")
        line.number(f"{at}.survey_every_years", f"{name}: years between surveys")
        line.say("years, with an error (SD) of").number(f"{at}.survey_sd", f"{name}: survey error")
        line.say("then after").number(f"{at}.delay_years", f"{name}: delay in years")
        if rule.then == "stop" or rule.release is None:
            line.say("years: stop all releases and steady flow.")
        else:
            line.say("years: release")
            _animals(line, case, f"{at}.release", name)
            line.say("At most").number(f"{at}.at_most", f"{name}: how often").say("times.")
        self.remove = self.act("Remove", f"Remove rule {rule.name}")

    def refresh(self, case: Case, plan: Plan) -> None:
        """Say what the live depths do with it."""
        rule = plan.rules[self.index]
        unit = f"Bounds and error in: {rule_unit(case, rule.when)}."
        if rule.above is not None and rule.below is not None:
            words = "Acts only where both bounds hold."
        elif rule.above is None and rule.below is None:
            words = "Give a bound above or below which the rule acts."
        else:
            words = ""
        if rule.release is not None:
            words = f"{plan_reading.chain(rule.release).sentence()}, each time. {words}".strip()
        self.show_words(f"{words} {unit}".strip())


class ActionBlock(Block):
    """One other action as a sentence."""

    def __init__(self, desk: Desk, case: Case, plan: int, index: int) -> None:
        super().__init__(desk)
        at, name = f"plans[{plan}].other_actions[{index}]", f"Other action {index + 1}"
        self.index = index
        self.what = TextField(desk, f"{at}.what", label="What is done")
        layout = self.layout()
        assert layout is not None
        layout.insertWidget(0, self.what)  # type: ignore[attr-defined]
        line = self.sentence
        line.say("From").number(f"{at}.year", f"{name}: first year").say("to")
        line.number(f"{at}.until_year", f"{name}: last year, empty for good")
        line.say("(empty: for good): carrying capacity times")
        line.number(f"{at}.carrying_capacity_times", f"{name}: factor on carrying capacity")
        line.say("and first-year survival times")
        line.number(f"{at}.first_year_survival_times", f"{name}: factor on first-year survival")
        line.say("at a cost of").number(f"{at}.cost", f"{name}: cost")
        line.say(f"{case.currency or 'units of money'}, once.")
        self.remove = self.act("Remove", f"Remove other action {index + 1}")

    def first(self) -> QWidget:
        """Return what is edited first: the description."""
        return self.what.edit

    def refresh(self, case: Case, plan: Plan) -> None:
        """Say what the live depths do with it."""
        action = plan.other_actions[self.index]
        words = ""
        if float(action.carrying_capacity_times.best) != 1.0:
            words = "The factor on carrying capacity acts on Ne at once: a simplification."
        self.show_words(words)
