"""What the desk remembers between sessions; a damaged or missing file is simply forgotten."""

from __future__ import annotations

import contextlib
import json
import os
from dataclasses import asdict, dataclass, field, fields
from pathlib import Path
from typing import Any

from rescue_planner import places

MOST_RECENT = 8


@dataclass(slots=True)
class Settings:
    """Recent files, look, and the window's place."""

    recent: list[str] = field(default_factory=list)
    scheme: str = "system"
    text_scale: float = 1.0
    axis: str = "years"
    explainer: bool = True
    geometry: str = ""
    by: str = ""

    @staticmethod
    def path() -> Path:
        """Return the file the settings are kept in."""
        return places.user_state() / "desk.json"

    @classmethod
    def load(cls) -> Settings:
        """Read the settings; what cannot be used is left at its default."""
        try:
            raw: Any = json.loads(cls.path().read_text(encoding="utf-8"))
        except (OSError, ValueError):
            return cls()
        made = cls()
        if isinstance(raw, dict):
            for one in fields(cls):
                held, now = raw.get(one.name), getattr(made, one.name)
                if isinstance(held, type(now)):
                    setattr(made, one.name, held)
        made.recent = [str(one) for one in made.recent][:MOST_RECENT]
        return made

    def save(self) -> None:
        """Write the settings; a folder that cannot be written to is no reason to stop."""
        path = self.path()
        with contextlib.suppress(OSError):
            path.parent.mkdir(parents=True, exist_ok=True)
            beside = path.with_suffix(".new")
            beside.write_text(json.dumps(asdict(self), indent=1), encoding="utf-8")
            os.replace(beside, path)  # noqa: PTH105 - the one call that replaces on every system

    def opened(self, path: Path) -> None:
        """Put a file first among the recent ones."""
        name = str(path.resolve())
        self.recent = [name, *(one for one in self.recent if one != name)][:MOST_RECENT]
        self.save()
