"""Draws the mark of a plan: its letter's colour, dash pattern and marker."""

from __future__ import annotations

from PySide6.QtCore import QPointF, QRectF, Qt
from PySide6.QtGui import QPainter, QPainterPath, QPolygonF

from rescue_planner.desk import theme
from rescue_planner.desk.view import Scheme
from rescue_planner.projection.marks import PlanMark

_CORNERS = {
    "square": ((-1, -1), (1, -1), (1, 1), (-1, 1)),
    "triangle": ((0, -1.15), (1.1, 0.9), (-1.1, 0.9)),
    "triangle-down": ((0, 1.15), (1.1, -0.9), (-1.1, -0.9)),
    "diamond": ((0, -1.3), (1.3, 0), (0, 1.3), (-1.3, 0)),
    "cross": (
        (-0.4, -1.2), (0.4, -1.2), (0.4, -0.4), (1.2, -0.4), (1.2, 0.4), (0.4, 0.4),
        (0.4, 1.2), (-0.4, 1.2), (-0.4, 0.4), (-1.2, 0.4), (-1.2, -0.4), (-0.4, -0.4),
    ),
}  # fmt: skip


def marker_path(name: str, at: QPointF, radius: float) -> QPainterPath:
    """Return the outline of a marker around `at`."""
    path = QPainterPath()
    if name not in _CORNERS:
        path.addEllipse(at, radius, radius)
        return path
    points = [QPointF(at.x() + x * radius, at.y() + y * radius) for x, y in _CORNERS[name]]
    path.addPolygon(QPolygonF(points))
    path.closeSubpath()
    return path


def paint_sample(painter: QPainter, rect: QRectF, mark: PlanMark, scheme: Scheme) -> None:
    """Paint a short piece of a plan's line with its marker into `rect`."""
    painter.save()
    painter.setRenderHint(QPainter.RenderHint.Antialiasing)
    y = rect.center().y()
    painter.setPen(theme.plan_pen(mark, scheme, 2.0))
    painter.drawLine(QPointF(rect.left(), y), QPointF(rect.right(), y))
    painter.setPen(Qt.PenStyle.NoPen)
    painter.setBrush(theme.plan_colour(mark, scheme))
    painter.drawPath(marker_path(mark.marker, rect.center(), 3.6))
    painter.restore()
