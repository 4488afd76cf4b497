"""Investment cases for steam plants with peaky demand.

Public names load on first use, so that importing the package is instant.
"""

from __future__ import annotations

from importlib import import_module
from typing import TYPE_CHECKING, Any

if TYPE_CHECKING:
    from evenfire.accumulator import steam_capacity_kg as steam_capacity_kg
    from evenfire.appraisal.appraise import appraise as appraise
    from evenfire.boiler.cycling import cycling_starts_per_hour as cycling_starts_per_hour
    from evenfire.case.load import load_case as load_case
    from evenfire.demand.storage_need import storage_need_kg as storage_need_kg
    from evenfire.report.folder import write_appraisal as write_report

_HOMES = {
    "appraise": ("evenfire.appraisal.appraise", "appraise"),
    "cycling_starts_per_hour": ("evenfire.boiler.cycling", "cycling_starts_per_hour"),
    "load_case": ("evenfire.case.load", "load_case"),
    "steam_capacity_kg": ("evenfire.accumulator", "steam_capacity_kg"),
    "storage_need_kg": ("evenfire.demand.storage_need", "storage_need_kg"),
    "write_report": ("evenfire.report.folder", "write_appraisal"),
}

__all__ = [
    "appraise",
    "cycling_starts_per_hour",
    "load_case",
    "steam_capacity_kg",
    "storage_need_kg",
    "write_report",
]


def __getattr__(name: str) -> Any:
    if name not in _HOMES:
        raise AttributeError(f"module 'evenfire' has no attribute {name!r}")
    module, attribute = _HOMES[name]
    return getattr(import_module(module), attribute)


def __dir__() -> list[str]:
    return sorted(_HOMES)
