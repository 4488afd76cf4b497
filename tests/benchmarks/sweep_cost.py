"""What a 25-point fuel-price sweep of the cannery costs in appraisals: asked is at most four.

Both run in one process, one after the other, from nothing kept. Repeat with
``python tests/benchmarks/sweep_cost.py [CASE]``.
"""

from __future__ import annotations

import sys
import tempfile
import time
from pathlib import Path

from evenfire.appraisal.appraise import appraise
from evenfire.case.load import load_case
from evenfire.sweep.axis import axis
from evenfire.sweep.run import SweepRequest, sweep

CANNERY = Path(__file__).parents[2] / "cases" / "cannery"
ASKED_RATIO = 4.0


def main(case: Path) -> bool:
    """Print both times and their ratio; whether it is what was asked."""
    with tempfile.TemporaryDirectory() as folder:
        appraise(load_case(case))  # compiles what is compiled at first use
        start = time.perf_counter()
        appraise(load_case(case))
        appraisal_s = time.perf_counter() - start
        print(f"appraisal {appraisal_s:.1f} s", flush=True)
        start = time.perf_counter()
        request = SweepRequest(case=case, axes=(axis("fuel.price_per_mwh=20:120:25"),))
        result, _ = sweep(request, Path(folder) / "kept")
        sweep_s = time.perf_counter() - start
    gaps = [each.gap for point in result.points for each in point.alternatives if each.gap is not None]
    ratio = sweep_s / appraisal_s
    print(f"25-point fuel-price sweep {sweep_s:.1f} s: {ratio:.2f} appraisals, asked {ASKED_RATIO:g}")
    print(f"largest gap {100 * max(gaps):.3f} %, asked {100 * result.asked_gap:.3f} %")
    return ratio <= ASKED_RATIO


if __name__ == "__main__":
    sys.exit(0 if main(Path(sys.argv[1]) if len(sys.argv) > 1 else CANNERY) else 1)
