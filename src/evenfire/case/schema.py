"""The whole case file as a schema."""

from __future__ import annotations

from typing import Annotated, Any

from evenfire.case.schema_boiler import ExistingBoiler, NewBoiler
from evenfire.case.schema_money import Money, Plan, Replay
from evenfire.case.schema_record import Record
from evenfire.case.schema_risk import Risk
from evenfire.case.schema_schedule import Schedule
from evenfire.case.schema_section import Section, entry
from evenfire.case.schema_site import Fuel, Site, Steam, Vessel


class CaseFile(Section):
    """One site and one question, as written in case.toml."""

    site: Annotated[Site, entry("Which site, and the question asked.")]
    record: Annotated[
        Record | None, entry("The measured steam demand; left out where a [schedule] alone makes it.")
    ] = None
    schedule: Annotated[
        Schedule | None, entry("Demand described as equipment: alone without [record], else on top of it.")
    ] = None
    steam: Annotated[Steam, entry("Pressures and temperatures of the site.")]
    fuel: Annotated[Fuel, entry("What the boilers burn and what it costs.")]
    existing_boiler: Annotated[
        tuple[ExistingBoiler, ...], entry("The boilers that stand on the site, one table each.", shortest=1)
    ]
    new_boiler: Annotated[
        NewBoiler | None, entry("The boilers that can be bought; left out where none is in question.")
    ] = None
    vessel: Annotated[
        Vessel | None, entry("The steam accumulators that can be bought; left out where none is in question.")
    ] = None
    money: Annotated[Money, entry("Finance, and the prices that are not fuel.")]
    plan: Annotated[Plan, entry("How the alternatives are planned.")] = Plan()
    replay: Annotated[Replay, entry("How plans are tried on the whole record.")] = Replay()
    risk: Annotated[
        Risk | None, entry("What is uncertain, for `evenfire risk`; left out where nothing is drawn.")
    ] = None


def case_json_schema() -> dict[str, Any]:
    """The JSON Schema (draft 2020-12) of a case file, for editors that complete and check TOML.

    Use it to write the schema to a file and name that file to the editor. Checks across several keys,
    such as pressure windows that cannot exist, are not part of it; reading the case makes them.

    Returns
    -------
    dict
        With units under ``unit`` and a description for every key.

    Examples
    --------
    >>> case_json_schema()["properties"]["existing_boiler"]["type"]
    'array'
    """
    schema = _without_null(CaseFile.model_json_schema())
    return {"$schema": "https://json-schema.org/draft/2020-12/schema", **schema}


def _without_null(node: Any) -> Any:
    """The schema without null, which TOML does not know: a key that may be absent is not required."""
    if isinstance(node, list):
        return [_without_null(each) for each in node if each != {"type": "null"}]
    if not isinstance(node, dict):
        return node
    cleaned = {name: _without_null(each) for name, each in node.items() if each is not None}
    if len(cleaned.get("anyOf", ())) == 1:
        (only,) = cleaned.pop("anyOf")
        return {**only, **cleaned}
    return cleaned
