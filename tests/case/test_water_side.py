"""Blowdown, deaerator, purge air and fill of a case, and the bad input that physics forbids."""

from __future__ import annotations

import iapws
import numpy as np
import pytest
from scipy.integrate import solve_ivp

from evenfire.case.load import load_case
from evenfire.demand.read import demand_record

BOILER_MPA = 1.001325
"""9 bar g."""


def test_blowdown_over_feedwater_is_more_over_steam(write_case):
    """5 % of feedwater are 5/95 of the steam (US DOE Steam Tip Sheet 9: feedwater = steam / (1 - r))."""
    folder = write_case(("blowdown_percent = 4.0", 'blowdown_percent = 5.0\nblowdown_basis = "feedwater"'))

    assert load_case(folder).boilers[0].spec.blowdown_fraction == pytest.approx(5.0 / 95.0, rel=1e-12)


def test_record_behind_the_deaerator_is_raised_by_its_steam(write_case):
    """Water of 60 degC heated to 103 by boiler steam: mass and heat of the deaerator close by iapws."""
    folder = write_case(('gaps = "refuse"', 'gaps = "refuse"\ndeaerator_inlet_temperature_degc = 60.0'))
    (folder / "steam.csv.gz").unlink()
    rows = "\n".join(f"2026-02-{2 + i // 1440:02d}T{i // 60 % 24:02d}:{i % 60:02d},380" for i in range(2880))
    (folder / "steam.csv").write_text("time,steam_kg_h\n" + rows + "\n")
    text = (folder / "case.toml").read_text().replace("steam.csv.gz", "steam.csv")
    (folder / "case.toml").write_text(text)
    case = load_case(folder)
    record = demand_record(case.record_file, case.record_format)

    made = float(record.flow_kg_s[0]) * 3600.0
    taken = made - 380.0
    feedwater = 1.04 * made
    cold, hot = (iapws.IAPWS97(P=BOILER_MPA, T=273.15 + t).h for t in (60.0, 103.0))
    steam = iapws.IAPWS97(P=BOILER_MPA, x=1).h
    assert (feedwater - taken) * cold + taken * steam == pytest.approx(feedwater * hot, rel=1e-6)
    assert 0.07 < taken / made < 0.09
    assert [notice.code for notice in record.notices if "deaerator" in notice.text] == ["R201"]


def test_without_the_key_the_record_is_all_steam_made(write_case):
    """Nothing is raised where the case does not say that the meter misses steam."""
    assert load_case(write_case()).record_format.share_before_meter == 0.0


def test_stated_purge_air_replaces_the_assumed(write_case):
    """3600 kg/h for 60 s from 20 to 150 degC are 60 kg times 1.01 kJ/(kg K) times 130 K."""
    folder = write_case(("standing_loss_kw = 28.0", "standing_loss_kw = 28.0\npurge_air_kg_h = 3600.0"))
    case = load_case(folder)

    assert case.boilers[0].spec.purge_energy_j == pytest.approx(60.0 * 1010.0 * 130.0, rel=1e-9)
    (notice,) = [x for x in case.notices if "purge_energy_kwh" in x.text and "'Boiler 1" in x.text]
    assert "3600 kg/h of air" in notice.text


def test_fill_that_charging_on_would_flood_is_refused(write_case, problems_of):
    """Charged to 5 bar g at 95 % with boilers at 9: full before 9 bar g, as an independent balance says."""
    folder = write_case(
        ("charged_fill_percent = 90.0", "charged_fill_percent = 95.0"),
        ("charged_pressures_bar_g = [8.5, 10.0, 12.0, 15.0]", "charged_pressures_bar_g = [5.0]"),
        ("discharged_pressures_bar_g = [4.6, 5.2, 6.0]", "discharged_pressures_bar_g = [4.6]"),
    )
    (line,) = problems_of(folder)
    largest = float(line.split("must be below ")[1].split(" %")[0])

    assert line.endswith("[C138]")
    assert "charged_pressures_bar_g[0] = 5 bar g to boilers at 9 bar g floods" in line
    assert _fill_at(largest / 100.0, 0.601325, BOILER_MPA) == pytest.approx(1.0, abs=1e-3)


def _fill_at(fill: float, low_mpa: float, high_mpa: float) -> float:
    """Liquid share after charging dry steam of the higher pressure, dU = h dm integrated over pressure."""
    steam = iapws.IAPWS97(P=high_mpa, x=1).h

    def state(mpa: float) -> tuple[float, float, float, float]:
        water, vapour = iapws.IAPWS97(P=mpa, x=0), iapws.IAPWS97(P=mpa, x=1)
        return water.v, vapour.v, water.u, vapour.u

    def energy(mpa: float, mass: float) -> float:
        v1, v2, u1, u2 = state(mpa)
        quality = (1.0 / mass - v1) / (v2 - v1)
        return mass * (u1 + quality * (u2 - u1))

    def slope(mpa: float, mass: np.ndarray) -> list[float]:
        step = 1e-5
        by_pressure = (energy(mpa + step, mass[0]) - energy(mpa - step, mass[0])) / (2 * step)
        by_mass = (energy(mpa, mass[0] * (1 + 1e-6)) - energy(mpa, mass[0] * (1 - 1e-6))) / (2e-6 * mass[0])
        return [by_pressure / (steam - by_mass)]

    v1, v2, _, _ = state(low_mpa)
    begun = fill / v1 + (1.0 - fill) / v2
    ended = solve_ivp(slope, (low_mpa, high_mpa), [begun], rtol=1e-8).y[0, -1]
    v1, v2, _, _ = state(high_mpa)
    return (ended - 1.0 / v2) / (1.0 / v1 - 1.0 / v2)


@pytest.mark.parametrize(
    ("old", "new", "said", "code"),
    [
        ("charged_fill_percent = 90.0", "charged_fill_percent = 101.0", "from 20 to 95 %", "C106"),
        ("charged_fill_percent = 90.0", "charged_fill_percent = 0.9", "from 20 to 95 %", "C106"),
        ("{ load_percent = 25, eff", "{ load_percent = 30, eff", "smallest firing load", "C116"),
        ("load_percent = 100, efficiency_percent = 90.6", "load_percent = 110, efficiency_percent = 90.6",
         "at most 100 %", "C106"),
        ("efficiency_percent = 91.3", "efficiency_percent = 101.3", "to 100 %", "C106"),
        ('calorific_basis = "lhv"\nefficiency_points = [\n  { load_percent = 25',
         'calorific_basis = "hhv"\nefficiency_points = [\n  { load_percent = 25', "mostly net", "C117"),
        ("feedwater_temperature_degc = 103.0", "feedwater_temperature_degc = 185.0", "below boiling", "C111"),
        ("blowdown_percent = 4.0", 'blowdown_percent = 40.0\nblowdown_basis = "feedwater"', "33 %", "C137"),
        ('gaps = "refuse"', 'gaps = "refuse"\ndeaerator_inlet_temperature_degc = 110.0', "heats its", "C136"),
    ],
)  # fmt: skip
def test_what_physics_forbids_is_refused(write_case, problems_of, old, new, said, code):
    """Each physical impossibility gets one message that says what is allowed."""
    (line,) = problems_of(write_case((old, new)))

    assert said in line
    assert line.endswith(f"[{code}]")


def test_efficiency_above_what_the_stack_leaves_is_refused(write_case, problems_of):
    """200 degC at 3 % O2 leave about 91.5 % of net calorific value; 94.6 % cannot be."""
    folder = write_case(
        ("turndown_ratio = 5.0", 'turndown_ratio = 5.0\nstack_readings = [\n'
         "  { load_percent = 20, stack_temperature_degc = 150, o2_percent = 5.0 },\n"
         "  { load_percent = 100, stack_temperature_degc = 200, o2_percent = 3.0 },\n]"),
    )  # fmt: skip

    lines = problems_of(folder)
    assert lines
    assert all(line.endswith("[C129]") for line in lines)
    assert "leaves at that load" in lines[0]


def test_deaerator_steam_beside_a_fuel_meter_is_refused(write_case, problems_of):
    """A gas meter counts the fuel of the deaerator's steam already."""
    folder = write_case(
        ('flow_unit = "kg/h"', 'flow_unit = "kW"\nheat_meter = { boiler_efficiency_percent = 88.0 }'),
        ('gaps = "refuse"', 'gaps = "refuse"\ndeaerator_inlet_temperature_degc = 60.0'),
    )
    (line,) = problems_of(folder)

    assert "fuel meter" in line
    assert line.endswith("[C136]")
