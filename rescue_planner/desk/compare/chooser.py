"""Which measures are shown: a list with boxes to tick."""

from __future__ import annotations

from PySide6.QtCore import QSignalBlocker, Qt, Signal
from PySide6.QtWidgets import QListWidget, QListWidgetItem, QWidget

from rescue_planner.case.document import Case
from rescue_planner.case.measures import keys, measure_of, split, title
from rescue_planner.projection.results import Comparison

FIRST = ("relative_first_year_survival", "gene_diversity_kept", "inbreeding", "donor_ancestry")
ALWAYS_OFFERED = ("adults",)
LOCUS = ("allele_frequency", "allele_kept")


def opening(case: Case) -> tuple[str, ...]:
    """Return the measures that the page opens on."""
    found = list(FIRST) + (["adults"] if case.life_cycle is not None else [])
    for base in LOCUS:
        found += [f"{base}:{locus.name}" for locus in case.loci]
    return tuple(found)


def offered(case: Case, comparison: Comparison) -> tuple[str, ...]:
    """Return the measures that can be shown: those computed, first those the page opens on."""
    first = opening(case)
    locus = {key for key in keys(case) if split(key)[0] in LOCUS}
    there = set(comparison.measures) | locus | set(ALWAYS_OFFERED)
    return (*first, *(key for key in keys(case) if key in there and key not in first))


class MeasureChooser(QListWidget):
    """Space ticks the measure that has the focus."""

    chosen_changed = Signal()

    def __init__(self, parent: QWidget | None = None) -> None:
        super().__init__(parent)
        self.setAccessibleName("Measures shown")
        self._chosen: dict[str, bool] = {}  # what a person ticked or unticked
        self._keys: tuple[str, ...] = ()
        self._opening: tuple[str, ...] = ()
        self.itemChanged.connect(self._item_changed)

    def forget(self) -> None:
        """Go back to what the page opens on."""
        self._chosen.clear()
        self._keys = ()

    def offer(self, case: Case, comparison: Comparison) -> None:
        """Offer the measures of a case; ticks stay."""
        found, first = offered(case, comparison), opening(case)
        if (found, first) == (self._keys, self._opening):
            return
        self._keys, self._opening = found, first
        blocker = QSignalBlocker(self)
        self.clear()
        for key in found:
            item = QListWidgetItem(f"{title(key)} – {comparison.unit(key)}")
            item.setData(Qt.ItemDataRole.UserRole, key)
            item.setToolTip(measure_of(key).meaning)
            item.setFlags(
                Qt.ItemFlag.ItemIsEnabled
                | Qt.ItemFlag.ItemIsUserCheckable
                | Qt.ItemFlag.ItemIsSelectable
            )
            shown = self._chosen.get(key, key in first)
            item.setCheckState(Qt.CheckState.Checked if shown else Qt.CheckState.Unchecked)
            self.addItem(item)
        del blocker

    def _item_changed(self, item: QListWidgetItem) -> None:
        key = str(item.data(Qt.ItemDataRole.UserRole))
        self._chosen[key] = item.checkState() == Qt.CheckState.Checked
        self.chosen_changed.emit()

    def shown_keys(self) -> tuple[str, ...]:
        """Return the ticked measures, in their order."""
        return tuple(key for key in self._keys if self._chosen.get(key, key in self._opening))
