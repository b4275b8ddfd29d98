"""Run the benchmarks, print the table, fail where a bar is missed.

`python tests/benchmarks [NAME ...]`: NAME picks `bench_NAME.py`; all where left out.
"""

from __future__ import annotations

import os
import sys
from importlib import import_module
from pathlib import Path

from rescue_planner import places

places.prepare_numerics()
os.environ.setdefault("QT_QPA_PLATFORM", "offscreen")


def main(names: list[str]) -> int:
    here = Path(__file__).parent
    found = [path.stem for path in sorted(here.glob("bench_*.py"))]
    chosen = [f"bench_{name}" for name in names] or found
    unknown = [name for name in chosen if name not in found]
    if unknown:
        sys.stderr.write(f"No benchmark {unknown[0][6:]}; there are: {[n[6:] for n in found]}\n")
        return 2
    missed = 0
    head = f"{'what':58} {'median':>10} {'least..most':>20} {'bar':>12}  held  times"
    print(head, "-" * len(head), sep="\n")
    for name in chosen:
        for row in import_module(name).rows():
            spread = f"{min(row.rounds):.3g}..{max(row.rounds):.3g}"
            held = "yes" if row.held else "NO"
            missed += not row.held
            note = f"{row.absolute} {row.note}".strip()
            print(
                f"{row.name:58} {row.median:>10.4g} {spread:>20} {row.bar:>12}  {held:4}  {note}",
                flush=True,
            )
    print(f"\n{missed} bars missed" if missed else "\nall bars held")
    return 1 if missed else 0


if __name__ == "__main__":
    sys.exit(main(sys.argv[1:]))
