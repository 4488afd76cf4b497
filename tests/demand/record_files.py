"""Record files for the tests of the importer, and what to expect of them."""

import numpy as np
import pandas as pd
import pytest

from evenfire.demand.read import demand_record
from evenfire.demand.record_format import RecordFormat
from evenfire.errors import RecordError

RNG = np.random.default_rng(7)
FLOW_KG_H = np.round(200.0 + 5000.0 * RNG.random(16 * 96) ** 4, 1)
"""Sixteen days of quarter hours, so that a day above 12 proves the date order."""
TIMES = pd.date_range("2026-02-02", periods=FLOW_KG_H.size, freq="15min")


def form(**changes):
    """A format that states the least."""
    stated = {
        "time_column": "time",
        "flow_column": "steam",
        "flow_unit": "kg/h",
        "gaps": "refuse",
        "largest_gap_s": 3600.0,
    }
    return RecordFormat(**(stated | changes))


def write(path, columns, delimiter=",", encoding="utf-8", end="\n"):
    """Write columns of text, name to cells, and return the path."""
    rows = [delimiter.join(columns), *(delimiter.join(row) for row in zip(*columns.values(), strict=True))]
    path.write_bytes((end.join(rows) + end).encode(encoding))
    return path


def cells(flow=FLOW_KG_H, times=TIMES, written="%Y-%m-%dT%H:%M", decimal="."):
    """Time and flow columns as text."""
    return {
        "time": list(times.strftime(written)),
        "steam": [f"{value:.1f}".replace(".", decimal) for value in flow],
    }


def assert_reads(path, flow_kg_h=FLOW_KG_H, start=TIMES[0], **changes):
    """The file gives the flow; returns the record."""
    record = demand_record(path, form(**changes))
    np.testing.assert_allclose(record.flow_kg_s * 3600.0, flow_kg_h, rtol=1e-9, atol=1e-9)
    assert record.start == start
    return record


def refusal(path, **changes):
    """The problems of a refused file, as one text."""
    with pytest.raises(RecordError) as refused:
        demand_record(path, form(**changes))
    return str(refused.value)


def codes(record):
    """Codes of the notices of a record, the one on its length left out."""
    return [notice.code for notice in record.notices if notice.code != "R190"]
