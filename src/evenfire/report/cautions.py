"""What must stand wherever sizes or savings are shown."""

from __future__ import annotations

CAUTIONS = (
    "Pressurised steam and hot water kill. Work on boilers, vessels, valves and pipework belongs to "
    "competent people, with the plant made safe first.",
    "The sizes shown are for an investment decision only, not for construction. Wall thickness and mass of "
    "a vessel are estimates of its cost.",
    "Vessel, safety valves, pipework, controls and inspection follow the local pressure-equipment law, the "
    "codes it names and licensed engineers.",
)
