"""The mixed-integer model as a file that any solver reads."""

from __future__ import annotations

from pathlib import Path

from evenfire.plan.compiled import compiled, highs_lp
from evenfire.plan.inputs import AlternativeRules, PlanInputs
from evenfire.plan.model import alternative_model
from evenfire.plan.quiet import QuietHighs


def write_model(inputs: PlanInputs, rules: AlternativeRules, file: Path) -> None:
    """Write the model of an alternative as MPS or LP, as the file's ending says.

    Raises
    ------
    OSError
        If the file cannot be written.
    """
    solver = QuietHighs()
    solver.passModel(highs_lp(compiled(alternative_model(inputs, rules)), integer=True, named=True))
    solver.writeModel(str(file))
    if not file.exists():
        raise OSError(f"{file} was not written")
