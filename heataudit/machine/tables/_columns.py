"""Short ways to declare the columns that most tables have."""

from __future__ import annotations

from functools import partial

from heataudit.machine.schema import Column

number = partial(Column, holds="number")
text = partial(Column, holds="text")
word = partial(Column, holds="word")
flag = partial(Column, holds="flag", words=("yes", "no"))
port = partial(Column, holds="port")
size = partial(Column, holds="size")
reference = partial(Column, holds="reference")

length_mm = partial(Column, dimension="length", unit_name="mm")
length_m = partial(Column, dimension="length", unit_name="m")
pressure = partial(Column, dimension="pressure", unit_name="bar")
flow = partial(Column, dimension="flow", unit_name="L/min")
power = partial(Column, dimension="power", unit_name="kW")
volume = partial(Column, dimension="volume", unit_name="L")
displacement = partial(Column, dimension="displacement", unit_name="cm³/rev")
viscosity = partial(Column, dimension="viscosity", unit_name="mm²/s")
rotation = partial(Column, dimension="rotational speed", unit_name="rpm")
temperature = partial(Column, dimension="temperature", unit_name="°C")
share = partial(Column, dimension="share", unit_name="%")
efficiency = partial(share, at_least=10.0, at_most=100.0)


def name(header: str, help: str) -> Column:
    """The first column of a table of components."""
    return Column(header=header, help=help, holds="name", own_key="name", must=True)
