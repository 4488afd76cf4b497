"""The model as a file: another reader of it finds the same optimum."""

from __future__ import annotations

from pathlib import Path

import highspy
import pytest

from evenfire.plan.compiled import compiled
from evenfire.plan.export import write_model
from evenfire.plan.milp import solve
from evenfire.plan.model import alternative_model
from tests.plan.sites import peaky_site


@pytest.mark.parametrize("ending", [".mps", ".lp"])
def test_the_file_has_the_model_s_optimum(tmp_path: Path, ending: str) -> None:
    """Read back and solved by HiGHS from the file alone."""
    inputs, rules = peaky_site()
    file = tmp_path / f"peaky{ending}"
    write_model(inputs, rules, file)
    solver = highspy.Highs()
    solver.setOptionValue("output_flag", False)
    solver.setOptionValue("threads", 1)
    solver.setOptionValue("mip_rel_gap", 1e-7)

    assert solver.readModel(str(file)) == highspy.HighsStatus.kOk
    solver.run()
    whole = solve(compiled(alternative_model(inputs, rules)), gap=1e-7, time_limit_s=60.0)

    assert solver.getModelStatus() == highspy.HighsModelStatus.kOptimal
    assert solver.getInfo().objective_function_value == pytest.approx(whole.cost_k, rel=1e-6)
