"""What the equipment of a case does, boiler by boiler and window by window, in trade units.

Like ``results`` an edge of the program: fields carry trade units. No plan and no record is needed.
"""

from __future__ import annotations

from dataclasses import dataclass, field

import numpy as np
from numpy.typing import NDArray

from evenfire.accumulator import WindowPerformance, largest_fill_before_charging
from evenfire.appraisal.vessels import boiler_working_pa, price_on_curve, vessel_performance
from evenfire.boiler import (
    cycling_starts_per_s,
    lowest_firing_efficiency_lhv,
    operating_modes,
    standing_steam_kg_s,
    start_fuel_j_lhv,
    steam_heat_j_kg,
    working_pressure_factor,
)
from evenfire.case.case import BoilerOffer, Case, VesselOffer
from evenfire.errors import Notice
from evenfire.plant import WindowSpec
from evenfire.units import (
    J_PER_KWH,
    KG_PER_TONNE,
    SECONDS_PER_HOUR,
    k_to_degc,
    kg_s_to_kg_h,
    kg_s_to_t_h,
    pa_to_bar_abs,
)
from evenfire.water import saturation

FloatArray = NDArray[np.float64]

W_PER_KW, W_PER_MW = 1e3, 1e6
SECONDS_PER_MINUTE = 60.0
_CYCLING_POINTS = 40
_FIRING_POINTS = 60
_SMALLEST_LOAD = 0.02
"""Of lowest firing; towards no load the efficiency goes to nothing."""


@dataclass(frozen=True, slots=True, kw_only=True)
class AtLoad:
    """One boiler at one steady load."""

    efficiency: float
    """On net calorific value, purging and standing loss included [1]."""
    fuel_mw: float
    starts_per_h: float


@dataclass(frozen=True, slots=True, kw_only=True)
class BoilerSheet:
    """One boiler at today's boiler pressure; fuel and efficiency on net calorific value."""

    name: str
    existing: bool
    rating_kg_h: float
    lowest_firing_kg_h: float
    """Below it the burner cycles."""
    design_bar_abs: float
    full_load_efficiency: float
    lowest_firing_efficiency: float
    convex_pieces: int
    """Pieces of the fuel curve in the plan; one where it is convex."""
    standing_loss_kw: float
    standby_fuel_kw: float
    """Fuel of hot standby, purging apart."""
    start_fuel_kwh: float
    """Fuel that makes good the purge heat of one burner start."""
    cold_start_fuel_kwh: float
    cold_start_minutes: float
    buffer_kg: float
    minimum_firing_minutes: float
    minimum_off_minutes: float
    ramp_percent_per_minute: float
    most_starts_per_h: float
    most_starts_at_kg_h: float
    load_t_h: FloatArray = field(repr=False)
    """Steam output from near nothing to the rating."""
    fuel_mw: FloatArray = field(repr=False)
    """At each load, purging at burner starts included."""
    efficiency: FloatArray = field(repr=False)
    """Heat added to feedwater over that fuel [1]."""
    cycling_t_h: FloatArray = field(repr=False)
    """Loads from hot standby to lowest firing."""
    starts_per_h: FloatArray = field(repr=False)
    """At each of those."""
    plan_cycling_t_h: FloatArray = field(repr=False)
    """Points between which the plan takes straight lines."""
    plan_starts_per_h: FloatArray = field(repr=False)

    def at(self, share: float) -> AtLoad:
        """The boiler at a share of its rating, read off its curves."""
        load = share * self.rating_kg_h / KG_PER_TONNE
        return AtLoad(
            efficiency=float(np.interp(load, self.load_t_h, self.efficiency)),
            fuel_mw=float(np.interp(load, self.load_t_h, self.fuel_mw)),
            starts_per_h=float(np.interp(load, self.cycling_t_h, self.starts_per_h)),
        )


@dataclass(frozen=True, slots=True, kw_only=True)
class WindowSheet:
    """The vessel of the case's reference volume in one pressure window."""

    charged_bar_abs: float
    discharged_bar_abs: float
    boiler_bar_abs: float
    """What charging asks of the boilers."""
    fuel_rise_percent: tuple[float | None, ...]
    """Of each boiler's fuel by that pressure; None for a boiler that may not work at it."""
    steam_capacity_kg: float
    capacity_kg_m3: float
    discharge_per_charge: float
    make_up_kg: float
    """Water per full cycle: positive make-up, negative drain."""
    release_limit_kg_h: float
    standing_loss_kw: float
    level_charged: float
    """Water level over diameter [1]."""
    level_discharged: float
    fill_discharged: float
    """Liquid share of the volume [1]."""
    free_surface_m2: float
    """At the discharged level."""
    largest_fill: float
    """Charged fill from which charging on to full boiler pressure would just flood the vessel [1]."""
    wall_thickness_mm: float
    """Estimate for cost only."""
    shell_mass_t: float
    """Estimate for cost only."""
    installed_cost: float
    """By the case's own curve, before contingency."""


@dataclass(frozen=True, slots=True, kw_only=True)
class VesselSheet:
    """The vessel on offer at the volume its price is stated for."""

    volume_m3: float
    diameter_m: float
    cylinder_length_m: float
    charged_fill: float
    windows: tuple[WindowSheet, ...]


@dataclass(frozen=True, slots=True, kw_only=True)
class PlantSheet:
    """Everything the equipment of a case does by itself."""

    site: str
    currency: str
    boiler_bar_abs: float
    feedwater_degc: float
    boilers: tuple[BoilerSheet, ...]
    vessel: VesselSheet | None
    notices: tuple[Notice, ...]
    """Of the case, above all what was assumed because it did not state it."""
    input_hashes: tuple[tuple[str, str], ...]


def plant_sheet(case: Case) -> PlantSheet:
    """What each boiler and each pressure window of a case does.

    Parameters
    ----------
    case : Case
        From :func:`evenfire.case.load.load_case`; its record is not read.

    Raises
    ------
    OutOfRangeError
        Where a formula does not hold for the equipment stated.
    """
    site = case.conditions
    return PlantSheet(
        site=case.name,
        currency=case.finance.currency,
        boiler_bar_abs=pa_to_bar_abs(site.boiler_today_pa),
        feedwater_degc=k_to_degc(site.feedwater_k),
        boilers=tuple(_boiler_sheet(case, offer) for offer in case.boilers),
        vessel=None if case.vessel is None else _vessel_sheet(case, case.vessel),
        notices=case.notices,
        input_hashes=case.input_hashes,
    )


def _boiler_sheet(case: Case, offer: BoilerOffer) -> BoilerSheet:
    spec, site = offer.spec, case.conditions
    working_pa = site.boiler_today_pa
    modes = operating_modes(spec, working_pa, site.feedwater_k)
    standby = modes[0]
    cycling = [mode for mode in modes[1:] if not mode.firing]
    firing = [mode for mode in modes if mode.firing]
    lowest_kg_s = spec.rated_kg_s / spec.turndown
    start_fuel_j = start_fuel_j_lhv(spec, working_pa)

    below = np.linspace(0.0, lowest_kg_s, _CYCLING_POINTS + 1)
    starts = cycling_starts_per_s(
        below, lowest_kg_s, spec.buffer_kg, spec.minimum_off_s, standing_steam_kg_s(spec, working_pa)
    )
    knots = np.array([0.0, *(mode.high_kg_s for mode in cycling)])
    knot_fuel_w = np.array([standby.fuel_w_lhv[0], *(mode.fuel_w_lhv[-1] for mode in cycling)])
    knot_starts = np.array([standby.starts_per_s_low, *(mode.starts_per_s_high for mode in cycling)])
    some = below >= _SMALLEST_LOAD * lowest_kg_s
    above = np.linspace(lowest_kg_s, spec.rated_kg_s, _FIRING_POINTS)
    above = above[above > lowest_kg_s]
    curve_kg_s = np.concatenate([mode.output_kg_s for mode in firing])
    curve_w = np.concatenate([mode.fuel_w_lhv for mode in firing])
    load = np.concatenate([below[some], above])
    fuel_w = np.concatenate(
        [
            (np.interp(below, knots, knot_fuel_w) + starts * start_fuel_j)[some],
            np.interp(above, curve_kg_s, curve_w),
        ]
    )
    heat_j_kg = steam_heat_j_kg(working_pa, site.feedwater_k, spec.blowdown_fraction)
    most = int(np.argmax(starts))
    return BoilerSheet(
        name=spec.name,
        existing=offer.existing,
        rating_kg_h=kg_s_to_kg_h(spec.rated_kg_s),
        lowest_firing_kg_h=kg_s_to_kg_h(lowest_kg_s),
        design_bar_abs=pa_to_bar_abs(spec.largest_working_pa),
        full_load_efficiency=spec.rated_kg_s * heat_j_kg / float(curve_w[-1]),
        lowest_firing_efficiency=lowest_firing_efficiency_lhv(spec, working_pa),
        convex_pieces=len(firing),
        standing_loss_kw=spec.standing_loss_w / W_PER_KW,
        standby_fuel_kw=float(standby.fuel_w_lhv[0]) / W_PER_KW,
        start_fuel_kwh=start_fuel_j / J_PER_KWH,
        cold_start_fuel_kwh=spec.cold_start_energy_j / J_PER_KWH,
        cold_start_minutes=spec.cold_start_s / SECONDS_PER_MINUTE,
        buffer_kg=spec.buffer_kg,
        minimum_firing_minutes=spec.minimum_firing_s / SECONDS_PER_MINUTE,
        minimum_off_minutes=spec.minimum_off_s / SECONDS_PER_MINUTE,
        ramp_percent_per_minute=100.0 * spec.ramp_kg_s2 / spec.rated_kg_s * SECONDS_PER_MINUTE,
        most_starts_per_h=float(starts[most]) * SECONDS_PER_HOUR,
        most_starts_at_kg_h=kg_s_to_kg_h(float(below[most])),
        load_t_h=load * kg_s_to_t_h(1.0),
        fuel_mw=fuel_w / W_PER_MW,
        efficiency=load * heat_j_kg / fuel_w,
        cycling_t_h=below * kg_s_to_t_h(1.0),
        starts_per_h=starts * SECONDS_PER_HOUR,
        plan_cycling_t_h=knots * kg_s_to_t_h(1.0),
        plan_starts_per_h=knot_starts * SECONDS_PER_HOUR,
    )


def _vessel_sheet(case: Case, offer: VesselOffer) -> VesselSheet:
    found = [vessel_performance(case, offer.reference_m3, window) for window in offer.windows]
    return VesselSheet(
        volume_m3=offer.reference_m3,
        diameter_m=found[0].diameter_m,
        cylinder_length_m=found[0].cylinder_length_m,
        charged_fill=offer.rules.charged_fill,
        windows=tuple(
            _window_sheet(case, offer, window, performance)
            for window, performance in zip(offer.windows, found, strict=True)
        ),
    )


def _window_sheet(
    case: Case, offer: VesselOffer, window: WindowSpec, performance: WindowPerformance
) -> WindowSheet:
    working_pa = boiler_working_pa(case, window)
    steam_j_kg = float(saturation(working_pa).enthalpy_vapour_j_kg)
    return WindowSheet(
        charged_bar_abs=pa_to_bar_abs(window.charged_pa),
        discharged_bar_abs=pa_to_bar_abs(window.discharged_pa),
        boiler_bar_abs=pa_to_bar_abs(working_pa),
        fuel_rise_percent=tuple(_fuel_rise_percent(case, boiler, working_pa) for boiler in case.boilers),
        steam_capacity_kg=performance.steam_capacity_kg,
        capacity_kg_m3=performance.steam_capacity_kg / performance.volume_m3,
        discharge_per_charge=performance.discharge_per_charge,
        make_up_kg=performance.make_up_kg,
        release_limit_kg_h=kg_s_to_kg_h(performance.release_limit_kg_s),
        standing_loss_kw=performance.standing_loss_w / W_PER_KW,
        level_charged=performance.level_fraction_charged,
        level_discharged=performance.level_fraction_discharged,
        fill_discharged=performance.fill_discharged,
        free_surface_m2=performance.free_surface_discharged_m2,
        largest_fill=largest_fill_before_charging(window.charged_pa, working_pa, steam_j_kg),
        wall_thickness_mm=performance.wall_thickness_m * 1000.0,
        shell_mass_t=performance.shell_mass_kg / KG_PER_TONNE,
        installed_cost=price_on_curve(offer, offer.reference_m3, window.charged_pa),
    )


def _fuel_rise_percent(case: Case, offer: BoilerOffer, working_pa: float) -> float | None:
    """What a boiler pressure adds to a boiler's fuel at the same steam [%]."""
    if working_pa > offer.spec.largest_working_pa + 1.0:
        return None
    today, feedwater_k = case.conditions.boiler_today_pa, case.conditions.feedwater_k
    here = working_pressure_factor(offer.spec, working_pa, feedwater_k)
    return 100.0 * (here / working_pressure_factor(offer.spec, today, feedwater_k) - 1.0)
