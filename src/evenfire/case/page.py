"""Writes docs/case-file.md from the schema: ``python -m evenfire.case.page > docs/case-file.md``."""

from __future__ import annotations

from collections.abc import Iterator

from pydantic.fields import FieldInfo

from evenfire.case.messages import accepted, with_unit
from evenfire.case.schema import CaseFile
from evenfire.case.schema_section import Section, assumption_of, is_list, section_of, unit_of

EXAMPLE = """\
[site]
name = "Bottling hall (invented)"

[record]
file = "steam.csv"
time_column = "time"
flow_column = "steam_kg_h"
flow_unit = "kg/h"

[steam]
process_pressure_bar_g = 3.0
boiler_pressure_bar_g = 8.0
feedwater_temperature_degc = 103.0

[fuel]
kind = "natural_gas"
calorific_basis = "hhv"
price_per_mwh = 45.0

[[existing_boiler]]
name = "Boiler 1"
rating_kg_h = 4000
rating_basis = "actual"
design_pressure_bar_g = 10.0
turndown_ratio = 4.0
calorific_basis = "lhv"
efficiency_points = [
  { load_percent = 25, efficiency_percent = 88.0 },
  { load_percent = 100, efficiency_percent = 90.0 },
]
maintenance_per_year = 9000

[vessel]
smallest_volume_m3 = 5.0
largest_volume_m3 = 60.0
charged_pressures_bar_g = [7.5, 9.5]
discharged_pressures_bar_g = [3.5, 5.0]
reference_volume_m3 = 20.0
reference_design_pressure_bar_g = 8.0
reference_installed_cost = 110000
life_years = 25
maintenance_per_year = 3000

[money]
currency = "EUR"
price_date = "2026-10"
horizon_years = 15
discount_rate_percent = 7.0
rate_basis = "nominal"
electricity_price_per_mwh = 140.0
water_price_per_m3 = 2.5
unmet_steam_price_per_t = 300.0
"""
"""The shortest case that asks a question: one boiler, and a vessel to be bought."""

INTRODUCTION = """\
# The case file

<!-- Generated from the schema by `python -m evenfire.case.page > docs/case-file.md`; do not edit. -->

A case is a folder with `case.toml` and the record of the site's steam demand beside it. The file is
[TOML](https://toml.io): `key = value` lines under `[section]` headings. Every key that has a unit ends in it,
pressures are gauge (`bar_g`), money is in the one currency that `money.currency` names. A key that is not
known is refused, and a value that cannot be meant is refused with what would be accepted; nothing is clipped
or guessed. Where a key may be left out, the tables below say what is then assumed, and the report shows it as
*assumed*.

`evenfire schema` prints the same as JSON Schema, so that an editor can complete and check a case as it is
typed.

**Paths.** A sweep names an input by its path: `fuel.price_per_mwh`; a row of a list by its position from 0,
`new_boiler.sizes[0].installed_cost`; and a boiler also by its name,
`existing_boiler."Boiler 1".turndown_ratio`.

**Windows.** Every charged pressure together with every lower discharged pressure is a window the plan may
choose. A charged pressure must leave `steam.charging_pressure_drop_bar` to the highest boiler design
pressure; a discharged pressure must lie `steam.discharging_pressure_drop_bar` above the process.

**Efficiency points** must span the firing range, from 100 % / `turndown_ratio` (or below) to 100 % load. On
net calorific value no efficiency exceeds 100 %; a figure given on gross is converted with the fuel's
`lhv_to_hhv`.

The shortest case that asks a question:

```toml
{example}```
"""


def case_file_page() -> str:
    """The text of docs/case-file.md."""
    parts = [INTRODUCTION.format(example=EXAMPLE)]
    for name, field in CaseFile.model_fields.items():
        section = section_of(field)
        assert section is not None
        heading = f"[[{name}]]" if is_list(field.annotation) else f"[{name}]"
        needed = "" if field.is_required() else " May be left out."
        parts.append(f"## `{heading}`\n\n{field.description}{needed}\n\n{_table(section)}")
        parts += _rows_of(section, name)
    return "\n".join(parts)


def _rows_of(section: type[Section], above: str) -> Iterator[str]:
    """The tables of what stands inside a section."""
    for name, field in section.model_fields.items():
        inside = section_of(field)
        if inside is not None:
            each = ", each row" if is_list(field.annotation) else ""
            yield f"### `{above}.{name}`{each}\n\n{_table(inside)}"


def _table(section: type[Section]) -> str:
    lines = ["| key | unit | accepted | left out | meaning |", "|---|---|---|---|---|"]
    lines += [
        f"| `{name}` | {unit_of(field)} | {_accepted(field)} | {_left_out(field)} | {field.description} |"
        for name, field in section.model_fields.items()
    ]
    return "\n".join(lines) + "\n"


def _accepted(field: FieldInfo) -> str:
    unit = unit_of(field)
    return accepted(field).removesuffix(f" {unit}" if unit not in ("", "1") else "")


def _left_out(field: FieldInfo) -> str:
    if field.is_required():
        return "must be stated"
    if assumption_of(field):
        return assumption_of(field)
    if field.default in (None, "", ()):
        return "empty"
    return with_unit(field.default, unit_of(field))


if __name__ == "__main__":
    print(case_file_page(), end="")
