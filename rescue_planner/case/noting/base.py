"""What a remark is."""

from __future__ import annotations

from dataclasses import dataclass


@dataclass(frozen=True, slots=True)
class Remark:
    """Something to look at: a stable `key` for its kind, the `path` it is about, one text."""

    key: str
    path: str
    text: str

    @property
    def name(self) -> str:
        """What an answer refers to: key and path."""
        return f"{self.key} {self.path}".strip()
