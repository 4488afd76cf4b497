"""``evenfire model``: the mixed-integer model of one alternative as a file."""

from __future__ import annotations

from pathlib import Path

from evenfire.appraisal.alternatives import RULES
from evenfire.appraisal.appraise import case_inputs
from evenfire.case.load import load_case
from evenfire.errors import ExitStatus, OutputError, Problem
from evenfire.plan.export import write_model

ENDINGS = (".mps", ".lp")


def run(case_path: Path, alternative: str, out: Path, *, replace: bool) -> ExitStatus:
    """Build the model of an alternative and write it beside, then rename."""
    case = load_case(case_path)
    if alternative not in RULES:
        raise OutputError(
            Problem(
                code="O106",
                where="--alternative",
                found=f"found '{alternative}'",
                allowed=f"must be one of {', '.join(RULES)}",
            )
        )
    if out.suffix not in ENDINGS or (out.exists() and not replace):
        raise OutputError(
            Problem(
                code="O107",
                where=str(out),
                found="the file exists" if out.suffix in ENDINGS else f"its ending is '{out.suffix}'",
                allowed="name a new file ending in .mps or .lp, or use --replace",
            )
        )
    inputs = case_inputs(case)
    beside = out.with_name(f".{out.stem}-writing{out.suffix}")
    try:
        write_model(inputs, RULES[alternative](inputs), beside)
        beside.replace(out)
    finally:
        beside.unlink(missing_ok=True)
    return ExitStatus.DONE
