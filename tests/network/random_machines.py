"""Random machines for tests of the solver: invented, within what a yard holds."""

from __future__ import annotations

from typing import Any

import numpy as np

from tests.workbooks import Sheets

SETTINGS = ["Item", "Value", "Unit"]


def random_machine(seed: int, phases: int, *, mixed: bool = False) -> Sheets:
    """Sheets of a machine with 1 to 3 pumps and 1 to 6 functions on shared trunks, and a duty cycle.

    `mixed` draws from all kinds of pump control, valve, feed and compensator; without it only from those whose laws
    do not reach over other components.
    """
    return _Maker(np.random.default_rng(seed), mixed).make(phases)


class _Maker:
    def __init__(self, rng: np.random.Generator, mixed: bool) -> None:
        self.rng, self.mixed = rng, mixed
        self.lines: list[list[Any]] = []
        self.valves: list[list[Any]] = []
        self.sections: list[list[Any]] = []
        self.actuators: list[list[Any]] = []
        self.columns: dict[str, list[Any]] = {}

    def chance(self, share: float) -> bool:
        return bool(self.rng.random() < share)

    def sometimes(self, share: float) -> bool:
        """A chance that only mixed machines have."""
        return self.mixed and self.chance(share)

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
                        "Set flow [L/min]", "Pilot from", "Port 3", "Vented"], *self.valves],
            "Directional valves": [
                ["Section", "Bank", "P-A [L/min]", "A-T [L/min]", "Centre", "Feed", "Compensator", "Regeneration"],
                *self.sections,
            ],
            "Actuators": [["Actuator", "Kind", "Section", "Bore [mm]", "Rod [mm]", "Displacement [cm³/rev]", "Port A",
                           "Port B", "Volumetric efficiency [%]"], *self.actuators],
            "Duty cycle": [["Phase", "Duration [s]", *self.columns], *rows],
        }  # fmt: skip

    def _line(self, start: str, end: str, diameter: float) -> None:
        rise = float(self.rng.uniform(-2, 2)) if self.chance(0.2) else 0.0
        name = f"Line {len(self.lines) + 1}"
        self.lines.append([name, start, end, diameter, self.between(0.2, 15), int(self.rng.integers(0, 5)), rise])

    def _valve(self, kind: str, start: str, end: str, **more: Any) -> None:
        name = f"Valve {len(self.valves) + 1}"
        self.valves.append([
            name, kind, start, end, more.get("flow", self.between(10, 200)), more.get("opening"), more.get("set"),
            more.get("pilot"), more.get("port_3"), more.get("vented"),
        ])  # fmt: skip

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
            "Power limit [kW]",
        ]
        rows = []
        for number in range(int(self.rng.integers(1, 4))):
            control = "fixed" if self.chance(0.5) else "pressure compensated"
            if self.sometimes(0.5):
                control = str(self.rng.choice(["load sensing", "speed controlled"]))
            setting = None if control == "fixed" else self.between(100, 300)
            suction = f"S{number}" if self.chance(0.3) else "Tank"
            if suction != "Tank":
                self._line("Tank", suction, 40)
            kind = str(self.rng.choice(["gear", "vane", "piston"]))
            limit = self.between(5, 60) if control != "fixed" and self.sometimes(0.3) else None
            rows.append(
                [f"Pump {number}", kind, control, self.between(8, 150), 1450, setting, f"O{number}", suction, limit]
            )
            if control == "fixed" and self.sometimes(0.4):
                pilot = str(self.rng.choice(["Bank 1", "Trunk"]))
                kind_of_unloading = "load-sensing unloading" if pilot == "Bank 1" else "unloading"
                opening = self.between(8, 25) if pilot == "Bank 1" else self.between(60, 250)
                self._valve(kind_of_unloading, f"O{number}", "Tank", opening=opening, pilot=pilot)
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

    def _holding(self, section: str, name: str, side: str, other: str) -> None:
        """A load-holding valve between a section and its actuator, piloted from the other side."""
        if self.chance(0.6):
            vented = "yes" if self.chance(0.3) else None
            opening = None if self.chance(0.5) else self.between(60, 350)
            self._valve(
                "counterbalance", f"{name}.{side}", f"{section}.{side}", opening=opening, pilot=f"{name}.{other}",
                vented=vented,
            )  # fmt: skip
        else:
            self._valve("pilot-operated check", f"{section}.{side}", f"{name}.{side}", pilot=f"{name}.{other}")

    def _function(self, number: int, bank: str, phases: int) -> None:
        name, section = f"Function {number}", f"Section {number}"
        kind = str(self.rng.choice(["cylinder", "cylinder", "plunger", "double rod", "motor", "constant pressure"]))
        flow = self.between(20, 250)
        rodded = kind in ("cylinder", "double rod")
        centre, feed, compensator, regeneration = str(self.rng.choice(["closed", "open"])), None, None, None
        if self.sometimes(0.5):
            compensator = str(self.rng.choice(["individual", "flow sharing"]))
        elif self.sometimes(0.3):
            feed = str(self.rng.choice(["tandem", "series"])) if centre == "open" else "tandem"
        if kind == "cylinder" and self.sometimes(0.15):
            regeneration = "extend"
        back = flow * float(self.rng.choice([1, 0.5]))
        self.sections.append([section, bank, flow, back, centre, feed, compensator, regeneration])
        leak = None if kind == "constant pressure" else float(self.rng.choice([100, 96]))
        self.actuators.append([
            name, kind, section, 80 if rodded or kind == "plunger" else None, 45 if rodded else None,
            self.between(20, 200) if kind == "motor" else None, None, None, leak,
        ])  # fmt: skip
        held = str(self.rng.choice(["A", "B"])) if rodded or kind == "motor" else ""
        if held and self.sometimes(0.4):
            self._holding(section, name, held, "B" if held == "A" else "A")
        else:
            held = ""
        if held != "A":
            self._way(f"{section}.A", f"{name}.A")
        if kind != "plunger" and held != "B":
            self._way(f"{section}.B", f"{name}.B")
        words = {"motor": ["forward", "reverse"], "constant pressure": ["on"]}.get(kind, ["extend", "retract"])
        rest = ["hold", "float"] if self.mixed and kind != "constant pressure" else ["hold"]
        moves = [str(self.rng.choice([*words, *words, *rest])) for _ in range(phases)]
        steering = self.rng.choice(3)
        loads, speeds, openings = [], [], []
        for move in moves:
            load = self.between(1, 400) * (-0.2 if self.chance(0.2) else 1.0)
            if kind == "plunger":
                load = -abs(load) if move == "retract" else abs(load)
            loads.append(None if move == "hold" else round(load, 3))
            speeds.append(None if move in ("hold", "float") or self.chance(0.3) else self.between(5, 600))
            openings.append(
                None if move in ("hold", "float") or self.chance(0.3) else float(self.rng.choice([5, 30, 60, 100]))
            )
        self.columns |= {f"{name} move": moves, f"{name} load [bar]": loads}
        if steering == 1 and kind != "constant pressure":
            self.columns[f"{name} speed [{'rpm' if kind == 'motor' else 'mm/s'}]"] = speeds
        if steering == 2:
            self.columns[f"{name} opening [%]"] = openings

    def _consumer(self, phases: int) -> None:
        """A consumer without a section, behind a flow control, or in mixed machines behind another valve."""
        kind = (
            str(self.rng.choice(["flow control", "sequence", "reducing", "priority"])) if self.mixed else "flow control"
        )
        if kind == "priority":
            self._valve(kind, "Trunk", "Steering", set=self.between(2, 20), port_3="Bank 1.P")
        elif kind == "flow control":
            self._valve(kind, "Trunk", "Steering", set=self.between(2, 20))
        else:
            self._valve(kind, "Trunk", "Steering", opening=self.between(20, 200))
        self.actuators.append(["Consumer", "constant pressure", None, None, None, None, "Steering", "R", None])
        self.columns |= {
            "Consumer move": [str(self.rng.choice(["on", "hold"])) for _ in range(phases)],
            "Consumer load [bar]": [self.between(10, 150) for _ in range(phases)],
        }
