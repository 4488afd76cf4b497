"""What scenarios cost: priced at planned sizes, and planned anew in one process and in two.

Repeat with ``python tests/benchmarks/risk_scale.py [CASE] [PLANNED_ANEW]``.
"""

from __future__ import annotations

import sys
import tempfile
import time
from dataclasses import replace
from pathlib import Path

import numpy as np

from evenfire.case.load import load_case
from evenfire.sweep.risk import risk
from evenfire.sweep.scenarios import SCALED_LINES, scenarios

DYEHOUSE = Path(__file__).parents[2] / "cases" / "dyehouse"


def main(case: Path, anew: int) -> None:
    """Print seconds, scenarios per hour and the ratio of one process to two."""
    written = load_case(case)
    assert written.risk is not None
    for count in (10_000, 100_000, 1_000_000):
        start = time.perf_counter()
        drawn = scenarios(written, replace(written.risk, scenarios=count))
        costs = drawn.factors @ np.ones((len(SCALED_LINES), len(written.plan.alternatives)))
        print(f"{len(costs)} scenarios priced as planned: {time.perf_counter() - start:.2f} s", flush=True)
    seconds = []
    for processes in (1, 2):
        with tempfile.TemporaryDirectory() as folder:
            kept = Path(folder) / "kept"
            risk(case, kept, scenario_count=anew)
            start = time.perf_counter()
            risk(case, kept, scenario_count=anew, replan=anew, processes=processes)
            seconds.append(time.perf_counter() - start)
        print(
            f"{anew} scenarios planned anew in {processes} process(es): {seconds[-1]:.1f} s, "
            f"{3600 * anew / seconds[-1]:.0f} an hour",
            flush=True,
        )
    print(f"speed-up {seconds[0] / seconds[1]:.2f}")


if __name__ == "__main__":
    main(Path(sys.argv[1]) if len(sys.argv) > 1 else DYEHOUSE, int(sys.argv[2]) if len(sys.argv) > 2 else 12)
