"""The Pyomo model as arrays: handed to HiGHS whole, and used to judge any point outside it."""

from __future__ import annotations

from dataclasses import dataclass, field
from typing import Any

import highspy
import numpy as np
import pyomo.environ as pyo
from numpy.typing import NDArray
from pyomo.repn.plugins.standard_form import LinearStandardFormCompiler
from scipy.sparse import csc_array

FloatArray = NDArray[np.float64]


@dataclass(frozen=True, slots=True, kw_only=True)
class CompiledModel:
    """Minimise cost @ x + offset with row_low <= matrix @ x <= row_high and lower <= x <= upper."""

    columns: tuple[Any, ...] = field(repr=False)
    """Pyomo variables in column order."""
    rows: tuple[Any, ...] = field(repr=False)
    """Pyomo constraints in row order."""
    matrix: csc_array = field(repr=False)
    row_low: FloatArray = field(repr=False)
    row_high: FloatArray = field(repr=False)
    cost: FloatArray = field(repr=False)
    offset: float
    lower: FloatArray = field(repr=False)
    upper: FloatArray = field(repr=False)
    integer: NDArray[np.bool_] = field(repr=False)

    def values(self) -> FloatArray:
        """The point now held by the Pyomo variables, shape (columns,)."""
        return np.array([column.value for column in self.columns], dtype=float)

    def load(self, point: FloatArray) -> None:
        """Put `point` into the Pyomo variables."""
        for column, value, integer in zip(self.columns, point, self.integer, strict=True):
            column.set_value(round(value) if integer else value, skip_validation=True)

    def objective(self, point: FloatArray) -> float:
        """Objective at `point` [k]."""
        return float(self.cost @ point + self.offset)

    def largest_violation(self, point: FloatArray) -> float:
        """Largest violation of any row, bound or integrality by `point`, in model units."""
        activity = self.matrix @ point
        rows = np.maximum(self.row_low - activity, activity - self.row_high)
        bounds = np.maximum(self.lower - point, point - self.upper)
        fraction = np.abs(point - np.round(point))[self.integer]
        return float(max(0.0, *(part.max(initial=0.0) for part in (rows, bounds, fraction))))


def compiled(model: pyo.ConcreteModel) -> CompiledModel:
    """Arrays of a Pyomo model with one linear objective to minimise."""
    form = LinearStandardFormCompiler().write(model, mixed_form=True)
    kinds = np.array([row.bound_type for row in form.rows])
    limits = np.asarray(form.rhs, dtype=float)
    low = np.where(kinds == 1, -np.inf, limits)
    high = np.where(kinds == -1, np.inf, limits)
    cost = np.asarray(form.c.todense(), dtype=float).ravel()
    return CompiledModel(
        columns=tuple(form.columns),
        rows=tuple(row.constraint for row in form.rows),
        matrix=csc_array(form.A),
        row_low=low,
        row_high=high,
        cost=cost,
        offset=float(form.c_offset[0]),
        lower=np.array([column.lb for column in form.columns], dtype=float),
        upper=np.array([column.ub for column in form.columns], dtype=float),
        integer=np.array([column.is_integer() for column in form.columns], dtype=bool),
    )


def highs_lp(model: CompiledModel, *, integer: bool, named: bool = False) -> highspy.HighsLp:
    """The model for HiGHS, with or without its integrality."""
    lp = highspy.HighsLp()
    rows, columns = model.matrix.shape
    lp.num_col_, lp.num_row_ = columns, rows
    lp.col_cost_ = model.cost
    lp.offset_ = model.offset
    lp.col_lower_, lp.col_upper_ = model.lower, model.upper
    lp.row_lower_, lp.row_upper_ = model.row_low, model.row_high
    lp.a_matrix_.format_ = highspy.MatrixFormat.kColwise
    lp.a_matrix_.start_ = model.matrix.indptr
    lp.a_matrix_.index_ = model.matrix.indices
    lp.a_matrix_.value_ = model.matrix.data
    if integer:
        kinds = (highspy.HighsVarType.kContinuous, highspy.HighsVarType.kInteger)
        lp.integrality_ = [kinds[int(flag)] for flag in model.integer]
    if named:
        lp.col_names_ = [solver_name(column.name) for column in model.columns]
        names = [row.name for row in model.rows]
        lp.row_names_ = [f"{solver_name(name)}_{i}" for i, name in enumerate(names)]
    return lp


def solver_name(name: str) -> str:
    """A Pyomo name as a name that MPS and LP files accept."""
    return name.replace("[", "(").replace("]", ")").replace(" ", "_")
