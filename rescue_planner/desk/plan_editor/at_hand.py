"""The numbers that an argument about a plan turns on, within reach of the plan."""

from __future__ import annotations

from PySide6.QtWidgets import QVBoxLayout, QWidget

from rescue_planner.case.document import Case
from rescue_planner.case.paths import format_path
from rescue_planner.case.plans import NO_RELEASES, Plan
from rescue_planner.desk.context import Desk
from rescue_planner.desk.fields import NumberField
from rescue_planner.desk.plan_editor.sentence import Sentence
from rescue_planner.desk.widgets import text
from rescue_planner.projection.plan_reading import newcomers_words


class AtHand(QWidget):
    """Ne, newcomers per generation, the donors' frequencies at tracked loci, in two sentences."""

    def __init__(self, desk: Desk, case: Case, index: int) -> None:
        super().__init__()
        column = QVBoxLayout(self)
        column.setContentsMargins(0, 0, 0, 0)
        column.setSpacing(2)
        self._plan, self._index = case.plans[index], index
        self.sentences = [self._size(desk)]
        if case.loci and case.donors:
            self.sentences.append(self._frequencies(desk, case))
        for sentence in self.sentences:
            column.addWidget(sentence)
        self.newcomers = text("", "note")
        column.addWidget(self.newcomers)

    def _size(self, desk: Desk) -> Sentence:
        line, at = Sentence(desk, self), f"plans[{self._index}]"
        line.say("Ne of the recipient:")
        line.number("recipient.effective_size", "Effective size of the recipient, for all plans")
        if self._plan.name != NO_RELEASES:
            line.say("animals; under this plan alone:")
            line.number(f"{at}.effective_size", "Effective size under this plan alone")
            line.say("(empty: the same).")
        else:
            line.say("animals.")
        for i, steady in enumerate(self._plan.steady):
            line.say("Newcomers:")
            path = f"{at}.steady[{i}].migrants_per_generation"
            line.number(path, f"Newcomers that breed per generation from {steady.donor}")
            line.say(f"per generation from {steady.donor}.")
        return line

    def _frequencies(self, desk: Desk, case: Case) -> Sentence:
        line = Sentence(desk, self)
        for i, locus in enumerate(case.loci):
            line.say(f"Frequency of {locus.name}:")
            for k, donor in enumerate(case.donors):
                path = format_path(("loci", i, "donor_frequency", donor.name))
                line.number(path, f"Frequency of {locus.name} in {donor.name}")
                line.say(f"in {donor.name}" + ("." if k == len(case.donors) - 1 else ","))
        return line

    @property
    def fields(self) -> dict[str, NumberField]:
        """The fields by their path."""
        return {path: field for line in self.sentences for path, field in line.fields.items()}

    def refresh(self, case: Case, plan: Plan) -> None:
        """Say what the plan's newcomers come to."""
        self.newcomers.setText(newcomers_words(case, plan))
