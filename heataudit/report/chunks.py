"""A long cycle in pieces, so that files of any length are written in bounded memory."""

from __future__ import annotations

from collections.abc import Iterator

from heataudit.audit.model import Audit

CELLS = 100_000
"""Phases x components written at a time."""


def chunks(audit: Audit) -> Iterator[slice]:
    """Slices of phases that together are the cycle, in order.

    Parameters
    ----------
    audit
        The answers.
    """
    solution = audit.solution
    wide = len(solution.components.name) + len(solution.pumps.name) + len(solution.actuators.name)
    phases, step = solution.phases, max(1, CELLS // wide)
    for start in range(0, phases, step):
        yield slice(start, min(start + step, phases))
