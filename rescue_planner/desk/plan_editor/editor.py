"""The editor of one plan: sentences, grid, and the numbers at hand."""

from __future__ import annotations

from collections.abc import Callable
from typing import Any

from PySide6.QtCore import Qt, QTimer, Signal
from PySide6.QtWidgets import QHBoxLayout, QLabel, QVBoxLayout, QWidget

from rescue_planner.case.document import Case
from rescue_planner.case.edits import (
    Edit,
    remove_action,
    remove_release,
    remove_rule,
    remove_steady,
)
from rescue_planner.case.plan_table import cell_at
from rescue_planner.case.plans import NO_RELEASES, Plan
from rescue_planner.case.problems import Problem
from rescue_planner.desk import theme
from rescue_planner.desk.context import Desk
from rescue_planner.desk.fields import NumberField, sentence_of
from rescue_planner.desk.plan_editor import new_parts
from rescue_planner.desk.plan_editor.at_hand import AtHand
from rescue_planner.desk.plan_editor.blocks import (
    ActionBlock,
    ReleaseBlock,
    RuleBlock,
    SteadyBlock,
)
from rescue_planner.desk.plan_editor.differs import Differs
from rescue_planner.desk.plan_editor.feasible import Feasible
from rescue_planner.desk.plan_editor.pieces import Do, column_of, signature_of
from rescue_planner.desk.plan_editor.release_grid import NO_DONOR, ReleaseGrid
from rescue_planner.desk.plan_editor.sentence import Block
from rescue_planner.desk.plan_editor.tab_order import reached
from rescue_planner.desk.plan_editor.timeline import SHORT_HELP, Timeline
from rescue_planner.desk.widgets import bring_into_view, button, rule, text
from rescue_planner.projection.plan_reading import fate_words, limit_sentences

MakePart = Callable[[Case, str], Edit]
AddButton = tuple[type[Block], str, MakePart, str]  # kind, words, what it adds, reason why not
NOTHING_HERE = (
    "“No releases” is the plan of leaving things as they are. Every other plan is compared with "
    "it, so it holds nothing and stays."
)
MOST_SENTENCES = 6  # a sentence has twelve fields: fifty of them would take long to build
LAST = 10_000
REST_MS = 150
ONE_SENTENCE = "the row chosen in the grid below is told here."
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
        self._told = 0  # which of many releases is told in a sentence
        self._rest = QTimer(self)
        self._rest.setSingleShot(True)
        self._rest.setInterval(REST_MS)
        self._see = QTimer(self)
        self._see.setSingleShot(True)
        self._see.setInterval(0)
        self.grid = ReleaseGrid(desk, self)
        self.events = self.grid.events
        self.feasible = Feasible(desk, self)
        self.differs = Differs(self)
        self.heading = text("", "title")
        self.refused = text("", "problem")
        self._body, self._below = QWidget(self), QWidget(self)
        self._outer = QVBoxLayout(self)
        self._outer.setContentsMargins(0, 0, 0, 0)
        self._outer.setSpacing(theme.HALF)
        for part in (
            self.heading, self.refused, self._body, self.grid, self.feasible, self._below,
            self.differs,
        ):  # fmt: skip
            self._outer.addWidget(part)
        self._outer.addStretch(1)
        for part in (self.refused, self.grid, self.feasible, self.differs):
            part.hide()
        self._connect()

    def _connect(self) -> None:
        desk = self._desk
        self.grid.refused.connect(self._say)
        self.grid.row_chosen.connect(self._row_chosen)
        self._rest.timeout.connect(self.refresh)
        self._see.timeout.connect(self.grid.table.see)
        self.feasible.wanted.connect(self.go_to)
        self.feasible.built.connect(self.built)
        self.grid.built.connect(self.built)
        desk.document.changed.connect(self._case_changed)
        desk.document.replaced.connect(self.refresh)
        desk.view.changed.connect(self.refresh)
        desk.live.updated.connect(self._projected)

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
        many = len(case.plans[index].releases) > MOST_SENTENCES
        told = self._told if many else 0
        signature = (*signature_of(case, index), self._desk.view.text_scale, told)
        if signature != self._built:
            self._build(case, index)
            told = self._told if many else 0  # as far as there is such a release
            self._built = (*signature[:-1], told)
            self.built.emit()
        self._refresh_words(case, case.plans[index], index)

    def _clear(self) -> None:
        self.heading.setText("")
        self._show_parts(False)
        if self._built is not None:
            self._replace_body(QWidget(), QWidget())
            self.blocks, self.at_hand, self.timeline, self._built = [], None, None, None

    def _show_parts(self, shown: bool) -> None:
        for part in (self.grid, self.feasible, self.differs):
            part.setVisible(shown)

    def _replace_body(self, body: QWidget, below: QWidget) -> None:
        for old, new in ((self._body, body), (self._below, below)):
            self._outer.replaceWidget(old, new)
            old.hide()
            old.deleteLater()
            new.show()
        self._body, self._below = body, below

    # building

    def _build(self, case: Case, index: int) -> None:
        plan, body, below = case.plans[index], QWidget(), QWidget()
        column, under = column_of(body), column_of(below)
        self.blocks, self.add_buttons = [], {}
        self.at_hand = AtHand(self._desk, case, index)
        column.addWidget(self.at_hand)
        if plan.name == NO_RELEASES:
            self.timeline = None
            column.addWidget(text(NOTHING_HERE))
        else:
            self._build_timeline(column, plan, index)
            self._build_releases(column, case, plan, index)
            self._build_steady(under, case, plan, index)
            self._build_rules(under, case, plan, index)
            self._build_actions(under, case, plan, index)
        self._show_parts(plan.name != NO_RELEASES)
        self._replace_body(body, below)
        if self.grid.table.hasFocus():
            self._see.start()  # once the parts above it have their height
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
            made.clicked.connect(Do(self._add, make, kind))
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
        for i in self._told_releases(plan):
            block = ReleaseBlock(self._desk, case, index, i)
            block.duplicate.clicked.connect(Do(self._duplicate, block))
            block.remove.clicked.connect(Do(self._remove, block, remove_release))
            self._add_block(column, block)
        if len(plan.releases) > MOST_SENTENCES:
            words = f"Release {self._told + 1} of {len(plan.releases)}: {ONE_SENTENCE}"
            column.addWidget(text(words, "note"))
        self.fates, self.limits = text("", "small"), text("", "note")
        column.addWidget(self.fates)
        column.addWidget(self.limits)
        if plan.releases:
            column.addWidget(text(WELFARE, "caution"))

    def _told_releases(self, plan: Plan) -> range:
        """Return which releases are told in sentences: all, or of many the one in the grid."""
        count = len(plan.releases)
        self._told = max(0, min(self._told, count - 1))
        return range(count) if count <= MOST_SENTENCES else range(self._told, self._told + 1)

    def _row_chosen(self, row: int) -> None:
        """Tell the release of another row, once the keys rest."""
        if self._told != row >= 0:
            self._told = row
            self._rest.start()

    def _build_steady(self, column: QVBoxLayout, case: Case, plan: Plan, index: int) -> None:
        used = {steady.donor for steady in plan.steady}
        free = [donor.name for donor in case.donors if donor.name not in used]
        why_not = "" if free else "Each donor has its flow already." if case.donors else NO_DONOR
        self._section(
            column, "Steady flow", (SteadyBlock, "Add steady flow", new_parts.new_steady, why_not)
        )
        for i in range(len(plan.steady)):
            block = SteadyBlock(self._desk, case, index, i)
            block.remove.clicked.connect(Do(self._remove, block, remove_steady))
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
            block.remove.clicked.connect(Do(self._remove, block, remove_rule))
            self._add_block(column, block)

    def _build_actions(self, column: QVBoxLayout, case: Case, plan: Plan, index: int) -> None:
        self._section(
            column, "Other actions", (ActionBlock, "Add other action", new_parts.new_action, "")
        )
        for i in range(len(plan.other_actions)):
            block = ActionBlock(self._desk, case, index, i)
            block.remove.clicked.connect(Do(self._remove, block, remove_action))
            self._add_block(column, block)

    # words

    def _refresh_words(self, case: Case, plan: Plan, index: int) -> None:
        for block in self.blocks:
            block.refresh(case, plan)
        if self.at_hand is not None:
            self.at_hand.refresh(case, plan)
        if plan.name != NO_RELEASES and self.timeline is not None:
            self.grid.show_plan(case, index, plan)
            self.feasible.show_plan(case, plan)
            self.differs.show_plan(case, plan.name)
            self.timeline.show_plan(case, plan)
            said = limit_sentences(case, plan)
            self.limits.setText(" ".join([*said, DONOR_CAUTION]) if said else "")
            self.limits.setVisible(bool(said))
            self.fates.setText(fate_words(plan))
            self.fates.setVisible(bool(plan.releases))

    def _projected(self, _comparison: object) -> None:
        """Look anew at what needs the average course."""
        document = self._desk.document
        names = [plan.name for plan in document.case.plans] if document.has_case else []
        if self._plan in names and self._plan != NO_RELEASES:
            self.feasible.show_plan(document.case, document.case.plan(self._plan))

    def go_to(self, path: str) -> None:
        """Give the number at `path` the focus: in its sentence, else in the grid."""
        field = next((one for one in self.findChildren(NumberField) if one.path == path), None)
        if field is not None and field.isVisibleTo(self):
            field.edit.setFocus(Qt.FocusReason.ShortcutFocusReason)
            bring_into_view(field)
            return
        cell = cell_at(path)
        if cell is not None:
            self.grid.show_cell(*cell)
            bring_into_view(self.grid)

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
        told, self._told = self._told, LAST
        if not self._try(lambda case: make(case, plan)):
            self._told = told
        else:
            self._of_kind(kind)[-1].first().setFocus(Qt.FocusReason.OtherFocusReason)

    def _of_kind(self, kind: type[Block]) -> list[Block]:
        return [block for block in self.blocks if isinstance(block, kind)]

    def _duplicate(self, block: ReleaseBlock) -> None:
        plan, index = self._plan, block.index
        told, self._told = self._told, LAST
        if not self._try(lambda case: new_parts.release_again(case, plan, index), block):
            self._told = told
        else:
            self._of_kind(ReleaseBlock)[-1].first().setFocus(Qt.FocusReason.OtherFocusReason)

    def _remove(self, block: Any, edit: Any) -> None:  # noqa: ANN401 - any of four
        plan, kind, index = self._plan, type(block), block.index
        if self._try(lambda case: edit(case, plan, index), block):
            left = self._of_kind(kind)
            nearest = left[min(index, len(left) - 1)].remove if left else self.add_buttons[kind]
            nearest.setFocus(Qt.FocusReason.OtherFocusReason)

    def reached(self) -> list[QWidget]:
        """Return what can have the focus, in reading order."""
        parts = (self._body, self.grid, self.feasible, self._below, self.differs)
        return [one for part in parts if not part.isHidden() for one in reached(part)]

    def words(self) -> list[str]:
        """Return all labels of the editor, for tests and search."""
        return [label.text() for label in self.findChildren(QLabel)]
