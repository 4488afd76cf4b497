"""A vessel run through given flows, its inventory kept by make-up and drain."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
import numpy.typing as npt
from numba import njit

from evenfire.accumulator.balance import liquid_fill_of, next_state, pressure_of, state_at
from evenfire.accumulator.geometry import vessel_shape
from evenfire.accumulator.tables import (
    LARGEST_TABLE_PA,
    SMALLEST_TABLE_PA,
    saturation_table,
)
from evenfire.errors import OutOfRangeError, Problem, out_of_range
from evenfire.plant import VesselSpec
from evenfire.units import PA_PER_BAR
from evenfire.water import flash_steam_kg_m3, liquid_enthalpy_j_kg

FloatArray = npt.NDArray[np.float64]

LEVEL_CONTROL_S = 600.0
"""Time in which make-up or drain takes out a difference of inventory."""


@dataclass(frozen=True, slots=True, kw_only=True)
class VesselState:
    """Mass and internal energy of the water and steam in a vessel."""

    mass_kg: float
    energy_j: float
    pressure_pa: float
    liquid_fill: float


@dataclass(frozen=True, slots=True, kw_only=True)
class AccumulatorRun:
    """A vessel's way through a series of flows; states have one more entry than flows."""

    step_s: float
    pressure_pa: FloatArray
    mass_kg: FloatArray
    energy_j: FloatArray
    liquid_fill: FloatArray
    make_up_kg: FloatArray
    """Make-up water per step [kg]."""
    drain_kg: FloatArray
    """Drained boiling water per step [kg]."""
    discharge_j: FloatArray
    """Energy of the discharged steam per step [J]."""
    drain_j: FloatArray
    """Energy of the drained water per step [J]."""
    loss_j: FloatArray
    """Heat lost through the wall per step [J]."""


class SteamAccumulator:
    """The two-phase balance of one vessel, ready to run; compiled, a year of minutes in under a second.

    dm/dt = charge + make-up - discharge - drain;
    dU/dt = charge h_c + make-up h_m - discharge h''(p) - drain h'(p) - UA (T(p) - T_amb).

    The inventory line is the mass that the vessel holds at each pressure while it discharges from its charged
    state. Below the line make-up water flows in, above it boiling water is drained, each at the difference
    over ``level_control_s``.

    Parameters
    ----------
    spec : VesselSpec
    charging_enthalpy_j_kg : float
        Enthalpy of the charging steam [J/kg].
    ambient_k : float
        Temperature around the vessel [K].
    level_control_s : float
        Time constant of make-up and drain [s]; infinite for a vessel without either.

    Raises
    ------
    OutOfRangeError
        P120 for a window outside the table (0.2 to 160 bar absolute); P121 and P122 for fill, volume, shape;
        P129 for a level control time not above 0.

    Notes
    -----
    Equilibrium of both phases is assumed. Fast pressure changes are damped in reality by the rate of
    evaporation and condensation (Stevanovic et al. 2012), which this leaves out. Wall steel takes part in
    neither storing nor losing heat: leaving it out understates steam capacity by a few percent (safe side).

    Examples
    --------
    >>> from evenfire.plant import VesselRules, WindowSpec
    >>> rules = VesselRules(charged_fill=0.9, length_to_diameter=3.5, release_kg_m2_h_per_bar=220.0,
    ...                     heat_loss_w_m2k=0.0, make_up_k=293.15)
    >>> spec = VesselSpec(volume_m3=1.0, window=WindowSpec(charged_pa=10e5, discharged_pa=5e5), rules=rules)
    >>> vessel = SteamAccumulator(spec, 2780.667e3, 293.15, level_control_s=float("inf"))
    >>> run = vessel.run(charge_kg_s=np.zeros(60), discharge_kg_s=np.full(60, 45.8708 / 3600), step_s=60.0)
    >>> round(float(run.pressure_pa[-1]) / 1e5, 3)
    5.0
    """

    def __init__(
        self,
        spec: VesselSpec,
        charging_enthalpy_j_kg: float,
        ambient_k: float,
        level_control_s: float = LEVEL_CONTROL_S,
    ) -> None:
        for pressure in (spec.window.charged_pa, spec.window.discharged_pa):
            if not SMALLEST_TABLE_PA <= pressure <= LARGEST_TABLE_PA:
                raise out_of_range(
                    "P120",
                    "pressure window",
                    pressure / PA_PER_BAR,
                    "bar abs",
                    SMALLEST_TABLE_PA / PA_PER_BAR,
                    LARGEST_TABLE_PA / PA_PER_BAR,
                )
        if not level_control_s > 0.0:
            raise out_of_range("P129", "level control time", level_control_s, "s", 0.0, np.inf)
        self.spec = spec
        self.charging_enthalpy_j_kg = charging_enthalpy_j_kg
        self.ambient_k = ambient_k
        self.level_control_s = level_control_s
        shape = vessel_shape(spec.volume_m3, spec.rules.length_to_diameter)
        self.loss_w_per_k = spec.rules.heat_loss_w_m2k * shape.surface_m2
        self.make_up_enthalpy_j_kg = float(liquid_enthalpy_j_kg(spec.rules.make_up_k, spec.window.charged_pa))
        pressure_pa, mass_kg_m3 = flash_steam_kg_m3(
            spec.window.charged_pa, spec.window.discharged_pa, spec.rules.charged_fill
        )
        self.inventory_pressure_pa = np.ascontiguousarray(pressure_pa[::-1])
        self.inventory_kg = np.ascontiguousarray(mass_kg_m3[::-1] * spec.volume_m3)

    def state(self, pressure_pa: float, liquid_fill: float) -> VesselState:
        """The state at a pressure [Pa] and a liquid volume fraction [1].

        Raises
        ------
        OutOfRangeError
            P120 for a pressure outside the table, P121 for a fill outside 0 to 1.
        """
        if not SMALLEST_TABLE_PA <= pressure_pa <= LARGEST_TABLE_PA:
            raise out_of_range(
                "P120", "vessel pressure", pressure_pa, "Pa", SMALLEST_TABLE_PA, LARGEST_TABLE_PA
            )
        if not 0.0 <= liquid_fill <= 1.0:
            raise out_of_range("P121", "liquid fill", liquid_fill, "", 0.0, 1.0)
        table = saturation_table()
        mass, energy = state_at(table.grid, table.coefficients, self.spec.volume_m3, pressure_pa, liquid_fill)
        return VesselState(mass_kg=mass, energy_j=energy, pressure_pa=pressure_pa, liquid_fill=liquid_fill)

    def run(
        self,
        charge_kg_s: npt.ArrayLike,
        discharge_kg_s: npt.ArrayLike,
        step_s: float,
        start: VesselState | None = None,
    ) -> AccumulatorRun:
        """Drive the vessel by its flows, from the charged state unless ``start`` says otherwise.

        Parameters
        ----------
        charge_kg_s, discharge_kg_s : arrays (n,)
            Steam in and out, constant over each step [kg/s], not negative.
        step_s : float
            Length of a step [s].
        start : VesselState, optional

        Returns
        -------
        AccumulatorRun
            States (n + 1,) and flows (n,).

        Raises
        ------
        OutOfRangeError
            P131 for flows that are negative, not finite or of unequal length; P130 when the vessel floods,
            boils dry or leaves 0.2 to 160 bar, with the step at which it does.
        """
        charge = np.ascontiguousarray(charge_kg_s, dtype=np.float64)
        discharge = np.ascontiguousarray(discharge_kg_s, dtype=np.float64)
        if charge.shape != discharge.shape or charge.ndim != 1 or not 0.0 < step_s < np.inf:
            raise OutOfRangeError(
                Problem(
                    code="P131",
                    where="flows of the vessel",
                    found=f"found shapes {charge.shape} and {discharge.shape}, step {step_s:g} s",
                    allowed="give two series of one length and a step above 0",
                )
            )
        for name, flow in (("charging steam", charge), ("discharged steam", discharge)):
            bad = ~(np.isfinite(flow) & (flow >= 0.0))
            if bad.any():
                raise out_of_range("P131", name, float(flow[bad][0]), "kg/s", 0.0, np.inf)
        first = start or self.state(self.spec.window.charged_pa, self.spec.rules.charged_fill)
        table = saturation_table()
        states, flows, done = _run(
            table.grid,
            table.coefficients,
            self.spec.volume_m3,
            self.loss_w_per_k,
            self.ambient_k,
            self.charging_enthalpy_j_kg,
            self.make_up_enthalpy_j_kg,
            self.level_control_s,
            self.inventory_pressure_pa,
            self.inventory_kg,
            first.mass_kg,
            first.energy_j,
            first.pressure_pa,
            charge,
            discharge,
            step_s,
        )
        if done < len(charge):
            fill = float(states[3, done])
            raise OutOfRangeError(
                Problem(
                    code="P130",
                    where=f"vessel at step {done} ({done * step_s:g} s)",
                    found=(
                        f"leaves the two-phase region or the table from {states[0, done] / PA_PER_BAR:.4g} "
                        f"bar abs and a liquid fill of {fill:.4g}"
                    ),
                    allowed="less discharge, less charge or a lower charged fill",
                )
            )
        return AccumulatorRun(
            step_s=step_s,
            pressure_pa=states[0],
            mass_kg=states[1],
            energy_j=states[2],
            liquid_fill=states[3],
            make_up_kg=flows[0],
            drain_kg=flows[1],
            discharge_j=flows[2],
            drain_j=flows[3],
            loss_j=flows[4],
        )


@njit(cache=True)  # type: ignore[untyped-decorator]  # numba has no types
def inventory_difference_kg(
    inventory_pressure_pa: FloatArray, inventory_kg: FloatArray, pressure_pa: float, mass_kg: float
) -> float:
    """Mass that the vessel lacks (positive) or has too much (negative) against its inventory line [kg]."""
    return np.interp(pressure_pa, inventory_pressure_pa, inventory_kg) - mass_kg


@njit(cache=True)  # type: ignore[untyped-decorator]  # numba has no types
def _run(
    grid: FloatArray,
    coefficients: FloatArray,
    volume_m3: float,
    loss_w_per_k: float,
    ambient_k: float,
    charging_enthalpy_j_kg: float,
    make_up_enthalpy_j_kg: float,
    level_control_s: float,
    inventory_pressure_pa: FloatArray,
    inventory_kg: FloatArray,
    mass_kg: float,
    energy_j: float,
    pressure_pa: float,
    charge_kg_s: FloatArray,
    discharge_kg_s: FloatArray,
    step_s: float,
) -> tuple[FloatArray, FloatArray, int]:
    steps = len(charge_kg_s)
    states = np.empty((4, steps + 1))
    flows = np.zeros((5, steps))
    pressure_pa = pressure_of(grid, coefficients, volume_m3, mass_kg, energy_j, pressure_pa)
    states[0, 0], states[1, 0], states[2, 0] = pressure_pa, mass_kg, energy_j
    states[3, 0] = liquid_fill_of(grid, coefficients, volume_m3, mass_kg, pressure_pa)
    for step in range(steps):
        lacking = inventory_difference_kg(inventory_pressure_pa, inventory_kg, pressure_pa, mass_kg)
        correction_kg_s = lacking / max(level_control_s, step_s)
        make_up_kg_s, drain_kg_s = max(correction_kg_s, 0.0), max(-correction_kg_s, 0.0)
        mass_kg, energy_j, pressure_pa, discharge_j, drain_j, loss_j = next_state(
            grid,
            coefficients,
            volume_m3,
            loss_w_per_k,
            ambient_k,
            mass_kg,
            energy_j,
            pressure_pa,
            charge_kg_s[step],
            charging_enthalpy_j_kg,
            discharge_kg_s[step],
            make_up_kg_s,
            make_up_enthalpy_j_kg,
            drain_kg_s,
            step_s,
        )
        if np.isnan(pressure_pa):
            return states, flows, step
        states[0, step + 1], states[1, step + 1], states[2, step + 1] = pressure_pa, mass_kg, energy_j
        states[3, step + 1] = liquid_fill_of(grid, coefficients, volume_m3, mass_kg, pressure_pa)
        flows[0, step], flows[1, step] = make_up_kg_s * step_s, drain_kg_s * step_s
        flows[2, step], flows[3, step], flows[4, step] = discharge_j, drain_j, loss_j
    return states, flows, steps
