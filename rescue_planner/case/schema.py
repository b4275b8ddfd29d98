"""The JSON schema of a case file, from the types.

`python -m rescue_planner.case.schema docs/case.schema.json` writes it.
"""

from __future__ import annotations

import json
import sys
from pathlib import Path
from typing import Any

from pydantic.json_schema import GenerateJsonSchema

from rescue_planner.case.document import Case
from rescue_planner.case.fields import written


class _Schema(GenerateJsonSchema):
    """Pydantic's generator, with defaults as the file writes them."""

    def encode_default(self, dft: Any) -> Any:  # noqa: ANN401 - pydantic's own protocol
        return written(dft)


def case_schema() -> dict[str, Any]:
    """Return the JSON schema (draft 2020-12) of `case.json`, version 1.

    It holds types, bounds, units and meanings; what does not fit together across fields (an unknown
    donor, a release after the horizon) is found by `read_case` alone.
    """
    schema = Case.model_json_schema(schema_generator=_Schema)
    return {
        "$schema": "https://json-schema.org/draft/2020-12/schema",
        **schema,
        "title": "A case of Rescue Planner",
    }


def schema_text() -> str:
    """Return the schema as the file in docs holds it."""
    return json.dumps(case_schema(), ensure_ascii=False, indent=1) + "\n"


if __name__ == "__main__":
    Path(sys.argv[1]).write_text(schema_text(), encoding="utf-8", newline="\n")
