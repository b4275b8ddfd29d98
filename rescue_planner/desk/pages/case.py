"""The Case page: who is in trouble, and what do we know."""

from __future__ import annotations

from PySide6.QtCore import Qt
from PySide6.QtWidgets import QVBoxLayout, QWidget

from rescue_planner.case.document import Case
from rescue_planner.desk import theme
from rescue_planner.desk.case_page.about import DECISION, TARGETS, TIME
from rescue_planner.desk.case_page.genes import LOCI, TRAIT
from rescue_planner.desk.case_page.living import COST, LIFE
from rescue_planner.desk.case_page.populations import DONORS, RECIPIENT
from rescue_planner.desk.case_page.section import Section
from rescue_planner.desk.context import Desk
from rescue_planner.desk.evidence import evidence_in_words
from rescue_planner.desk.flow import FlowLayout
from rescue_planner.desk.widgets import Column, Link, rule, scrolled, text

SECTIONS = (DECISION, TIME, RECIPIENT, DONORS, LIFE, COST, LOCI, TRAIT, TARGETS)
LETTERS = 112  # of the column


class CasePage(QWidget):
    """All sections in one column, with links to each at the top."""

    def __init__(self, desk: Desk) -> None:
        super().__init__()
        self._desk = desk
        self.title, self.species = text("", "title"), text("", "soft")
        self.evidence = text("", "small")
        self.sections = {plan.title: Section(desk, plan) for plan in SECTIONS}
        self.inner = QWidget()
        column = QVBoxLayout(self.inner)
        column.setContentsMargins(theme.UNIT * 4, theme.UNIT * 2, theme.UNIT * 3, theme.UNIT * 4)
        column.setSpacing(theme.HALF)
        for one in (self.title, self.species, self.evidence):
            column.addWidget(one)
        column.addSpacing(theme.UNIT * 2)
        for section in self.sections.values():
            column.addWidget(section)
        column.addStretch(1)
        self.area = scrolled(Column(self.inner, LETTERS))
        outer = QVBoxLayout(self)
        outer.setContentsMargins(0, 0, 0, 0)
        outer.setSpacing(0)
        outer.addWidget(self._links())
        outer.addWidget(rule())
        outer.addWidget(self.area, 1)
        desk.document.changed.connect(self.refresh)
        if desk.document.has_case:
            self.refresh(desk.document.case)

    def _links(self) -> QWidget:
        links = QWidget()
        flow = FlowLayout(links, gap=theme.UNIT * 2)
        flow.setContentsMargins(theme.UNIT * 4, theme.HALF, theme.UNIT * 3, theme.HALF)
        self.links = {}
        for name in self.sections:
            link = Link(name)
            link.setAccessibleName(f"Go to {name}")
            link.clicked.connect(lambda _=False, name=name: self.go_to(name))
            flow.addWidget(link)
            self.links[name] = link
        return links

    def refresh(self, case: Case) -> None:
        """Follow the case."""
        self.title.setText(case.title)
        self.species.setText(" · ".join(p for p in (case.species, case.authority) if p))
        self.evidence.setText(f"Numbers entered here, targets aside: {evidence_in_words(case)}")

    def go_to(self, name: str) -> None:
        """Bring a section to the top and its first field into focus."""
        section = self.sections[name]
        self.area.verticalScrollBar().setValue(section.y() - theme.UNIT)
        for one in section.findChildren(QWidget):
            if one.property("path") and one.isVisible():
                one.setFocus(Qt.FocusReason.ShortcutFocusReason)
                self.area.verticalScrollBar().setValue(section.y() - theme.UNIT)
                return
