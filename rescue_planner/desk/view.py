"""How the user looks at the case: nothing here changes a result or goes into the case."""

from __future__ import annotations

from typing import Literal

from PySide6.QtCore import QObject, Signal

Axis = Literal["years", "generations"]
Scheme = Literal["light", "dark"]
TEXT_SCALES = (1.0, 1.25, 1.5, 2.0)


class ViewState(QObject):
    """Hidden plans, the axis, the colour scheme and the text size."""

    changed = Signal()

    def __init__(self, parent: QObject | None = None) -> None:
        super().__init__(parent)
        self._hidden: frozenset[str] = frozenset()
        self._axis: Axis = "years"
        self._scheme: Scheme = "light"
        self._text_scale = 1.0

    @property
    def hidden(self) -> frozenset[str]:
        """Names of the plans that are hidden everywhere."""
        return self._hidden

    @property
    def axis(self) -> Axis:
        """Which of the two time axes stands first."""
        return self._axis

    @property
    def scheme(self) -> Scheme:
        """Light or dark."""
        return self._scheme

    @property
    def text_scale(self) -> float:
        """Text size, 1 is the usual one."""
        return self._text_scale

    def set_hidden(self, plan: str, hidden: bool) -> None:
        """Hide or show one plan everywhere."""
        now = self._hidden | {plan} if hidden else self._hidden - {plan}
        self._set("_hidden", now)

    def show_all(self) -> None:
        """Hide nothing."""
        self._set("_hidden", frozenset())

    def set_axis(self, axis: Axis) -> None:
        """Choose the axis; results do not change."""
        self._set("_axis", axis)

    def set_scheme(self, scheme: Scheme) -> None:
        """Choose light or dark."""
        self._set("_scheme", scheme)

    def set_text_scale(self, scale: float) -> None:
        """Choose the text size."""
        self._set("_text_scale", scale)

    def _set(self, name: str, value: object) -> None:
        if getattr(self, name) != value:
            setattr(self, name, value)
            self.changed.emit()
