"""Lines: hoses, tubes and drillings."""

from __future__ import annotations

from typing import Any

from heataudit.network.branches import Branch
from heataudit.network.plant import Plant
from heataudit.physics.constants import STANDARD_GRAVITY
from heataudit.physics.lines import END_LOSS, LineShape, bend_coefficients


def make(line: Any, plant: Plant) -> Branch:
    """A line from From to To; its drop contains what lifting the oil by its rise takes."""
    k1, k_infinity = bend_coefficients(line.bend_type, line.inside_diameter)
    shape = LineShape(
        diameter=line.inside_diameter,
        length=line.length,
        roughness=line.roughness,
        bends_k1=line.bends * k1,
        bends_kinf=line.bends * k_infinity,
        minor_k=line.loss_coefficient + END_LOSS * line.ends,
        parallel=line.count,
    )
    head = plant.density * STANDARD_GRAVITY * line.rise
    return Branch(line.name, "line", plant.node(line.from_), plant.node(line.to), constant=head, line=shape)
