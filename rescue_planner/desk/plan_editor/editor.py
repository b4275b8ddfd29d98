"""The editor of one plan: sentences, grid, and the numbers at hand."""

from __future__ import annotations

from collections.abc import Callable
from typing import Any

from PySide6.QtCore import Qt, Signal
from PySide6.QtWidgets import QHBoxLayout, QLabel, QVBoxLayout, QWidget

from rescue_planner.case.document import Case
from rescue_planner.case.edits import (
    Edit,
    remove_action,
    remove_release,
    remove_rule,
    remove_steady,
)
from rescue_planner.case.plans import NO_RELEASES, Plan
from rescue_planner.case.problems import Problem
from rescue_planner.desk import theme
from rescue_planner.desk.compare.values import CopyingTable
from rescue_planner.desk.context import Desk
from rescue_planner.desk.fields import sentence_of
from rescue_planner.desk.plan_editor import new_parts
from rescue_planner.desk.plan_editor.at_hand import AtHand
from rescue_planner.desk.plan_editor.blocks import (
    ActionBlock,
    ReleaseBlock,
    RuleBlock,
    SteadyBlock,
)
from rescue_planner.desk.plan_editor.events import EventModel
from rescue_planner.desk.plan_editor.sentence import Block
from rescue_planner.desk.plan_editor.tab_order import reached
from rescue_planner.desk.plan_editor.timeline import SHORT_HELP, Timeline
from rescue_planner.desk.widgets import button, rule, text
from rescue_planner.projection.plan_reading import limit_sentences

MakePart = Callable[[Case, str], Edit]
AddButton = tuple[type[Block], str, MakePart, str]  # kind, words, what it adds, reason why not
NO_DONOR = "No donor is entered yet: add one on the Case page."
NOTHING_HERE = (
    "“No releases” is the plan of leaving things as they are. Every other plan is compared with "
    "it, so it holds nothing and stays."
)
DONOR_CAUTION = "Removal limits are set by those responsible for the donor population."
WELFARE = (
    "Expected losses shown here are estimates. Handling, transport and release need an "
    "animal-welfare review and approved protocols."
)


class PlanEditor(QWidget):
    """Built anew when the plan's parts change; numbers in it follow the case by themselves."""

    built = Signal()  # with new widgets

    def __init__(self, desk: Desk, parent: QWidget | None = None) -> None:
        super().__init__(parent)
        self._desk = desk
        self._plan = NO_RELEASES
        self._built: tuple[Any, ...] | None = None
        self.blocks: list[ReleaseBlock | SteadyBlock | RuleBlock | ActionBlock] = []
        self.add_buttons: dict[type[Block], QWidget] = {}
        self.at_hand: AtHand | None = None
        self.timeline: Timeline | None = None
        self._focus_next: QWidget | None = None
        self.events = EventModel(desk, self)
        self.heading = text("", "title")
        self.refused = text("", "problem")
        self._outer = QVBoxLayout(self)
        self._outer.setContentsMargins(0, 0, 0, 0)
        self._outer.setSpacing(theme.HALF)
        self._outer.addWidget(self.heading)
        self._outer.addWidget(self.refused)
        self._body = QWidget(self)
        self._outer.addWidget(self._body)
        self._outer.addStretch(1)
        self.refused.hide()
        self.events.refused.connect(self._say)
        desk.document.changed.connect(self._case_changed)
        desk.document.replaced.connect(self.refresh)
        desk.view.changed.connect(self.refresh)

    def show_plan(self, plan: str) -> None:
        """Edit another plan."""
        self._plan = plan
        self._say(())
        self.refresh()

    def _case_changed(self, _case: object) -> None:
        self._say(())
        self.refresh()

    def refresh(self) -> None:
        """Show the plan as it stands."""
        document = self._desk.document
        names = [plan.name for plan in document.case.plans] if document.has_case else []
        if self._plan not in names:
            self._clear()
            return
        case, index = document.case, names.index(self._plan)
        self.heading.setText(self._plan)
        signature = (*_signature(case, index), self._desk.view.text_scale)
        if signature != self._built:
            self._build(case, index)
            self._built = signature
            self.built.emit()
        self._refresh_words(case, case.plans[index], index)

    def _clear(self) -> None:
        self.heading.setText("")
        if self._built is not None:
            self._replace_body(QWidget())
            self.blocks, self.at_hand, self.timeline, self._built = [], None, None, None

    def _replace_body(self, body: QWidget) -> None:
        self._outer.replaceWidget(self._body, body)
        self._body.hide()
        self._body.deleteLater()
        self._body = body
        body.show()

    # building

    def _build(self, case: Case, index: int) -> None:
        plan, body = case.plans[index], QWidget()
        column = QVBoxLayout(body)
        column.setContentsMargins(0, 0, 0, 0)
        column.setSpacing(theme.HALF)
        self.blocks, self.add_buttons = [], {}
        self.at_hand = AtHand(self._desk, case, index)
        column.addWidget(self.at_hand)
        if plan.name == NO_RELEASES:
            self.timeline = None
            column.addWidget(text(NOTHING_HERE))
        else:
            self._build_timeline(column, plan, index)
            self._build_releases(column, case, plan, index)
            self._build_steady(column, case, plan, index)
            self._build_rules(column, case, plan, index)
            self._build_actions(column, case, plan, index)
        self._replace_body(body)
        if self._focus_next is not None:
            self._focus_next.setFocus(Qt.FocusReason.OtherFocusReason)
            self._focus_next = None

    def _build_timeline(self, column: QVBoxLayout, plan: Plan, index: int) -> None:
        """Build the calendar; where the last one had the cursor, so has this one."""
        before, self.timeline = self.timeline, Timeline(self._desk, index)
        self.timeline.refused.connect(self._say)
        column.addWidget(rule())
        column.addWidget(self.timeline)
        column.addWidget(text(SHORT_HELP, "note"))
        if before is not None and before.hasFocus() and before.index == index:
            count = len(plan.releases)
            added = count > before.count()
            self.timeline.current = count - 1 if added else before.current
            self._focus_next = self.timeline

    def _section(self, column: QVBoxLayout, words: str, *buttons: AddButton) -> None:
        """Add a rule, a heading, and buttons that add a part."""
        column.addWidget(rule())
        row = QHBoxLayout()
        row.setSpacing(theme.UNIT)
        row.addWidget(text(words, "section", wrap=False))
        row.addStretch(1)
        for kind, label, make, why_not in buttons:
            made = button(label, kind="link")
            made.setEnabled(not why_not)
            made.setToolTip(why_not)
            made.setAccessibleDescription(why_not)
            made.clicked.connect(_Do(self._add, make, kind))
            self.add_buttons.setdefault(kind, made)
            row.addWidget(made)
        column.addLayout(row)

    def _add_block(self, column: QVBoxLayout, block: Any) -> None:  # noqa: ANN401 - any of four
        self.blocks.append(block)
        column.addWidget(block)

    def _build_releases(self, column: QVBoxLayout, case: Case, plan: Plan, index: int) -> None:
        why_not = "" if case.donors else NO_DONOR
        self._section(
            column, "Releases", (ReleaseBlock, "Add release", new_parts.new_release, why_not)
        )
        if why_not:
            column.addWidget(text(why_not, "soft"))
        for i in range(len(plan.releases)):
            block = ReleaseBlock(self._desk, case, index, i)
            block.duplicate.clicked.connect(_Do(self._duplicate, block))
            block.remove.clicked.connect(_Do(self._remove, block, remove_release))
            self._add_block(column, block)
        self.limits = text("", "note")
        column.addWidget(self.limits)
        if plan.releases:
            column.addWidget(text(WELFARE, "caution"))
            self._build_grid(column)

    def _build_grid(self, column: QVBoxLayout) -> None:
        self.grid = CopyingTable("Every event of the plan’s releases")
        self.grid.setModel(self.events)
        self.grid.setEditTriggers(
            CopyingTable.EditTrigger.DoubleClicked
            | CopyingTable.EditTrigger.EditKeyPressed
            | CopyingTable.EditTrigger.AnyKeyPressed
        )
        column.addWidget(self.grid)
        column.addWidget(text("A number changed here changes every event of its release.", "note"))

    def _build_steady(self, column: QVBoxLayout, case: Case, plan: Plan, index: int) -> None:
        used = {steady.donor for steady in plan.steady}
        free = [donor.name for donor in case.donors if donor.name not in used]
        why_not = "" if free else "Each donor has its flow already." if case.donors else NO_DONOR
        self._section(
            column, "Steady flow", (SteadyBlock, "Add steady flow", new_parts.new_steady, why_not)
        )
        for i in range(len(plan.steady)):
            block = SteadyBlock(self._desk, case, index, i)
            block.remove.clicked.connect(_Do(self._remove, block, remove_steady))
            self._add_block(column, block)
        if plan.steady:
            column.addWidget(text("Animals that breed, not animals released.", "caution"))

    def _build_rules(self, column: QVBoxLayout, case: Case, plan: Plan, index: int) -> None:
        self._section(
            column,
            "Rules",
            (RuleBlock, "Add stop rule", new_parts.new_stop, ""),
            (RuleBlock, "Add release rule", new_parts.new_trigger, "" if case.donors else NO_DONOR),
        )
        for i, held in enumerate(plan.rules):
            block = RuleBlock(self._desk, case, index, i, held)
            block.remove.clicked.connect(_Do(self._remove, block, remove_rule))
            self._add_block(column, block)

    def _build_actions(self, column: QVBoxLayout, case: Case, plan: Plan, index: int) -> None:
        self._section(
            column, "Other actions", (ActionBlock, "Add other action", new_parts.new_action, "")
        )
        for i in range(len(plan.other_actions)):
            block = ActionBlock(self._desk, case, index, i)
            block.remove.clicked.connect(_Do(self._remove, block, remove_action))
            self._add_block(column, block)

    # words

    def _refresh_words(self, case: Case, plan: Plan, index: int) -> None:
        for block in self.blocks:
            block.refresh(case, plan)
        if self.at_hand is not None:
            self.at_hand.refresh(case, plan)
        self.events.show_plan(case, index, plan)
        if plan.name != NO_RELEASES and self.timeline is not None:
            self.timeline.show_plan(case, plan)
            said = limit_sentences(case, plan)
            self.limits.setText(" ".join([*said, DONOR_CAUTION]) if said else "")
            self.limits.setVisible(bool(said))
            if plan.releases:
                self.grid.fit_height()

    def _say(self, problems: object) -> None:
        held: tuple[Problem, ...] = problems  # type: ignore[assignment]
        self.refused.setText("⚠ " + sentence_of(held) if held else "")
        self.refused.setVisible(bool(held))

    # edits

    def _try(self, make: Callable[[Case], Edit], beside: Block | None = None) -> bool:
        problems = self._desk.document.try_edit(make)
        if beside is not None and problems:
            beside.sentence.say_problems(problems)
        else:
            self._say(problems)
        return not problems

    def _add(self, make: MakePart, kind: type[Block]) -> None:
        """Add a part, and put the cursor into its first number."""
        plan = self._plan
        if self._try(lambda case: make(case, plan)):
            self._of_kind(kind)[-1].first().setFocus(Qt.FocusReason.OtherFocusReason)

    def _of_kind(self, kind: type[Block]) -> list[Block]:
        return [block for block in self.blocks if isinstance(block, kind)]

    def _duplicate(self, block: ReleaseBlock) -> None:
        plan, index = self._plan, block.index
        if self._try(lambda case: new_parts.release_again(case, plan, index), block):
            self._of_kind(ReleaseBlock)[-1].first().setFocus(Qt.FocusReason.OtherFocusReason)

    def _remove(self, block: Any, edit: Any) -> None:  # noqa: ANN401 - any of four
        plan, kind, index = self._plan, type(block), block.index
        if self._try(lambda case: edit(case, plan, index), block):
            left = self._of_kind(kind)
            nearest = left[min(index, len(left) - 1)].remove if left else self.add_buttons[kind]
            nearest.setFocus(Qt.FocusReason.OtherFocusReason)

    def reached(self) -> list[QWidget]:
        """Return what can have the focus, in reading order."""
        return list(reached(self._body))

    def words(self) -> list[str]:
        """Return all labels of the editor, for tests and search."""
        return [label.text() for label in self.findChildren(QLabel)]


class _Do:
    """A slot that hands on what it was made with, and nothing of the signal."""

    def __init__(self, do: Callable[..., None], *given: object) -> None:
        self._do, self._given = do, given

    def __call__(self, *_signal: object) -> None:
        self._do(*self._given)


def _signature(case: Case, index: int) -> tuple[Any, ...]:
    """Return what the editor's parts depend on; numbers are not among it."""
    plan = case.plans[index]
    return (
        index,
        plan.name,
        len(plan.releases),
        tuple(steady.donor for steady in plan.steady),
        tuple((held.name, held.then) for held in plan.rules),
        len(plan.other_actions),
        tuple(donor.name for donor in case.donors),
        tuple(locus.name for locus in case.loci),
        case.currency,
    )
