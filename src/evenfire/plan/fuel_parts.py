"""What a plan's fuel is burnt for: parts that add up to all of it."""

from __future__ import annotations

from dataclasses import dataclass, fields

from evenfire.plan.flows import YearlyFlows


@dataclass(frozen=True, slots=True, kw_only=True)
class FuelParts:
    """Fuel of a year by purpose, net [MWh/a]; the sum of all fields is all fuel."""

    steam: float
    """Steam that is used or vented, from feedwater, at today's boiler pressure."""
    blowdown: float
    """Heat that leaves with the blowdown water of all steam made."""
    vessel_loss: float
    """Steam, at the plan's mean fuel per tonne, that makes good the vessel's standing loss."""
    vessel_credit: float
    """Negative: fuel saved because the vessel gives back more steam than it takes up."""
    standing: float
    """Standing loss of hot boilers that do not fire."""
    purge: float
    """Heat carried off by purge air at burner starts."""
    cold_starts: float
    boiler_pressure: float
    """What the plan's boiler pressure adds to all parts above, the credit apart."""

    @property
    def total(self) -> float:
        """All fuel [MWh/a]."""
        return float(sum(getattr(self, part.name) for part in fields(self)))


def fuel_parts(flows: YearlyFlows, blowdown_share: float) -> FuelParts:
    """The fuel of a plan's year by purpose.

    With M the fuel of firing and of the firing share of cycling, S the steam made and beta the blowdown's
    share of the heat, the blowdown takes beta M, the vessel's standing loss W (1 - beta) M W/S and the
    steam used the rest of M.

    Parameters
    ----------
    flows : YearlyFlows
    blowdown_share : float
        Heat of the blowdown over all heat the boiler adds, at today's pressure [1].

    Returns
    -------
    FuelParts

    Notes
    -----
    The casing loss of a firing boiler is in its efficiency and so in ``steam``. Steam lost by the vessel is
    valued at the mean, not at the margin: what the vessel changes at the margin is the difference between
    two plans.
    """
    boilers = flows.boilers
    making = sum(boiler.firing_fuel_mwh + boiler.cycling_fuel_mwh for boiler in boilers)
    made_t = sum(boiler.steam_t for boiler in boilers)
    blowdown = blowdown_share * making
    vessel_loss = (making - blowdown) * flows.vessel_loss_t / made_t if made_t > 0.0 else 0.0
    return FuelParts(
        steam=making - blowdown - vessel_loss,
        blowdown=blowdown,
        vessel_loss=vessel_loss,
        vessel_credit=-flows.vessel_credit_mwh,
        standing=sum(boiler.standing_fuel_mwh for boiler in boilers),
        purge=sum(boiler.start_fuel_mwh for boiler in boilers),
        cold_starts=sum(boiler.cold_start_fuel_mwh for boiler in boilers),
        boiler_pressure=sum(boiler.pressure_fuel_mwh for boiler in boilers),
    )
