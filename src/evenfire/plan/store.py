"""Plans kept between runs, found again by the content of what they were made from.

An unchanged alternative is not planned twice, and one that was interrupted starts from what it had. The
key covers every number of the inputs, the rules, and the source of the plan room itself.
"""

from __future__ import annotations

import hashlib
import json
import os
import tempfile
from dataclasses import dataclass, fields, is_dataclass
from enum import Enum
from functools import cache
from pathlib import Path
from typing import Any
from zipfile import BadZipFile

import numpy as np

from evenfire.plan.inputs import AlternativeRules, PlanInputs
from evenfire.plan.outcome import DayDispatch, Plan, PlanOutcome

_ARRAYS = tuple(field.name for field in fields(DayDispatch))


@dataclass(frozen=True, slots=True, kw_only=True)
class Kept:
    """What an earlier run left: its plan, bound and short list."""

    plan: Plan
    bound_k: float
    shortlist: tuple[Plan, ...]
    solver: str


class PlanStore:
    """A folder of plans.

    Parameters
    ----------
    folder : Path
        Made when the first plan is kept.
    """

    def __init__(self, folder: Path) -> None:
        self._folder = folder

    def get(self, inputs: PlanInputs, rules: AlternativeRules) -> Kept | None:
        """What an earlier run left for these inputs; None if nothing usable."""
        file = self._file(inputs, rules)
        try:
            with np.load(file, allow_pickle=False) as content:
                return _unpacked(content)
        except (OSError, ValueError, KeyError, BadZipFile, EOFError):
            return None

    def put(self, inputs: PlanInputs, rules: AlternativeRules, outcome: PlanOutcome) -> None:
        """Keep a plan; a folder that cannot be written is passed over, since nothing is lost but time."""
        if outcome.plan is None or outcome.bound_k is None:
            return
        file = self._file(inputs, rules)
        try:
            self._folder.mkdir(parents=True, exist_ok=True)
            handle, name = tempfile.mkstemp(dir=self._folder, suffix=".npz")
            with os.fdopen(handle, "wb") as stream:
                np.savez_compressed(stream, **_packed(outcome.plan, outcome))
            Path(name).replace(file)
        except OSError:
            return

    def _file(self, inputs: PlanInputs, rules: AlternativeRules) -> Path:
        digest = hashlib.sha256(_source_digest())
        _feed(digest, inputs)
        _feed(digest, rules)
        return self._folder / f"{digest.hexdigest()[:32]}.npz"


def default_folder() -> Path:
    """Where plans are kept unless told otherwise: the user's cache folder."""
    base = os.environ.get("XDG_CACHE_HOME") or str(Path.home() / ".cache")
    return Path(base) / "evenfire" / "plans"


@cache
def _source_digest() -> bytes:
    """Digest of the plan room's own source: another method makes other plans."""
    digest = hashlib.sha256()
    for file in sorted(Path(__file__).parent.glob("*.py")):
        digest.update(file.read_bytes())
    return digest.digest()


def _feed(digest: Any, value: Any) -> None:
    """Every number of a tree of frozen data, in a fixed order."""
    if is_dataclass(value):
        for field in fields(value):
            digest.update(field.name.encode())
            _feed(digest, getattr(value, field.name))
    elif isinstance(value, np.ndarray):
        digest.update(str(value.shape).encode() + np.ascontiguousarray(value).tobytes())
    elif isinstance(value, tuple):
        digest.update(f"({len(value)}".encode())
        for item in value:
            _feed(digest, item)
    elif isinstance(value, frozenset):
        _feed(digest, tuple(sorted(value)))
    elif isinstance(value, Enum):
        digest.update(str(value.value).encode())
    else:
        digest.update(repr(float(value) if isinstance(value, np.floating) else value).encode() + b";")


def _packed(plan: Plan, outcome: PlanOutcome) -> dict[str, Any]:
    plans = (plan, *outcome.shortlist)
    about = {
        "bound_k": outcome.bound_k,
        "solver": outcome.solver,
        "plans": [
            {"boilers": x.boilers, "segment": x.segment, "volume_m3": x.volume_m3, "days": len(x.dispatch)}
            for x in plans
        ],
    }
    arrays = {
        f"{number}/{d}/{name}": getattr(day, name)
        for number, x in enumerate(plans)
        for d, day in enumerate(x.dispatch)
        for name in _ARRAYS
    }
    return {"about": np.array(json.dumps(about)), **arrays}


def _unpacked(content: Any) -> Kept:
    about = json.loads(str(content["about"]))
    plans = tuple(
        Plan(
            boilers=tuple(entry["boilers"]),
            segment=entry["segment"],
            volume_m3=entry["volume_m3"],
            dispatch=tuple(
                DayDispatch(**{name: content[f"{number}/{d}/{name}"] for name in _ARRAYS})
                for d in range(entry["days"])
            ),
        )
        for number, entry in enumerate(about["plans"])
    )
    return Kept(plan=plans[0], bound_k=about["bound_k"], shortlist=plans[1:], solver=about["solver"])
