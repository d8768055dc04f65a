"""Words that report, charts and terminal share."""

from __future__ import annotations

from heataudit.audit.model import GROUPS, Audit, Finding
from heataudit.report.quantities import System, quantity, restate

GROUP_NAMES = {
    "load": "Useful work", "pump": "Pumps", "idle": "Idling", "bypass": "Bypass", "metering": "Metering",
    "lines": "Lines and filters", "overflow": "Relief valves", "lowering": "Lowering loads",
    "actuators": "Actuators", "other": "Let-down, voids",
}  # fmt: skip
"""Short names of the useful work and of the loss groups."""

GROUP_MEANINGS = {
    "pump": "leakage and friction of the pumps while something moves",
    "idle": "what pumps circulate or hold while nothing moves",
    "bypass": "oil that passes galleries, unloading and priority valves while something moves",
    "metering": "throttling in directional valves, throttles, flow controls and compensators",
    "lines": "lines, filters, coolers and check valves",
    "overflow": "oil over relief valves, in every phase",
    "lowering": "what driving loads put into throttles and counterbalance valves",
    "actuators": "friction and leakage of cylinders and motors",
    "other": "let-down of pressed oil, and oil that is missing where a load runs ahead",
}
"""What stands in a loss group."""

SEVERITIES = ("danger", "warning", "note")

CAUTIONS = (
    "Oil under pressure injects through the skin: never search a leak by hand; see a doctor at once after an injury.",
    "Accumulators, raised loads and shut-in oil keep energy after the drive has stopped: lower, block and let down "
    "before anything is opened, and stay out from under suspended loads.",
    "Oil and surfaces above 60 °C burn.",
    "When sizes, pressures or flows change, hoses, fittings, valves, filters and coolers must be rated for the new "
    "ones; relief settings are not to be raised to make up for losses.",
    "The machine maker's instructions, ISO 4413, local codes and licensed practice go before this report.",
    "The result is an estimate from the inputs listed; confirm it by measurement before money is spent.",
)  # fmt: skip
"""What must be said where work on a machine may follow."""


def ranked_groups(audit: Audit) -> list[tuple[str, float]]:
    """Loss groups with their heat [kJ] in one cycle, largest first, without those that have none.

    Parameters
    ----------
    audit
        The answers.
    """
    found = [(group, audit.loss_groups.get(group, 0.0)) for group in GROUPS]
    return sorted(((group, energy) for group, energy in found if energy > 0), key=lambda pair: -pair[1])


def findings_in_order(audit: Audit) -> list[Finding]:
    """Findings, the gravest first.

    Parameters
    ----------
    audit
        The answers.
    """
    return sorted(audit.findings, key=lambda finding: SEVERITIES.index(finding.severity))


def finding_text(finding: Finding, system: System) -> str:
    """A finding as a sentence that names its place.

    Parameters
    ----------
    finding
        One of the audit's.
    system
        "SI" or "US".
    """
    place = "" if finding.where.casefold() in finding.text.casefold() else f"{finding.where}: "
    return place + restate(finding.text, system, (finding.where, finding.phase))


def share_text(share: float | None) -> str:
    """A fraction in percent; a dash where there is none.

    >>> share_text(0.377), share_text(0.004), share_text(None)
    ('38 %', '0.4 %', '–')
    """
    if share is None:
        return "–"
    return f"{100 * share:.0f} %" if abs(share) >= 0.0095 or share == 0 else f"{100 * share:.1f} %"


def oil_sentence(audit: Audit, system: System) -> str:
    """How warm the oil gets, in a sentence.

    Parameters
    ----------
    audit
        The answers.
    system
        "SI" or "US".
    """
    thermal, conditions = audit.thermal, audit.conditions
    ambient = quantity(conditions.ambient_temperature_C, "°C", system)
    limit = quantity(thermal.highest_temperature_C, "°C", system)
    if thermal.equilibrium_C is None:
        return f"The oil finds no balance at {ambient} ambient: it grows hotter for as long as the machine works."
    settled = quantity(thermal.equilibrium_C, "°C", system)
    side = "above" if thermal.equilibrium_C > thermal.highest_temperature_C else "within"
    return f"The oil settles at {settled} at {ambient} ambient, {side} the {limit} that it may have."
