"""Random machines for tests of the solver: invented, within what a yard holds."""

from __future__ import annotations

from typing import Any

import numpy as np

from tests.workbooks import Sheets

SETTINGS = ["Item", "Value", "Unit"]


def random_machine(seed: int, phases: int) -> Sheets:
    """Sheets of a machine with 1 to 3 pumps and 1 to 6 functions on shared trunks, and a duty cycle."""
    return _Maker(np.random.default_rng(seed)).make(phases)


class _Maker:
    def __init__(self, rng: np.random.Generator) -> None:
        self.rng = rng
        self.lines: list[list[Any]] = []
        self.valves: list[list[Any]] = []
        self.sections: list[list[Any]] = []
        self.actuators: list[list[Any]] = []
        self.columns: dict[str, list[Any]] = {}

    def chance(self, share: float) -> bool:
        return bool(self.rng.random() < share)

    def between(self, low: float, high: float) -> float:
        return float(np.round(np.exp(self.rng.uniform(np.log(low), np.log(high))), 4))

    def make(self, phases: int) -> Sheets:
        pumps = self._pumps()
        self._return()
        functions = int(self.rng.integers(1, 7))
        banks = int(self.rng.integers(1, 1 + min(functions, 2)))
        for number in range(functions):
            self._function(number, f"Bank {number % banks + 1}", phases)
        for bank in range(banks):
            self._line("Trunk", f"Bank {bank + 1}.P", int(self.rng.choice([12, 16, 20, 25])))
            self._line(f"Bank {bank + 1}.T", "R", 25)
        if self.chance(0.3):
            self._consumer(phases)
        rows = [
            [f"p{n}", float(self.rng.integers(1, 20)), *(self.columns[c][n] for c in self.columns)]
            for n in range(phases)
        ]
        return {
            "Machine": [SETTINGS, ["Machine", "Random machine"], ["Oil temperature", self.between(10, 80), "°C"]],
            "Oil": [SETTINGS, ["Viscosity grade", int(self.rng.choice([22, 32, 46, 68]))],
                    ["Pressure-viscosity coefficient", float(self.rng.choice([0, 20])), "1/GPa"]],
            "Reservoir": [SETTINGS, ["Oil volume", 200, "L"]],
            "Pumps": pumps,
            "Lines": [
                ["Line", "From", "To", "Inside diameter [mm]", "Length [m]", "Bends [-]", "Rise [m]"], *self.lines
            ],
            "Valves": [["Valve", "Kind", "From", "To", "Rated flow [L/min]", "Opening pressure [bar]",
                        "Set flow [L/min]"], *self.valves],
            "Directional valves": [["Section", "Bank", "P-A [L/min]", "A-T [L/min]", "Centre"], *self.sections],
            "Actuators": [["Actuator", "Kind", "Section", "Bore [mm]", "Rod [mm]", "Displacement [cm³/rev]", "Port A",
                           "Port B", "Volumetric efficiency [%]"], *self.actuators],
            "Duty cycle": [["Phase", "Duration [s]", *self.columns], *rows],
        }  # fmt: skip

    def _line(self, start: str, end: str, diameter: float) -> None:
        rise = float(self.rng.uniform(-2, 2)) if self.chance(0.2) else 0.0
        name = f"Line {len(self.lines) + 1}"
        self.lines.append([name, start, end, diameter, self.between(0.2, 15), int(self.rng.integers(0, 5)), rise])

    def _valve(self, kind: str, start: str, end: str, **more: float) -> None:
        name = f"Valve {len(self.valves) + 1}"
        self.valves.append(
            [name, kind, start, end, more.get("flow", self.between(10, 200)), more.get("opening"), more.get("set")]
        )

    def _pumps(self) -> list[list[Any]]:
        header = [
            "Pump",
            "Type",
            "Control",
            "Displacement [cm³/rev]",
            "Speed [rpm]",
            "Setting [bar]",
            "Outlet",
            "Suction",
        ]
        rows = []
        for number in range(int(self.rng.integers(1, 4))):
            control = "fixed" if self.chance(0.5) else "pressure compensated"
            setting = None if control == "fixed" else self.between(100, 300)
            suction = f"S{number}" if self.chance(0.3) else "Tank"
            if suction != "Tank":
                self._line("Tank", suction, 40)
            kind = str(self.rng.choice(["gear", "vane", "piston"]))
            rows.append([f"Pump {number}", kind, control, self.between(8, 150), 1450, setting, f"O{number}", suction])
            self._valve("relief", f"O{number}", "Tank", opening=self.between(150, 350))
            if self.chance(0.5):
                self._valve("check", f"O{number}", "Trunk", opening=self.between(0.2, 5))
            else:
                self._line(f"O{number}", "Trunk", 20)
        return [header, *rows]

    def _return(self) -> None:
        if self.chance(0.5):
            self._valve("filter", "R", "Tank")
            self._valve("check", "R", "Tank", opening=2.5)
        else:
            self._line("R", "Tank", 32)

    def _way(self, section_port: str, actuator_port: str) -> None:
        """What may lie between a section and its actuator."""
        if self.chance(0.5):
            junction = f"{actuator_port} x"
            self._line(
                section_port, junction if self.chance(0.3) else actuator_port, float(self.rng.choice([10, 12, 16]))
            )
            if self.lines[-1][2] == junction:
                self._valve("throttle", junction, actuator_port)
                if self.chance(0.7):
                    self._valve("check", junction, actuator_port, opening=0.5)
        if self.chance(0.25):
            self._valve("relief", actuator_port, "Tank", opening=self.between(120, 380), flow=60)
        if self.chance(0.15):
            self._valve("check", "Tank", actuator_port, opening=0.1)

    def _function(self, number: int, bank: str, phases: int) -> None:
        name, section = f"Function {number}", f"Section {number}"
        kind = str(self.rng.choice(["cylinder", "cylinder", "plunger", "double rod", "motor", "constant pressure"]))
        flow = self.between(20, 250)
        self.sections.append(
            [section, bank, flow, flow * float(self.rng.choice([1, 0.5])), str(self.rng.choice(["closed", "open"]))]
        )
        rodded = kind in ("cylinder", "double rod")
        leak = None if kind == "constant pressure" else float(self.rng.choice([100, 96]))
        self.actuators.append([
            name, kind, section, 80 if rodded or kind == "plunger" else None, 45 if rodded else None,
            self.between(20, 200) if kind == "motor" else None, None, None, leak,
        ])  # fmt: skip
        self._way(f"{section}.A", f"{name}.A")
        if kind != "plunger":
            self._way(f"{section}.B", f"{name}.B")
        words = {"motor": ["forward", "reverse"], "constant pressure": ["on"]}.get(kind, ["extend", "retract"])
        moves = [str(self.rng.choice([*words, *words, "hold"])) for _ in range(phases)]
        steering = self.rng.choice(3)
        loads, speeds, openings = [], [], []
        for move in moves:
            load = self.between(1, 400) * (-0.2 if self.chance(0.2) else 1.0)
            if kind == "plunger":
                load = -abs(load) if move == "retract" else abs(load)
            loads.append(None if move == "hold" else round(load, 3))
            speeds.append(None if move == "hold" or self.chance(0.3) else self.between(5, 600))
            openings.append(None if move == "hold" or self.chance(0.3) else float(self.rng.choice([5, 30, 60, 100])))
        self.columns |= {f"{name} move": moves, f"{name} load [bar]": loads}
        if steering == 1 and kind != "constant pressure":
            self.columns[f"{name} speed [{'rpm' if kind == 'motor' else 'mm/s'}]"] = speeds
        if steering == 2:
            self.columns[f"{name} opening [%]"] = openings

    def _consumer(self, phases: int) -> None:
        """A consumer without a section, behind a flow control."""
        self._valve("flow control", "Trunk", "Steering", set=self.between(2, 20))
        self.actuators.append(["Consumer", "constant pressure", None, None, None, None, "Steering", "R", None])
        self.columns |= {
            "Consumer move": [str(self.rng.choice(["on", "hold"])) for _ in range(phases)],
            "Consumer load [bar]": [self.between(10, 150) for _ in range(phases)],
        }
