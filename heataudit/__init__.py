"""Heat and energy audit of oil-hydraulic machines.

>>> import heataudit
>>> machine = heataudit.read_machine("press.xlsx")  # doctest: +SKIP
>>> audit = heataudit.audit(machine)  # doctest: +SKIP
>>> heataudit.write_report(audit, "press-audit")  # doctest: +SKIP
"""

from __future__ import annotations

from importlib import import_module
from typing import TYPE_CHECKING, Any

if TYPE_CHECKING:
    from heataudit.audit.run import audit as audit
    from heataudit.machine import read_machine as read_machine
    from heataudit.report.write import write_report as write_report

    __version__: str

__all__ = ["__version__", "audit", "read_machine", "write_report"]

_HOMES = {"read_machine": "heataudit.machine", "write_report": "heataudit.report.write"}


def __getattr__(name: str) -> Any:
    """Import what is asked for when it is asked for, so that importing the package costs nothing."""
    if name == "__version__":
        return _version()
    if name == "audit":
        return import_module("heataudit.audit")
    if name in _HOMES:
        return getattr(import_module(_HOMES[name]), name)
    raise AttributeError(f"module {__name__!r} has no attribute {name!r}")


def _version() -> str:
    """Version of the installed package; "unknown" where it is not installed."""
    from importlib.metadata import PackageNotFoundError, version

    try:
        return version(__name__)
    except PackageNotFoundError:
        return "unknown"
