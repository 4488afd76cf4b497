"""Every wrong case is refused with file, key, what was found and what is accepted."""

# ruff: noqa: E501 (messages stand as a user reads them)

from __future__ import annotations

import pytest

from evenfire.case.load import load_case
from evenfire.case.page import EXAMPLE
from evenfire.errors import CaseError, ExitStatus

REFUSALS = [
    pytest.param(
        ("[fuel]", "[fuel"),
        "case.toml: line 25, column 6: not TOML: Expected ']' at the end of a table declaration;"
        " mend the line; see toml.io [C102]",
        id="syntax",
    ),
    pytest.param(
        ("price_per_mwh = 46.0", "price_per_mhw = 46.0\nprice_per_mwh = 46.0"),
        "case.toml: fuel.price_per_mhw: unknown key; did you mean 'price_per_mwh'? [C103]",
        id="misspelt key",
    ),
    pytest.param(
        ('kind = "natural_gas"', 'kind = "natural_gas"\nblowdown_percent = 4.0'),
        "case.toml: fuel.blowdown_percent: unknown key; it belongs in [steam] [C103]",
        id="key of another section",
    ),
    pytest.param(
        ("price_per_mwh = 46.0", "price_per_mwh = 46.0\nfan_and_pump_kwh_per_t_steam = 3.0"),
        "case.toml: fuel.fan_and_pump_kwh_per_t_steam: unknown key; it belongs in [money] [C103]",
        id="key of the money section",
    ),
    pytest.param(
        ('gaps = "refuse"', 'gaps = "refuse"\ngood_status = "Good"'),
        "case.toml: record.good_status: found 'Good'; must be a list of text [C105]",
        id="text where a list belongs",
    ),
    pytest.param(
        ("{ rating_kg_h = 4000, installed", "{ rating_kg_h = 4000, casing_loss_kw = 12.0, installed"),
        "case.toml: new_boiler, sizes[1].casing_loss_kw: stated without stack_readings; state stack_readings, which it"
        " belongs to, or leave it out [C131]",
        id="casing loss of a size without readings",
    ),
    pytest.param(
        ("[plan]", "[plans]"),
        "case.toml: plans: unknown section; did you mean 'plan'? [C103]",
        id="misspelt section",
    ),
    pytest.param(
        ("price_per_mwh = 46.0", ""),
        "case.toml: fuel.price_per_mwh: missing; state it: must be a number from -100000 to 100000"
        " currency/MWh [C104]",
        id="missing key",
    ),
    pytest.param(
        ("horizon_years = 15", 'horizon_years = "15"'),
        "case.toml: money.horizon_years: found '15'; must be a whole number from 1 to 60 a [C105]",
        id="number as text",
    ),
    pytest.param(
        ("horizon_years = 15", "horizon_years = 15.5"),
        "case.toml: money.horizon_years: found 15.5 a; must be a whole number from 1 to 60 a [C105]",
        id="part of a year",
    ),
    pytest.param(
        ("turndown_ratio = 2.5", "turndown_ratio = true"),
        "case.toml: boiler 'Boiler 2, 2.5 t/h', turndown_ratio: found true; must be a number from 1 to 100 [C105]",
        id="boolean",
    ),
    pytest.param(
        ('price_date = "2026-10"', "price_date = 2026-10-01"),
        "case.toml: money.price_date: found 2026-10-01; must be text, in quotes, 2026-10 or 2026-10-31 [C105]",
        id="date not quoted",
    ),
    pytest.param(
        ("horizon_years = 15", "horizon_years = 0"),
        "case.toml: money.horizon_years: found 0 a; must be a whole number from 1 to 60 a [C106]",
        id="no horizon",
    ),
    pytest.param(
        ("price_per_mwh = 46.0", "price_per_mwh = inf"),
        "case.toml: fuel.price_per_mwh: found inf currency/MWh; must be a number from -100000 to 100000"
        " currency/MWh [C106]",
        id="infinite price",
    ),
    pytest.param(
        ("electricity_price_per_mwh = 140.0", "electricity_price_per_mwh = 140000.0"),
        "case.toml: money.electricity_price_per_mwh: found 140000 currency/MWh; must be a number from -100000 to"
        " 100000 currency/MWh [C106]",
        id="absurd price",
    ),
    pytest.param(
        ("discount_rate_percent = 8.0", "discount_rate_percent = -100.0"),
        "case.toml: money.discount_rate_percent: found -100 %/a; must be a number above -100 and at most 100 %/a"
        " [C106]",
        id="rate of minus 100 %",
    ),
    pytest.param(
        ("turndown_ratio = 4.0", "turndown_ratio = 0.8"),
        "case.toml: boiler 'Boiler 1, 5 t/h', turndown_ratio: found 0.8; must be a number from 1 to 100 [C106]",
        id="turndown below 1",
    ),
    pytest.param(
        ("load_percent = 25, efficiency_percent = 89.0", "load_percent = 25, efficiency_percent = 109.0"),
        "case.toml: boiler 'Boiler 1, 5 t/h', efficiency_points[0].efficiency_percent: found 109 %;"
        " must be a number from 10 to 100 % [C106]",
        id="efficiency above 100 %",
    ),
    pytest.param(
        ("charged_pressures_bar_g = [8.5,", "charged_pressures_bar_g = [250.0,"),
        "case.toml: vessel.charged_pressures_bar_g[0]: found 250 bar g; must be a number from 0 to 198.9 bar g"
        " [C106]",
        id="pressure outside 1 to 200 bar",
    ),
    pytest.param(
        ('kind = "natural_gas"', 'kind = "natural gas"'),
        "case.toml: fuel.kind: found 'natural gas'; must be 'natural_gas' or 'gas_oil' or 'heavy_fuel_oil' or"
        " 'lpg' or 'wood' or 'electricity'; did you mean 'natural_gas'? [C107]",
        id="unknown fuel",
    ),
    pytest.param(
        ('"storage", "free choice"]', '"store", "free choice"]'),
        "case.toml: plan.alternatives[3]: found 'store'; must be 'as is' or 'staggered starts' or 'bigger boiler'"
        " or 'further boiler' or 'storage' or 'free choice'; did you mean 'storage'? [C107]",
        id="unknown alternative",
    ),
    pytest.param(
        ('currency = "EUR"', 'currency = "Euro"'),
        "case.toml: money.currency: found 'Euro'; must be text, three capital letters such as EUR [C108]",
        id="currency",
    ),
    pytest.param(
        ('name = "Boiler 2, 2.5 t/h"', 'name = " "'),
        "case.toml: existing_boiler[1].name: found ' '; must be text, not blank [C108]",
        id="blank name",
    ),
    pytest.param(
        ("discharged_pressures_bar_g = [4.6, 5.2, 6.0]", "discharged_pressures_bar_g = []"),
        "case.toml: vessel.discharged_pressures_bar_g: empty; must hold at least one entry [C109]",
        id="no discharged pressure",
    ),
    pytest.param(
        ("boiler_pressure_bar_g = 9.0", "boiler_pressure_bar_g = 3.0"),
        "case.toml: steam.boiler_pressure_bar_g: found 3 bar g; must be above steam.process_pressure_bar_g, 4 bar g"
        " [C110]",
        id="boiler below process",
    ),
    pytest.param(
        ("feedwater_temperature_degc = 103.0", "feedwater_temperature_degc = 190.0"),
        "case.toml: steam.feedwater_temperature_degc: found 190 degC; must be below boiling at"
        " steam.boiler_pressure_bar_g = 9 bar g, 179.9 degC [C111]",
        id="feedwater that boils",
    ),
    pytest.param(
        ('name = "Boiler 2, 2.5 t/h"', 'name = "Boiler 1, 5 t/h"'),
        "case.toml: existing_boiler.name: 'Boiler 1, 5 t/h' is given to 2 boilers; give each boiler its own name"
        " [C112]",
        id="two boilers of one name",
    ),
    pytest.param(
        ("design_pressure_bar_g = 10.5", "design_pressure_bar_g = 8.5"),
        "case.toml: boiler 'Boiler 2, 2.5 t/h', design_pressure_bar_g: found 8.5 bar g; must be at least"
        " steam.boiler_pressure_bar_g, 9 bar g, at which all boilers work [C113]",
        id="boiler above its design pressure",
    ),
    pytest.param(
        ("rating_kg_h = 4000, installed", "rating_kg_h = 3000, installed"),
        "case.toml: new_boiler, sizes: the rating 3000 kg/h is listed 2 times; list each rating once [C114]",
        id="size listed twice",
    ),
    pytest.param(
        ("load_percent = 50, efficiency_percent = 91.0", "load_percent = 80, efficiency_percent = 91.0"),
        "case.toml: boiler 'Boiler 1, 5 t/h', efficiency_points: load_percent runs 25, 80, 75, 100; must rise from"
        " row to row [C115]",
        id="loads out of order",
    ),
    pytest.param(
        ("load_percent = 25, efficiency_percent = 89.0", "load_percent = 30, efficiency_percent = 89.0"),
        "case.toml: boiler 'Boiler 1, 5 t/h', efficiency_points: the first row is at 30 % load; must start at or"
        " below the smallest firing load, 25 % with turndown_ratio 4 [C116]",
        id="points that do not reach down",
    ),
    pytest.param(
        ("load_percent = 100, efficiency_percent = 90.6", "load_percent = 95, efficiency_percent = 90.6"),
        "case.toml: boiler 'Boiler 1, 5 t/h', efficiency_points: the last row is at 95 % load; must reach 100 %"
        " [C116]",
        id="points that do not reach up",
    ),
    pytest.param(
        (
            'calorific_basis = "lhv"\nefficiency_points = [\n  { load_percent = 20,',
            'calorific_basis = "hhv"\nefficiency_points = [\n  { load_percent = 20,',
        ),
        "case.toml: new_boiler, efficiency_points: 95.2 % on gross (hhv) at 70 % load is 105.5 % on net"
        " calorific value; cannot exceed 100 %; a maker's figure is mostly net, then calorific_basis = 'lhv' [C117]",
        id="net efficiency called gross",
    ),
    pytest.param(
        ("price_per_mwh = 46.0", "price_per_mwh = -46.0"),
        "case.toml: fuel.price_per_mwh: found -46 currency/MWh; must not be below zero; only electricity can be"
        " [C118]",
        id="negative gas price",
    ),
    pytest.param(
        ("smallest_volume_m3 = 5.0", "smallest_volume_m3 = 500.0"),
        "case.toml: vessel.smallest_volume_m3: found 500 m3; must not exceed vessel.largest_volume_m3, 100 m3"
        " [C119]",
        id="smallest above largest",
    ),
    pytest.param(
        ("charged_pressures_bar_g = [8.5,", "charged_pressures_bar_g = [4.6,"),
        "case.toml: vessel.charged_pressures_bar_g[0]: found 4.6 bar g; must be above a discharged pressure, the"
        " lowest of which is 4.6 bar g [C120]",
        id="charged at discharged",
    ),
    pytest.param(
        ("discharged_pressures_bar_g = [4.6, 5.2, 6.0]", "discharged_pressures_bar_g = [4.6, 5.2, 16.0]"),
        "case.toml: vessel.discharged_pressures_bar_g[2]: found 16 bar g; must be below a charged pressure, the"
        " highest of which is 15 bar g [C120]",
        id="discharged above every charged",
    ),
    pytest.param(
        ("discharged_pressures_bar_g = [4.6,", "discharged_pressures_bar_g = [4.5,"),
        "case.toml: vessel.discharged_pressures_bar_g[0]: found 4.5 bar g; must be at least 4.6 bar g,"
        " steam.process_pressure_bar_g plus steam.discharging_pressure_drop_bar [C121]",
        id="discharged below process",
    ),
    pytest.param(
        ("12.0, 15.0]", "12.0, 15.6]"),
        "case.toml: vessel.charged_pressures_bar_g[3]: found 15.6 bar g; must be at most 15.5 bar g, the highest"
        " boiler design_pressure_bar_g less steam.charging_pressure_drop_bar [C122]",
        id="charged above every boiler",
    ),
    pytest.param(
        ('flow_column = "steam_kg_h"', 'flow_column = "time"'),
        "case.toml: record: column 'time': is named for two purposes; name different columns [R103]",
        id="one column twice",
    ),
    pytest.param(
        ('gaps = "refuse"', 'gaps = "hold"'),
        "case.toml: record.largest_gap_minutes: missing; with gaps = 'hold' state the longest gap that may be"
        " filled [min] [C104]",
        id="filling without a limit",
    ),
    pytest.param(
        ('alternatives = ["as is", ', "alternatives = ["),
        "case.toml: plan.reference: found 'as is'; must be one of plan.alternatives: bigger boiler, further boiler,"
        " storage, free choice [C125]",
        id="reference not compared",
    ),
    pytest.param(
        ("step_minutes = 5", "step_minutes = 7"),
        "case.toml: plan.step_minutes: found 7 min; must divide a day, as 1, 5, 10, 15 or 30 min do [C127]",
        id="step that does not divide a day",
    ),
    pytest.param(
        (
            "burner_pressure_band_bar = 1.0\nminimum_firing_minutes = 10.0\nminimum_off_minutes = 5.0\n"
            "cold_start_minutes = 45.0\nstart_wear_cost = 5.0\nmaintenance_per_year = 14000",
            "burner_pressure_band_bar = 9.5\nmaintenance_per_year = 14000",
        ),
        "case.toml: boiler 'Boiler 1, 5 t/h', burner_pressure_band_bar: found 9.5 bar; must be less than"
        " steam.boiler_pressure_bar_g, 9 bar g [C128]",
        id="band as wide as the pressure",
    ),
    pytest.param(
        ('file = "steam.csv.gz"', 'file = "stem.csv"'),
        "case.toml: record.file: found 'stem.csv', but there is no file stem.csv; name a file beside the case"
        " [C130]",
        id="record missing",
    ),
]


@pytest.mark.parametrize(("replacement", "expected"), REFUSALS)
def test_one_slip_gives_its_one_message(write_case, problems_of, replacement, expected):
    """Each slip in the cannery's case is refused with exactly one problem, in these words."""
    assert problems_of(write_case(replacement)) == (expected,)


def test_all_problems_come_at_once(write_case, problems_of):
    """Slips in six sections, inside keys and between them, are all told in one go."""
    lines = problems_of(
        write_case(
            ('flow_unit = "kg/h"', 'flow_unit = "kg/hr"'),
            ("feedwater_temperature_degc = 103.0", "feedwater_temperature_degc = 190.0"),
            ("price_per_mwh = 46.0", "price_per_mwh = -46.0"),
            ("turndown_ratio = 2.5", "turndown_ratio = 0.5"),
            ("horizon_years = 15", "horizon_years = 0"),
            ("discharged_pressures_bar_g = [4.6,", "discharged_pressures_bar_g = [4.0,"),
            ('reference = "as is"', 'reference = "as was"'),
        )
    )
    assert [line.rsplit("[", 1)[1].rstrip("]") for line in lines] == [
        "C107", "C106", "C107", "C106", "C111", "C118", "C121",
    ]  # fmt: skip


def test_missing_sections_are_told(write_case, problems_of):
    """An almost empty case lists every section it needs, and what goes in it."""
    lines = problems_of(write_case(text='[site]\nname = "X"\n'))
    missing = [line.split(":")[1].strip() for line in lines]
    assert missing == ["[record]", "[steam]", "[fuel]", "[money]", "existing_boiler"]
    assert all(line.endswith("[C104]") for line in lines)


def test_single_brackets_for_a_boiler_are_explained(write_example, problems_of):
    """[existing_boiler] instead of [[existing_boiler]] says how to write it."""
    (line,) = problems_of(write_example(("[[existing_boiler]]", "[existing_boiler]")))
    assert "found a table; state each boiler" in line
    assert "[[existing_boiler]]" in line


def test_section_that_is_a_value_is_refused(write_case, problems_of):
    """A plain value where a section belongs is told, not a crash."""
    start, end = EXAMPLE.index("[fuel]"), EXAMPLE.index("[[existing")
    text = "fuel = 3\n" + EXAMPLE[:start] + EXAMPLE[end:]
    (line,) = problems_of(write_case(text=text, record="steam.csv"))
    assert line == "case.toml: [fuel]: found 3; must be a section [fuel] [C105]"


def test_alternative_without_its_section_is_refused(write_case, problems_of):
    """'storage' cannot be compared in a case without [vessel]."""
    start, end = EXAMPLE.index("[vessel]"), EXAMPLE.index("[money]")
    text = EXAMPLE[:start] + EXAMPLE[end:] + '\n[plan]\nalternatives = ["as is", "storage"]\n'
    (line,) = problems_of(write_case(text=text, record="steam.csv"))
    assert line == (
        "case.toml: plan.alternatives: 'storage' needs [vessel], which the case does not have;"
        " add it, or leave the alternative out of the list [C126]"
    )


def test_values_that_leave_a_formula_are_told_with_the_boiler(write_example, problems_of):
    """Pressures each allowed but beyond the steam tables together name the boiler and the quantity."""
    (line,) = problems_of(
        write_example(
            ("boiler_pressure_bar_g = 8.0", "boiler_pressure_bar_g = 198.5"),
            (
                "design_pressure_bar_g = 10.0",
                "design_pressure_bar_g = 198.9\nburner_pressure_band_bar = 10.0",
            ),
            (
                "discharged_pressures_bar_g = [3.5, 5.0]",
                "discharged_pressures_bar_g = [3.5, 5.0]\ncharged_fill_percent = 20",
            ),
        )
    )
    assert line.startswith("case.toml: boiler 'Boiler 1', ")
    assert line.endswith("[C129]")


STACK = """\
stack_readings = [
  { load_percent = 25, stack_temperature_degc = 190, o2_percent = 5.0 },
  { load_percent = 100, stack_temperature_degc = 230, o2_percent = 3.0 },
]"""
POINTS = EXAMPLE[EXAMPLE.index("efficiency_points") : EXAMPLE.index("maintenance_per_year = 9000")].strip()

STACK_REFUSALS = [
    pytest.param(
        (POINTS, ""),
        "efficiency_points: missing; state efficiency_points, or stack_readings to reckon them from [C131]",
        id="no efficiency at all",
    ),
    pytest.param(
        (POINTS, POINTS + "\ncasing_loss_kw = 20.0"),
        "casing_loss_kw: stated without stack_readings; state stack_readings, which it belongs to, or leave it out"
        " [C131]",
        id="casing loss without readings",
    ),
    pytest.param(
        (POINTS, STACK.replace(", o2_percent = 5.0", "")),
        "stack_readings[0]: neither oxygen nor carbon dioxide; state o2_percent or co2_percent [C132]",
        id="no gas",
    ),
    pytest.param(
        (POINTS, STACK.replace("o2_percent = 5.0", "o2_percent = 5.0, co2_percent = 9.0")),
        "stack_readings[0]: both gases; state o2_percent or co2_percent [C132]",
        id="two gases",
    ),
    pytest.param(
        (POINTS, STACK.replace("= 190", "= 12")),
        "stack_readings[0].stack_temperature_degc: found 12 degC; must not be colder than the combustion air, 20"
        " degC [C134]",
        id="stack colder than air",
    ),
    pytest.param(
        (POINTS, STACK.replace("= 190", "= 99") + "\neconomiser = { effectiveness_percent = 50 }"),
        "stack_readings[0].stack_temperature_degc: found 99 degC; must not be colder than the water into the"
        " economiser, 103 degC [C134]",
        id="stack colder than economiser water",
    ),
    pytest.param(
        (POINTS, f"{POINTS}\n{STACK}\neconomiser = {{ effectiveness_percent = 50 }}"),
        "economiser: efficiency_points are stated too; leave out the points, so that they follow from the readings"
        " behind the economiser, or leave out the economiser that they already hold [C135]",
        id="economiser counted twice",
    ),
    pytest.param(
        (POINTS, STACK.replace("load_percent = 25", "load_percent = 40")),
        "stack_readings: the first row is at 40 % load; must start at or below the smallest firing load, 25 % with"
        " turndown_ratio 4 [C116]",
        id="readings that do not reach down",
    ),
    pytest.param(
        (POINTS, f"{POINTS.replace('= 90.0', '= 92.0')}\n{STACK}"),
        "efficiency at 100% load: found 0.92 on net calorific value; must not exceed 0.9041, what the stack loss"
        " leaves at that load [C129]",
        id="efficiency above what the stack leaves",
    ),
    pytest.param(
        (POINTS, STACK.replace("o2_percent = 5.0", "co2_percent = 15.0")),
        "carbon dioxide in dry flue gas: found 15 %; must lie between 1.68182 and 11.7727 % [C129]",
        id="more carbon dioxide than gas can give",
    ),
]


@pytest.mark.parametrize(("replacement", "expected"), STACK_REFUSALS)
def test_one_slip_at_the_stack_gives_its_one_message(write_example, problems_of, replacement, expected):
    """Each slip in stack readings is refused with exactly one problem that names the boiler."""
    assert problems_of(write_example(replacement)) == (f"case.toml: boiler 'Boiler 1', {expected}",)


def test_electric_boiler_with_stack_readings_is_refused(write_example, problems_of):
    """Electricity leaves no flue gas to read."""
    (line,) = problems_of(write_example((POINTS, STACK), ('kind = "natural_gas"', 'kind = "electricity"')))
    assert line == (
        "case.toml: boiler 'Boiler 1', stack_readings: an electric boiler has no stack; state efficiency_points"
        " instead [C133]"
    )


def test_existing_boiler_named_like_one_of_the_catalogue_is_refused(write_case, problems_of):
    """Every boiler of a case, in place or on offer, has its own name."""
    (line,) = problems_of(write_case(("Boiler 2, 2.5 t/h", "New boiler, 3 t/h")))
    assert line.endswith("give the boiler in place another name [C112]")


def test_text_that_is_not_utf_8_names_the_line(write_example, problems_of):
    """A Latin-1 byte is told with its line."""
    folder = write_example()
    file = folder / "case.toml"
    file.write_bytes(file.read_bytes().replace(b"Bottling hall", b"Caf\xe9"))
    (line,) = problems_of(folder)
    assert line == "case.toml: line 2: a byte that is not UTF-8; save the file as UTF-8 text [C102]"


def test_record_given_as_the_case_is_told_quickly(tmp_path):
    """A file far too large for a case is refused by its size, unread."""
    file = tmp_path / "steam.csv"
    file.write_bytes(b"0" * 5_000_001)
    with pytest.raises(CaseError, match=r"found 5 MB; a case file is a few kB of TOML.*\[C102\]"):
        load_case(file)


def test_a_refused_case_ends_with_status_2(tmp_path):
    """A refused case is a user's error, not a defect."""
    with pytest.raises(CaseError, match="C101") as caught:
        load_case(tmp_path)
    assert caught.value.exit_status is ExitStatus.REFUSED
