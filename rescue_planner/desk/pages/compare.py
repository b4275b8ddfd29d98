"""The Compare page: what does each plan buy and cost."""

from __future__ import annotations

import itertools

from PySide6.QtCore import Qt
from PySide6.QtGui import QResizeEvent
from PySide6.QtWidgets import QBoxLayout, QHBoxLayout, QScrollArea, QVBoxLayout, QWidget

from rescue_planner.case.document import Case
from rescue_planner.case.measures import split
from rescue_planner.case.plans import NO_RELEASES
from rescue_planner.desk import theme
from rescue_planner.desk.charts.live_charts import LiveCharts, read_together
from rescue_planner.desk.charts.shown import PanelSpec, specs
from rescue_planner.desk.compare.chooser import LOCUS, MeasureChooser, offered
from rescue_planner.desk.compare.exporting import Exporter
from rescue_planner.desk.compare.fold import Seen
from rescue_planner.desk.compare.sections import Sections
from rescue_planner.desk.compare.targets import target_table
from rescue_planner.desk.compare.values import CopyingTable, ValueModel, ValuesAtYears
from rescue_planner.desk.context import Desk
from rescue_planner.desk.icons import Icons
from rescue_planner.desk.locus_notes import LocusNotes, every_locus
from rescue_planner.desk.widgets import button, rule, scrolled, text
from rescue_planner.projection.picture import no_input
from rescue_planner.projection.reading import depths_shown
from rescue_planner.projection.results import Comparison
from rescue_planner.projection.table_words import depth_words, event_sentences

QUESTION = "What does each plan buy and cost?"
TRUST = (
    "Compare plans with one another. Do not read a single line as a forecast of what will happen."
)


BANDS = (
    "Bands: among 100 populations like this one, the frequency is in the wide band in 90 and in "
    "the narrow band in 50."
)


def _of_locus(key: str) -> bool:
    return split(key)[0] in (*LOCUS, "allele_fixed")


class ComparePage(QWidget):
    """Small multiples of all plans, the same as a table, rules that acted, targets, export."""

    def __init__(self, desk: Desk, parent: QWidget | None = None) -> None:
        super().__init__(parent)
        self._desk = desk
        self._stale = True
        self.chooser = MeasureChooser(self)
        self.averages = LiveCharts(desk, "Charts of the average course", self._average_specs)
        self.odds = LiveCharts(desk, "Charts of tracked loci", self._locus_specs)
        self.locus_notes = LocusNotes(desk, self._loci_shown)
        self.sections = Sections(self)
        self.values = ValuesAtYears(self)
        self.targets = CopyingTable("Target checks", self)
        self.target_model = ValueModel(self)
        self.targets.setModel(self.target_model)
        self.exporter = Exporter(desk, self)
        self._make_words()
        self._lay_out()
        self._chain()
        self._connect()
        self.refresh()

    def _make_words(self) -> None:
        self.question = text(QUESTION, "title")
        self.decision = text("", "soft")
        self.average_depth, self.odds_depth = text("", "note"), text("", "note")
        self.odds_heading = text("Tracked loci", "section")
        self.values_rule = rule()
        self.values_heading = text("Values at chosen years", "section")
        self.events_heading = text("Rules that acted", "section")
        self.events, self.target_notes = text("", "small"), text("", "note")
        self.targets_heading = text("Targets", "section")
        self.measures_button = button("Measures…", said="Choose the measures shown")
        self.measures_button.setCheckable(True)
        self.export_button = button("Export…", said="Export the plans and measures shown")
        self._icons = Icons(
            self._desk.view,
            {
                self.measures_button: "measures",
                self.export_button: "export",
                self.values.copy_button: "copy",
            },
        )

    def _lay_out(self) -> None:
        top = self.top = QBoxLayout(QBoxLayout.Direction.LeftToRight)
        top.setSpacing(theme.UNIT)
        words = QVBoxLayout()
        words.setSpacing(2)
        words.addWidget(self.question)
        words.addWidget(self.decision)
        top.addLayout(words, 1)
        buttons = QHBoxLayout()
        buttons.setSpacing(theme.UNIT)
        for made in (self.measures_button, self.export_button):
            buttons.addWidget(made, 0, Qt.AlignmentFlag.AlignTop)
        buttons.addStretch(1)
        top.addLayout(buttons)
        self.chooser.hide()
        self.body = QWidget(self)
        column = QVBoxLayout(self.body)
        column.setContentsMargins(2 * theme.UNIT, 2 * theme.UNIT, 2 * theme.UNIT, 2 * theme.UNIT)
        column.setSpacing(theme.UNIT)
        column.addLayout(top)
        column.addWidget(self.chooser)
        column.addWidget(text(TRUST, "note"))
        below: tuple[QWidget, ...] = (
            self.averages, self.average_depth, self.odds_heading, self.odds,
            self.locus_notes, self.odds_depth, self.sections,
            self.values_rule, self.values_heading, self.values,
            self.targets_heading, self.targets, self.target_notes, self.events_heading,
            self.events,
        )  # fmt: skip
        for widget in below:
            column.addWidget(widget)
        column.addStretch(1)
        self.area: QScrollArea = scrolled(self.body)
        self.area.setVerticalScrollBarPolicy(Qt.ScrollBarPolicy.ScrollBarAlwaysOn)
        self.area.setFocusPolicy(Qt.FocusPolicy.NoFocus)
        outer = QVBoxLayout(self)
        outer.setContentsMargins(0, 0, 0, 0)
        outer.addWidget(self.area)

    def _chain(self) -> None:
        """Let Tab go down the page."""
        order: tuple[QWidget, ...] = (
            self.measures_button, self.chooser, self.export_button, self.averages.charts,
            self.odds.charts, *self.sections.stops(), self.values.edit, self.values.rows,
            self.values.copy_button, self.values.table, self.targets,
        )  # fmt: skip
        for before, after in itertools.pairwise(order):
            QWidget.setTabOrder(before, after)
        self.setFocusProxy(self.measures_button)

    def _connect(self) -> None:
        read_together([self.averages.charts, self.odds.charts])
        self.chooser.chosen_changed.connect(self._redraw)
        self.measures_button.toggled.connect(self._show_chooser)
        self.export_button.clicked.connect(self.export)
        self._desk.document.replaced.connect(self._replaced)
        self._desk.document.changed.connect(self._case_changed)
        self._desk.live.updated.connect(self._updated)
        self._desk.view.changed.connect(self.refresh)
        self.averages.refreshed.connect(self._late)

    def _average_specs(
        self, case: Case, comparison: Comparison, plans: tuple[str, ...]
    ) -> tuple[PanelSpec, ...]:
        self.chooser.offer(case, comparison)
        return specs([key for key in self.chooser.shown_keys() if not _of_locus(key)])

    def _locus_specs(
        self, case: Case, comparison: Comparison, plans: tuple[str, ...]
    ) -> tuple[PanelSpec, ...]:
        self.chooser.offer(case, comparison)
        shown = [key for key in self.chooser.shown_keys() if _of_locus(key)]
        return specs(shown, plans)

    def _loci_shown(self, case: Case) -> tuple[str, ...]:
        keys = [split(key) for key in self.chooser.shown_keys()]
        named = {name for base, name in keys if base in (*LOCUS, "allele_fixed")}
        return tuple(name for name in every_locus(case) if name in named)

    def resizeEvent(self, event: QResizeEvent) -> None:
        super().resizeEvent(event)
        wide = self.width() >= 640 * self._desk.view.text_scale
        way = QBoxLayout.Direction.LeftToRight if wide else QBoxLayout.Direction.TopToBottom
        self.top.setDirection(way)

    def _show_chooser(self, shown: bool) -> None:
        self.chooser.setVisible(shown)
        if shown:
            self.chooser.setFocus()
            if self.chooser.currentRow() < 0:
                self.chooser.setCurrentRow(0)

    def _replaced(self) -> None:
        self.chooser.forget()
        self.values.years = None
        self.sections.forget()
        self.refresh()

    def _case_changed(self, _case: object) -> None:
        self.refresh()  # numbers wait for the new comparison, which is there within a frame

    def _late(self) -> None:
        """Take away what was drawn from an older case; the charts have done so."""
        if self._desk.live.comparison is None:
            self._stale = True
            self.refresh()

    def _updated(self, _comparison: object) -> None:
        self.refresh()

    def _redraw(self) -> None:
        self.averages.refresh()
        self.odds.refresh()
        self.refresh()

    def visible_plans(self, comparison: Comparison) -> tuple[str, ...]:
        """Return the plans that are not hidden."""
        return tuple(p for p in comparison.plans if p not in self._desk.view.hidden)

    def refresh(self) -> None:
        """Bring words and tables to the comparison of the case as it stands; charts follow it."""
        document, comparison = self._desk.document, self._desk.live.comparison
        self.export_button.setEnabled(comparison is not None)
        self.measures_button.setEnabled(comparison is not None)
        if not document.has_case or comparison is None:
            if not document.has_case or self._stale:
                self.values.show_values(None, (), ())
                self.sections.show_seen(None)
                self._show_rest(None, None)
            return
        self._stale = False
        self.chooser.offer(document.case, comparison)
        self._show_rest(document.case, comparison)
        case, keys = document.case, self.chooser.shown_keys()
        shown = tuple(key for key in keys if not no_input(case, key))
        plans = self.visible_plans(comparison)
        self.values.show_values(comparison, plans, shown)
        every = tuple(key for key in offered(case, comparison) if not no_input(case, key))
        look = self.averages.look()
        self.sections.show_seen(Seen(case, comparison, plans, shown, every, look))

    def _show_rest(self, case: Case | None, comparison: Comparison | None) -> None:
        decision = case.decision.question if case is not None and case.decision else None
        self.decision.setText(f"To be decided: {decision}" if decision else "")
        self.decision.setVisible(bool(decision))
        if case is None or comparison is None:
            for widget in self._optional():
                widget.hide()
            return
        for widget in self._optional():
            widget.show()
        self._show_depths(case, comparison)
        self._show_events(comparison)
        self._show_targets(case, comparison)

    def _optional(self) -> tuple[QWidget, ...]:
        return (
            self.average_depth, self.odds_heading, self.odds, self.locus_notes, self.odds_depth,
            self.events_heading, self.events, self.targets_heading, self.targets,
            self.target_notes, self.values, self.values_heading, self.values_rule, self.sections,
        )  # fmt: skip

    def _show_depths(self, case: Case, comparison: Comparison) -> None:
        shown = self.chooser.shown_keys()
        for label, keys in (
            (self.average_depth, [key for key in shown if not _of_locus(key)]),
            (self.odds_depth, [key for key in shown if _of_locus(key)]),
        ):
            depths = depths_shown(comparison, keys)
            words = [depth_words(case, depth) for depth in depths]
            if label is self.odds_depth and "exact" in depths:
                words.append(BANDS)
            label.setText("\n".join(words))
            label.setVisible(bool(depths))
        loci = any(_of_locus(key) for key in shown)
        self.odds.setVisible(loci)
        self.locus_notes.setVisible(loci)
        self.locus_notes.refresh()
        self.odds_heading.setVisible(loci)

    def _show_events(self, comparison: Comparison) -> None:
        said = event_sentences(comparison, self.visible_plans(comparison))
        self.events.setText("\n".join(said))
        self.events.setVisible(bool(said))
        self.events_heading.setVisible(bool(said))

    def _show_targets(self, case: Case, comparison: Comparison) -> None:
        table = target_table(case, comparison, self.visible_plans(comparison))
        self.target_model.show_table(table)
        self.targets.fit_height()
        self.target_notes.setText(" ".join(table.notes))
        self.target_notes.setVisible(bool(table.notes))
        self.targets.setVisible(bool(table.rows))
        self.targets_heading.setVisible(bool(table.rows or table.notes))

    def exported_plans(self, comparison: Comparison) -> tuple[str, ...]:
        """Return the plans shown; `No releases` always comes along."""
        shown = self.visible_plans(comparison)
        return tuple(p for p in comparison.plans if p in shown or p == NO_RELEASES)

    def export(self) -> None:
        """Ask for a folder and write the plans and measures shown there."""
        comparison = self._desk.live.comparison
        if comparison is not None:
            self.exporter.ask(self.exported_plans(comparison), self.chooser.shown_keys())
