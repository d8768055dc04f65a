"""Answers: losses, heat balance, cooler, a year's energy, findings. The room itself can be called: `audit(machine)`."""

from __future__ import annotations

import sys
from types import ModuleType
from typing import TYPE_CHECKING

if TYPE_CHECKING:
    from heataudit.audit.model import Audit
    from heataudit.machine import Machine


class _Room(ModuleType):
    """So that `heataudit.audit` is this package and the public function."""

    def __call__(self, machine: Machine) -> Audit:
        """What `heataudit.audit.run.audit` answers.

        Parameters
        ----------
        machine
            What was read from the workbook.
        """
        from heataudit.audit.run import audit

        return audit(machine)


sys.modules[__name__].__class__ = _Room
