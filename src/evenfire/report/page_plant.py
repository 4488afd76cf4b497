"""What a case's equipment does, as one self-contained page."""

from __future__ import annotations

from jinja2 import Environment, PackageLoader, StrictUndefined

from evenfire.appraisal.plant_sheet import BoilerSheet, PlantSheet, VesselSheet
from evenfire.report.cautions import CAUTIONS
from evenfire.report.figures_plant import level_drawing, load_drawing, starts_drawing, window_drawing
from evenfire.report.formats import digits, number, plain
from evenfire.report.page_inputs import notices_table
from evenfire.report.page_table import Group, Table
from evenfire.report.trade_units import gauge

PLANT_TEMPLATE = "plant.html"
FOR_COST_ONLY = "estimate for cost only"


def plant_page(sheet: PlantSheet) -> str:
    """The equipment of a case as one self-contained HTML text that loads nothing and runs no script."""
    environment = Environment(
        loader=PackageLoader("evenfire.report"),
        autoescape=True,
        undefined=StrictUndefined,
        trim_blocks=True,
        lstrip_blocks=True,
    )
    vessel = sheet.vessel
    return environment.get_template(PLANT_TEMPLATE).render(
        sheet=sheet,
        boiler_pressure=gauge(sheet.boiler_bar_abs),
        feedwater=plain(sheet.feedwater_degc),
        cautions=CAUTIONS,
        boilers=boilers_table(sheet.boilers),
        load=load_drawing(sheet.boilers),
        starts=starts_drawing(sheet.boilers),
        vessel=None if vessel is None else vessel_tables(sheet, vessel),
        window=None if vessel is None else window_drawing(vessel),
        level=None if vessel is None else level_drawing(vessel),
        assumed=notices_table(
            tuple(each for each in sheet.notices if each.severity == "assumed"),
            "Assumed by the program, because the case did not state it.",
        ),
        files=Table(caption="Input files, SHA-256.", head=("", ""), groups=(Group(rows=sheet.input_hashes),)),
    )


def boilers_table(boilers: tuple[BoilerSheet, ...]) -> Table:
    """One column per boiler: rating, efficiency, losses, starts and times."""
    rows = (
        ("Stands or on offer", *("in place" if each.existing else "on offer" for each in boilers)),
        ("Rating [kg/h]", *(number(each.rating_kg_h) for each in boilers)),
        ("Smallest continuous firing [kg/h]", *(number(each.lowest_firing_kg_h) for each in boilers)),
        ("Design pressure [bar g]", *(gauge(each.design_bar_abs) for each in boilers)),
        ("Efficiency, full load, net [%]", *(_percent(each.full_load_efficiency) for each in boilers)),
        (
            "Efficiency, lowest firing, net [%]",
            *(_percent(each.lowest_firing_efficiency) for each in boilers),
        ),
        ("Convex pieces of the fuel curve", *(str(each.convex_pieces) for each in boilers)),
    )
    losses = (
        ("Standing loss [kW]", *(digits(each.standing_loss_kw) for each in boilers)),
        ("Fuel on hot standby, net [kW]", *(digits(each.standby_fuel_kw) for each in boilers)),
        ("Fuel per burner start, net [kWh]", *(digits(each.start_fuel_kwh) for each in boilers)),
        ("Fuel per cold start, net [kWh]", *(number(each.cold_start_fuel_kwh) for each in boilers)),
    )
    times = (
        ("Own steam buffer [kg]", *(digits(each.buffer_kg) for each in boilers)),
        ("Most burner starts [1/h]", *(number(each.most_starts_per_h, 1) for each in boilers)),
        ("... at a load of [kg/h]", *(number(each.most_starts_at_kg_h) for each in boilers)),
        ("Shortest firing [min]", *(plain(each.minimum_firing_minutes) for each in boilers)),
        ("Shortest off time [min]", *(plain(each.minimum_off_minutes) for each in boilers)),
        ("Cold to steam [min]", *(number(each.cold_start_minutes) for each in boilers)),
        ("Ramp [% of rating/min]", *(digits(each.ramp_percent_per_minute) for each in boilers)),
    )
    return Table(
        caption="Boilers at today's boiler pressure.",
        head=("", *(each.name for each in boilers)),
        groups=(
            Group(rows=rows),
            Group(title="Heat and fuel that make no steam", rows=losses),
            Group(title="Starts and times", rows=times),
        ),
    )


def vessel_tables(sheet: PlantSheet, vessel: VesselSheet) -> tuple[Table, Table]:
    """One row per window: what the vessel does, and what the window asks of the boilers and costs."""
    windows = vessel.windows
    names = [f"{gauge(each.charged_bar_abs)} to {gauge(each.discharged_bar_abs)}" for each in windows]
    size = (
        f"{digits(vessel.volume_m3)} m³, {digits(vessel.diameter_m)} m in diameter, "
        f"cylinder {digits(vessel.cylinder_length_m)} m"
    )
    does = Table(
        caption=f"Steam and water by pressure window: {size}.",
        head=(
            "Window [bar g]",
            "Steam capacity [kg]",
            "per m³ [kg]",
            "Given per steam charged",
            "Make-up per cycle [kg]",
            "Release limit [kg/h]",
            "Level charged [% of D]",
            "Level discharged [% of D]",
            "Free surface discharged [m²]",
            "Largest safe fill [%]",
        ),
        groups=(
            Group(
                rows=tuple(
                    (
                        name,
                        number(each.steam_capacity_kg),
                        digits(each.capacity_kg_m3),
                        number(each.discharge_per_charge, 4),
                        number(each.make_up_kg, 1),
                        number(each.release_limit_kg_h),
                        number(100.0 * each.level_charged, 1),
                        number(100.0 * each.level_discharged, 1),
                        digits(each.free_surface_m2),
                        number(100.0 * each.largest_fill, 1),
                    )
                    for name, each in zip(names, windows, strict=True)
                )
            ),
        ),
    )
    asks = Table(
        caption=f"What each window asks for. Wall and mass: {FOR_COST_ONLY}.",
        head=(
            "Window [bar g]",
            "Boilers work at [bar g]",
            "More fuel [%]",
            "Boilers it rules out",
            "Standing loss [kW]",
            f"Wall [mm], {FOR_COST_ONLY}",
            f"Shell mass [t], {FOR_COST_ONLY}",
            f"Installed [thousand {sheet.currency}]",
        ),
        groups=(
            Group(
                rows=tuple(
                    (
                        name,
                        gauge(each.boiler_bar_abs),
                        rise_words(each.fuel_rise_percent),
                        ", ".join(ruled_out(sheet.boilers, each.fuel_rise_percent)) or "none",
                        digits(each.standing_loss_kw),
                        number(each.wall_thickness_mm, 1),
                        number(each.shell_mass_t, 1),
                        number(each.installed_cost / 1000.0),
                    )
                    for name, each in zip(names, windows, strict=True)
                )
            ),
        ),
        word_columns=(3,),
    )
    return does, asks


def rise_words(rises: tuple[float | None, ...]) -> str:
    """Rise of fuel over all boilers that may work at the pressure [%].

    >>> rise_words((0.0, None)), rise_words((0.41, 0.452, None)), rise_words((None,))
    ('0.0', '0.4 to 0.5', '–')
    """
    known = sorted(rise for rise in rises if rise is not None)
    if not known:
        return number(None)
    first, last = number(known[0], 1), number(known[-1], 1)
    return first if first == last else f"{first} to {last}"


def ruled_out(boilers: tuple[BoilerSheet, ...], rises: tuple[float | None, ...]) -> list[str]:
    """Boilers whose design pressure is below what a window asks for."""
    return [boiler.name for boiler, rise in zip(boilers, rises, strict=True) if rise is None]


def _percent(share: float) -> str:
    return number(100.0 * share, 1)
