"""A right case arrives in SI, each number converted as hand arithmetic says."""

from __future__ import annotations

import hashlib
from pathlib import Path

import pytest

from evenfire.case.load import load_case
from evenfire.case.schema_boiler import ExistingBoiler
from evenfire.demand.record_format import RecordFormat
from evenfire.errors import CaseError
from evenfire.plant import SteamConditions, WindowSpec

CASES = Path(__file__).parents[2] / "cases"


@pytest.fixture(scope="module")
def cannery():
    return load_case(CASES / "cannery")


@pytest.fixture(scope="module")
def dyehouse():
    return load_case(CASES / "dyehouse" / "case.toml")


def test_steam_conditions_are_absolute_and_in_kelvin(cannery):
    """Gauge pressures gain one standard atmosphere, drops do not, and degrees Celsius gain 273.15 K."""
    assert cannery.conditions == SteamConditions(
        process_pa=pytest.approx(501_325.0),
        boiler_today_pa=pytest.approx(1_001_325.0),
        feedwater_k=pytest.approx(376.15),
        charging_drop_pa=pytest.approx(50_000.0),
        discharging_drop_pa=pytest.approx(60_000.0),
        ambient_k=pytest.approx(293.15),
    )


def test_gross_fuel_price_becomes_dearer_per_net_joule(cannery):
    """46 per gross MWh is 46 / 0.90260 per net MWh (UK conversion factors 2023; F6)."""
    per_net_mwh = cannery.prices.fuel_per_j_lhv.amount * 3.6e9
    assert per_net_mwh == pytest.approx(46.0 / 0.90260, rel=1e-5)
    assert cannery.prices.fuel_per_j_lhv.escalation == pytest.approx(0.01)
    assert cannery.fuel_price_basis == "hhv"


def test_net_fuel_price_is_taken_as_it_is(write_example):
    """A price per net MWh is divided by the joules of a MWh and by nothing else."""
    case = load_case(write_example(('calorific_basis = "hhv"\nprice', 'calorific_basis = "lhv"\nprice')))
    assert case.prices.fuel_per_j_lhv.amount * 3.6e9 == pytest.approx(45.0, rel=1e-12)


def test_other_prices_are_per_si_unit(cannery):
    """Carbon and unmet steam per kg, electricity per J, water per kg at 1000 kg/m3, maintenance at 1."""
    prices = cannery.prices
    assert prices.carbon_per_kg.amount == pytest.approx(0.070)
    assert prices.electricity_per_j.amount == pytest.approx(140.0 / 3.6e9)
    assert prices.water_per_kg.amount == pytest.approx(2.6e-3)
    assert prices.unmet_steam_per_kg.amount == pytest.approx(0.4)
    assert prices.maintenance.amount == 1.0
    assert prices.maintenance.escalation == pytest.approx(0.02)


def test_fan_power_per_steam_flow(cannery):
    """3.5 kWh/t is 12.6 MJ per 1000 kg, so 12.6 kW per kg/s."""
    assert cannery.fan_power_w_per_kg_s == pytest.approx(12_600.0)


def test_boilers_come_in_file_order_existing_first(cannery):
    """The two in place keep their names; the catalogue's are named by their rating."""
    assert [offer.spec.name for offer in cannery.boilers] == [
        "Boiler 1, 5 t/h",
        "Boiler 2, 2.5 t/h",
        *(f"New boiler, {size} t/h" for size in (3, 4, 5, 6, 8, 10, 12)),
    ]
    assert [offer.existing for offer in cannery.boilers] == [True, True] + [False] * 7
    assert cannery.boilers[0].investment is None
    assert cannery.boilers[8].investment.amount == 512_000.0
    assert cannery.boilers[8].investment.life_years == 20


def test_stated_boiler_values_are_used(cannery):
    """What the case states arrives converted, not replaced by an assumption."""
    spec = cannery.boilers[0].spec
    assert spec.rated_kg_s == pytest.approx(5000.0 / 3600.0)
    assert spec.largest_working_pa == pytest.approx(1_701_325.0)
    assert [point.efficiency_lhv for point in spec.efficiency_points] == pytest.approx(
        [0.89, 0.91, 0.913, 0.906]
    )
    assert spec.standing_loss_w == pytest.approx(28_000.0)
    assert spec.minimum_firing_s == 600.0
    assert spec.minimum_off_s == 300.0
    assert spec.cold_start_s == 2700.0
    assert spec.blowdown_fraction == pytest.approx(0.04)
    assert cannery.boilers[0].maintenance_cost == 14_000.0
    assert cannery.boilers[0].start_wear_cost == 5.0


def test_from_and_at_rating_is_converted(dyehouse):
    """4 t/h from and at 100 degC is the same heat at 8 bar g from water at 95 degC.

    By steam tables (IF97 at 9.01325 bar: h'' = 2773.08 kJ/kg; water at 95 degC: 398.7 kJ/kg at 9 bar):
    4000 * 2256.5 / (2773.08 - 398.7) = 3801.4 kg/h.
    """
    assert dyehouse.boilers[0].spec.rated_kg_s * 3600.0 == pytest.approx(3801.4, abs=0.5)


def test_gross_efficiencies_are_converted_to_net(dyehouse):
    """79.0 % on gross is 79.0 / 0.90260 = 87.52 % on net (UK conversion factors 2023; F13)."""
    points = dyehouse.boilers[0].spec.efficiency_points
    assert points[-1].efficiency_lhv == pytest.approx(0.790 / 0.90260, rel=1e-5)


def test_windows_are_every_possible_pair(cannery):
    """Four charged and three discharged pressures of the cannery give twelve windows."""
    assert len(cannery.vessel.windows) == 12
    assert cannery.vessel.windows[0] == WindowSpec(charged_pa=951_325.0, discharged_pa=561_325.0)


def test_impossible_pair_is_skipped_with_a_notice(write_case):
    """5 bar g charged pairs with 4.6 only, and the two pairs that cannot exist are named."""
    case = load_case(write_case(("[8.5, 10.0", "[5.0, 10.0")))
    assert len(case.vessel.windows) == 10
    text = next(notice.text for notice in case.notices if notice.code == "C191")
    assert "5 to 5.2, 5 to 6 bar g" in text


def test_vessel_rules_and_cost(cannery):
    """Percentages become fractions and the cost slope is per pascal."""
    vessel = cannery.vessel
    assert vessel.rules.charged_fill == pytest.approx(0.9)
    assert vessel.rules.make_up_k == pytest.approx(376.15)
    assert vessel.reference_pa == pytest.approx(1_101_325.0)
    assert vessel.pressure_cost_per_pa == pytest.approx(2.5e-7)


def test_record_and_plan(cannery, dyehouse):
    """Minutes become seconds, percent become fractions, tonnes become kilograms."""
    assert cannery.record_format == RecordFormat(
        time_column="time", flow_column="steam_kg_h", flow_unit="kg/h", gaps="refuse", largest_gap_s=0.0
    )
    assert cannery.plan.step_s == 300.0
    assert cannery.plan.gap == pytest.approx(1e-3)
    assert cannery.plan.unmet_tolerance_kg_per_year == 5000.0
    assert dyehouse.plan.step_s == 900.0
    assert cannery.finance.discount_rate == pytest.approx(0.08)


def test_input_hashes_are_those_of_the_files(dyehouse):
    """The hashes are the sha256 of the bytes on disk."""
    assert dyehouse.input_hashes == tuple(
        (name, hashlib.sha256((CASES / "dyehouse" / name).read_bytes()).hexdigest())
        for name in ("case.toml", "steam.csv")
    )


def test_folder_and_file_are_the_same_case(dyehouse):
    """Naming the folder reads the case.toml in it."""
    assert load_case(CASES / "dyehouse") == dyehouse


def test_byte_order_mark_is_accepted(write_example):
    """An editor's byte order mark before the first key is no syntax error."""
    folder = write_example()
    file = folder / "case.toml"
    file.write_bytes(b"\xef\xbb\xbf" + file.read_bytes())
    assert load_case(folder).name == "Bottling hall (invented)"


def test_case_without_vessel_and_catalogue_asks_only_what_it_can(write_case):
    """With no section to buy from, the alternatives left out are 'as is' alone."""
    text = (CASES / "cannery" / "case.toml").read_text()
    start, end = text.index("[new_boiler]"), text.index("[money]")
    text = text[:start] + text[end:]
    text = text[: text.index("[plan]")]
    case = load_case(write_case(text=text))
    assert case.plan.alternatives == ("as is",)
    assert case.vessel is None
    assert len(case.boilers) == 2


def test_first_load_typed_with_rounding_starts_at_the_smallest_firing_load(write_case):
    """33.34 % typed for a turndown of 3 is taken as exactly one third."""
    case = load_case(
        write_case(
            ("turndown_ratio = 4.0", "turndown_ratio = 3.0"),
            ("load_percent = 25,", "load_percent = 33.34,"),
        )
    )
    assert case.boilers[0].spec.efficiency_points[0].load_fraction == 1.0 / 3.0


def test_electric_boiler_needs_no_purge_and_may_be_paid_to_run(write_example):
    """Electricity has no combustion air, no stack, one calorific value, and its price may be negative."""
    case = load_case(
        write_example(
            ('kind = "natural_gas"', 'kind = "electricity"'), ("price_per_mwh = 45.0", "price_per_mwh = -5.0")
        )
    )
    spec = case.boilers[0].spec
    assert spec.purge_energy_j == 0.0
    assert spec.stack_slope_per_k == 0.0
    assert case.prices.fuel_per_j_lhv.amount == pytest.approx(-5.0 / 3.6e9)


def test_fuel_factors_can_be_stated(write_example):
    """A stated net-to-gross ratio and CO2 factor replace the published ones and are not called assumed."""
    case = load_case(
        write_example(
            ("price_per_mwh = 45.0", "price_per_mwh = 45.0\nlhv_to_hhv = 0.9\nco2_kg_per_gj_lhv = 50.0")
        )
    )
    assert case.fuel.lhv_to_hhv == 0.9
    assert case.fuel.co2_kg_per_j_lhv == pytest.approx(50e-9)
    assert case.prices.fuel_per_j_lhv.amount * 3.6e9 == pytest.approx(50.0)
    assert not any(notice.text.startswith("fuel, lhv_to_hhv") for notice in case.notices)


STATED = """\
standing_loss_kw = 20.0
water_content_m3 = 7.0
purge_energy_kwh = 2.0
cold_start_fuel_kwh_lhv = 1500.0
cold_start_minutes = 60.0
ramp_percent_per_minute = 25.0
stack_loss_percent_per_k = 0.04
efficiency_pressure_bar_g = 7.0
burner_pressure_band_bar = 0.8
minimum_firing_minutes = 6.0
minimum_off_minutes = 4.0
start_wear_cost = 3.0
maintenance_per_year = 9000"""


def test_every_boiler_assumption_is_a_notice_naming_boiler_key_value_and_unit(write_example):
    """A boiler that states nothing optional has one notice for each of its twelve optional keys."""
    case = load_case(write_example())
    texts = [notice.text for notice in case.notices if notice.text.startswith("boiler 'Boiler 1', ")]
    keys = {text.removeprefix("boiler 'Boiler 1', ").split(":")[0] for text in texts}
    assert keys == {line.split(" = ")[0] for line in STATED.splitlines()} - {"maintenance_per_year"}
    assert "boiler 'Boiler 1', minimum_firing_minutes: not stated, assumed 10 min (default)" in texts
    assert all(notice.severity == "assumed" for notice in case.notices if notice.code == "C190")


def test_a_boiler_that_states_everything_has_no_assumption(write_example):
    """Stated values arrive in SI and no notice speaks of the boiler."""
    case = load_case(write_example(("maintenance_per_year = 9000", STATED)))
    spec = case.boilers[0].spec
    assert spec.purge_energy_j == pytest.approx(7.2e6)
    assert spec.cold_start_energy_j == pytest.approx(5.4e9)
    assert spec.ramp_kg_s2 == pytest.approx(4000.0 / 3600.0 * 0.25 / 60.0)
    assert spec.stack_slope_per_k == pytest.approx(4e-4)
    assert spec.efficiency_at_pa == pytest.approx(801_325.0)
    assert not any("Boiler 1" in notice.text for notice in case.notices)


def test_optional_boiler_keys_are_those_or_belong_to_the_stack():
    """The list of optional keys that the two tests above rest on leaves out only keys that shape others."""
    optional = {name for name, field in ExistingBoiler.model_fields.items() if not field.is_required()}
    shaping = {
        "efficiency_points",
        "stack_readings",
        "combustion_air_temperature_degc",
        "economiser",
        "casing_loss_kw",
        "purge_seconds",
        "purge_air_kg_h",
        "purge_gas_temperature_degc",
    }
    assert optional - shaping == {line.split(" = ")[0] for line in STATED.splitlines()} - {
        "maintenance_per_year"
    }


def test_missing_case_says_which_path(tmp_path):
    """A path that does not exist is named in the error."""
    with pytest.raises(CaseError, match=r"nowhere: no such file or folder; give a case folder .* \[C101\]"):
        load_case(tmp_path / "nowhere")


def test_folder_without_case_file_says_what_it_lacks(tmp_path):
    """A folder that is no case is refused naming the file that was looked for."""
    with pytest.raises(CaseError, match=r"case\.toml: no such file or folder"):
        load_case(tmp_path)
