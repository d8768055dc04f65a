"""A rig that does no useful work: its oil receives all of the shaft power.

Helwig, Pignanelli, Schütze (2015), Condition monitoring of hydraulic systems, UCI data set 447, doi 10.24432/C5CW21,
CC BY 4.0: means over the stable cycles. Cooler capacity and ambient of each row come from its own temperatures, so this
checks the size of the surface coefficient (25 W/K) and the arithmetic of the balance; it is no prediction.
"""

import pytest

from heataudit.audit.run import audit
from heataudit.physics.constants import KELVIN
from tests.audit.fixture import changed, constant, press, with_conductance, with_cycle


@pytest.mark.parametrize(
    ("motor", "cooled", "tank", "ambient"), [(2385.0, 1553.0, 57.32, 25.4), (2540.3, 2163.0, 38.81, 22.0)]
)
def test_the_balance_gives_back_the_rigs_tank_temperature(
    motor: float, cooled: float, tank: float, ambient: float
) -> None:
    machine = changed(
        with_cycle(press(), [60.0]), general={"ambient_temperature": KELVIN + ambient},
        reservoir={"cooler_capacity": cooled / (tank - ambient)},
    )  # fmt: skip
    found = audit(with_conductance(machine, 25.0), constant(motor))
    assert found.thermal.equilibrium_C == pytest.approx(tank, abs=0.5)
