"""Where panels stand: as many columns as fit, rows as high as their text needs."""

from __future__ import annotations

from collections.abc import Sequence

import pyqtgraph as pg

from rescue_planner.desk.charts.panel import MARGIN, Panel

LEAST_WIDTH = 268  # of a panel at normal text
PLOT_HEIGHT = 116
SPACE_ACROSS, SPACE_DOWN = 20, 12
MOST_COLUMNS = 4


class Grid:
    """The columns and rows of small multiples."""

    def __init__(self, layout: pg.GraphicsLayout) -> None:
        self._ci, self.columns = layout, 0
        layout.setContentsMargins(0, 0, 0, 0)
        layout.layout.setHorizontalSpacing(SPACE_ACROSS)
        layout.layout.setVerticalSpacing(SPACE_DOWN)

    def place(self, panels: Sequence[Panel], width: float, text_scale: float) -> int:
        """Stand the panels in `width`, and return the height they take."""
        each = LEAST_WIDTH * text_scale + SPACE_ACROSS
        columns = min(max(1, int((width + SPACE_ACROSS) / each)), len(panels), MOST_COLUMNS)
        if columns != self.columns:
            self._move_to(panels, columns)
        room = (width - SPACE_ACROSS * (columns - 1)) / columns - 2 * MARGIN - 4
        plot = PLOT_HEIGHT * (1 + 0.4 * (text_scale - 1))
        for panel in panels:
            panel.fit(plot)
        left = max(panel.values.fixed_width for panel in panels)
        rows = [panels[at : at + columns] for at in range(0, len(panels), columns)]
        lowest = len(panels) - columns  # panels from here on have none below them
        total = 0.0
        for row, members in enumerate(rows):
            scales = 2 if row * columns + len(members) > lowest else 1
            height = plot + self._fit_row(members, room, left, scales)
            self._ci.layout.setRowFixedHeight(row, height)
            total += height
        for row in range(len(rows), self._ci.layout.rowCount()):
            self._ci.layout.setRowFixedHeight(row, 0.0)
        return round(total + (len(rows) - 1) * SPACE_DOWN + 2)

    def _move_to(self, panels: Sequence[Panel], columns: int) -> None:
        self.columns = columns
        for panel in panels:
            self._ci.removeItem(panel)
        for i, panel in enumerate(panels):
            self._ci.addItem(panel, row=i // columns, col=i % columns)
        layout = self._ci.layout
        for column in range(max(columns, layout.columnCount())):
            used = column < columns
            layout.setColumnStretchFactor(column, 1 if used else 0)
            layout.setColumnPreferredWidth(column, 100.0 if used else 0.0)
            layout.setColumnSpacing(column, SPACE_ACROSS if column < columns - 1 else 0.0)

    def _fit_row(self, members: Sequence[Panel], room: float, left: float, scales: int) -> float:
        """Give all panels of a row the same parts, and return their height without the plot."""
        lines = max(panel.heading.rows_needed(room) for panel in members)
        below = not all(panel.heading.fits(room) for panel in members)
        for panel in members:
            panel.heading.lines, panel.heading.unit_below = lines, below
            panel.heading.resize_to_text()
            panel.time.rows = scales
            panel.time.resize_to_text()
            panel.values.fix_width(left)
        first = members[0]
        return first.heading.fixed_height + first.time.fixed_height + 2 * MARGIN
