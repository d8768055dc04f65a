"""The shipped examples, as data: `python -m tests.example_machines` writes them into examples/.

All machines, names and numbers are invented.
"""

from __future__ import annotations

from copy import copy
from pathlib import Path
from typing import Any

from openpyxl import load_workbook
from openpyxl.worksheet.worksheet import Worksheet

from heataudit.machine import write_blank

EXAMPLES = Path(__file__).parent.parent / "examples"

Table = list[list[Any]]
Sheets = dict[str, dict[str, Any] | Table]

BALER: Sheets = {
    "Machine": {
        "Machine": "Cardboard baler, hall 3",
        "Site": "Invented example: no such machine stands anywhere",
        "Prepared by": "Maintenance",
        "Ambient temperature": 22,
        "Design ambient temperature": 36,
        "Highest oil temperature": 60,
        "Operating hours": 3600,
        "Energy price": 0.21,
        "CO2 factor": 0.36,
    },
    "Oil": {"Viscosity grade": 46, "Viscosity index": 102},
    "Reservoir": {"Oil volume": 320, "Steel mass": 420, "Extra surface": 3.5, "Air movement": "still"},
    "Drives": [["Drive", "Kind", "Speed [rpm]", "Power limit [kW]", "Efficiency [%]"],
               ["Motor", "electric", 1480, 37, 93.5]],
    "Pumps": [
        ["Pump", "Type", "Control", "Drive", "Displacement [cm³/rev]", "Outlet", "Suction"],
        ["Press pump", "piston", "fixed", "Motor", 63, "P1", "S1"],
        ["Feed pump", "gear", "fixed", "Motor", 19, "P2", "Tank"],
    ],
    "Lines": [
        ["Line", "From", "To", "Service", "Size", "Length [m]", "Bends [-]", "Bend type", "Rise [m]"],
        ["Suction hose", "Tank", "S1", "suction", "DN50", 1.2, 2, "swept", None],
        ["Press feed", "P1", "Press.P", "pressure", "DN20", 3.5, 3, "swept", 0.8],
        ["Ram head hose", "Ram valve.A", "Ram.A", "pressure", "DN20", 6, 4, "elbow", None],
        ["Ram rod hose", "Ram valve.B", "Ram.B", "pressure", "DN16", 7.5, 4, "elbow", None],
        ["Gate head hose", "Gate valve.A", "Gate.A", "pressure", "DN12", 9, 4, "swept", 1.9],
        ["Gate rod hose", "Gate valve.B", "Gate.B", "pressure", "DN12", 9, 4, "swept", 1.9],
        ["Press return", "Press.T", "R", "return", "DN25", 4, 3, "elbow", -0.8],
        ["Feed line", "P2", "Feeder.P", "pressure", "18x2", 5, 5, "swept", None],
        ["Belt hose there", "Belt valve.A", "Belt.A", "pressure", "DN12", 8, 2, "swept", None],
        ["Belt hose back", "Belt valve.B", "Belt.B", "pressure", "DN12", 8, 2, "swept", None],
        ["Feed return", "Feeder.T", "R", "return", "22x2", 5, 5, "swept", None],
    ],
    "Valves": [
        ["Valve", "Kind", "From", "To", "Rated flow [L/min]", "Rated drop [bar]", "Opening pressure [bar]"],
        ["Press relief", "relief", "P1", "Tank", None, None, 190],
        ["Feed relief", "relief", "P2", "Tank", None, None, 140],
        ["Belt port relief", "relief", "Belt.A", "Tank", 40, None, 120],
        ["Return filter", "filter", "R", "Tank", 250, 0.9, None],
        ["Filter bypass", "check", "R", "Tank", 250, 1.0, 2.5],
    ],
    "Directional valves": [
        ["Section", "Bank", "Size", "P-A [L/min]", "Rated drop [bar]", "Centre"],
        ["Ram valve", "Press", "NG16", None, None, "open"],
        ["Gate valve", "Press", "NG10", None, None, "open"],
        ["Belt valve", "Feeder", None, 45, 7, "open"],
    ],
    "Actuators": [
        ["Actuator", "Kind", "Section", "Bore [mm]", "Rod [mm]", "Displacement [cm³/rev]", "Trapped volume [L]"],
        ["Ram", "cylinder", "Ram valve", 140, 80, None, 15],
        ["Gate", "cylinder", "Gate valve", 63, 36, None, None],
        ["Belt", "motor", "Belt valve", None, None, 160, None],
    ],
    "Duty cycle": [
        ["Phase", "Duration [s]", "Repeats [-]", "Ram move", "Ram load [kN]", "Gate move", "Gate load [kN]",
         "Gate speed [mm/s]", "Belt move", "Belt load [N·m]", "Belt speed [rpm]"],
        ["Fill the chamber", 12, 3, None, None, None, None, None, "forward", 140, 90],
        ["Ram out, light", 9, 3, "extend", 25, None, None, None, "forward", 140, 90],
        ["Ram out, packing", 4, 3, "extend", 215, None, None, None, None, None, None],
        ["Hold the bale", 3, 3, "press", 270, None, None, None, None, None, None],
        ["Ram back", 8, 3, "retract", 12, None, None, None, "forward", 110, 90],
        ["Gate up", 9, 1, None, None, "extend", 9, 90, None, None, None],
        ["Push the bale out", 10, 1, "extend", 60, None, None, None, None, None, None],
        ["Gate down, ram back", 9, 1, "retract", 12, "retract", -4, 90, "forward", 60, 60],
        ["Wait for the wrapper", 25, 1, None, None, None, None, None, None, None, None],
    ],
    "Coolers": [
        ["Cooler", "Kind", "Oil flow [L/min]", "Capacity [kW/K]", "Water flow [L/min]", "Pressure drop [bar]",
         "Fan power [kW]", "Price"],
        ["Air, small", "air", 60, 0.13, None, 0.4, 0.25, 620],
        ["Air, small", "air", 120, 0.17, None, 1.3, 0.25, 620],
        ["Air, medium", "air", 60, 0.27, None, 0.3, 0.55, 980],
        ["Air, medium", "air", 140, 0.38, None, 1.1, 0.55, 980],
        ["Air, large", "air", 80, 0.56, None, 0.3, 1.1, 1650],
        ["Air, large", "air", 200, 0.86, None, 1.4, 1.1, 1650],
        ["Water, plates", "water", 60, 0.95, 25, 0.5, None, 1120],
        ["Water, plates", "water", 140, 1.45, 25, 1.9, None, 1120],
    ],
}  # fmt: skip
"""A channel baler that runs hot: two fixed pumps, open-centre banks, a bale held over the relief valve."""

CRANE: Sheets = {
    "Machine": {
        "Machine": "Timber crane on a forest trailer",
        "Site": "Invented example",
        "Ambient temperature": 18,
        "Design ambient temperature": 33,
        "Operating hours": 1400,
        "Energy price": 1.45,
        "CO2 factor": 2.65,
    },
    "Oil": {"Viscosity grade": 46, "Viscosity index": 150},
    "Reservoir": {
        "Oil volume": 160, "Steel mass": 900, "Extra surface": 2.5, "Air movement": "draught", "Cooler capacity": 0.1,
        "Cooler flow from": "Oil cooler",
    },
    "Drives": [["Drive", "Kind", "Speed [rpm]", "Power limit [kW]"], ["Engine", "diesel", 1800, 75]],
    "Pumps": [
        ["Pump", "Type", "Control", "Drive", "Displacement [cm³/rev]", "Setting [bar]", "Margin [bar]",
         "Power limit [kW]", "Outlet"],
        ["Main pump", "piston", "load sensing", "Engine", 71, 240, 28, 45, "P1"],
    ],
    "Lines": [
        ["Line", "From", "To", "Service", "Size", "Length [m]", "Bends [-]", "Bend type", "Rise [m]"],
        ["Main hose", "P1", "Crane.P", "pressure", "DN20", 5.5, 4, "swept", 1.2],
        ["Slew hose left", "Slew.A", "Slew motor.A", "pressure", "DN12", 3, 3, "swept", None],
        ["Slew hose right", "Slew.B", "Slew motor.B", "pressure", "DN12", 3, 3, "swept", None],
        ["Boom hose head", "Boom.A", "J1", "pressure", "DN16", 4, 2, "swept", 1.5],
        ["Boom hose rod", "Boom.B", "Boom cylinder.B", "pressure", "DN16", 4.5, 2, "swept", 1.5],
        ["Arm hose head", "Arm.A", "Arm cylinder.A", "pressure", "DN16", 7, 4, "swept", 2.5],
        ["Arm hose rod", "Arm.B", "Arm cylinder.B", "pressure", "DN16", 7, 4, "swept", 2.5],
        ["Grapple hose close", "Grapple.A", "Grapple cylinder.A", "pressure", "DN10", 11, 6, "swept", 3],
        ["Grapple hose open", "Grapple.B", "Grapple cylinder.B", "pressure", "DN10", 11, 6, "swept", 3],
        ["Return hose", "Crane.T", "R1", "return", "DN25", 5, 4, "swept", -1.2],
        ["Return to filter", "R2", "R3", "return", "DN25", 1.5, 2, "swept", None],
    ],
    "Valves": [
        ["Valve", "Kind", "From", "To", "Rated flow [L/min]", "Rated drop [bar]", "Opening pressure [bar]",
         "Pilot from"],
        ["Safety relief", "relief", "P1", "Tank", None, None, 265, None],
        ["Boom holding valve", "counterbalance", "Boom cylinder.A", "J1", 120, 8, None, "Boom cylinder.B"],
        ["Oil cooler", "cooler", "R1", "R2", 120, 1.2, None, None],
        ["Return filter", "filter", "R3", "Tank", 160, 0.8, None, None],
        ["Filter bypass", "check", "R3", "Tank", 160, 1.0, 2.0, None],
    ],
    "Directional valves": [
        ["Section", "Bank", "P-A [L/min]", "A-T [L/min]", "Rated drop [bar]", "Compensator"],
        ["Slew", "Crane", 50, 50, 13, "individual"],
        ["Boom", "Crane", 110, 110, 13, "individual"],
        ["Arm", "Crane", 90, 90, 13, "individual"],
        ["Grapple", "Crane", 45, 45, 13, "individual"],
    ],
    "Actuators": [
        ["Actuator", "Kind", "Section", "Bore [mm]", "Rod [mm]", "Displacement [cm³/rev]"],
        ["Slew motor", "motor", "Slew", None, None, 400],
        ["Boom cylinder", "cylinder", "Boom", 110, 63, None],
        ["Arm cylinder", "cylinder", "Arm", 90, 55, None],
        ["Grapple cylinder", "cylinder", "Grapple", 75, 40, None],
    ],
    "Duty cycle": [
        ["Phase", "Duration [s]", "Slew motor move", "Slew motor load [N·m]", "Slew motor speed [rpm]",
         "Boom cylinder move", "Boom cylinder load [kN]", "Boom cylinder speed [mm/s]", "Arm cylinder move",
         "Arm cylinder load [kN]", "Arm cylinder speed [mm/s]", "Grapple cylinder move", "Grapple cylinder load [kN]",
         "Grapple cylinder speed [mm/s]"],
        ["Reach out", 3, None, None, None, None, None, None, "extend", 18, 170, "retract", 2, 90],
        ["Boom down, empty", 2.5, None, None, None, "retract", -62, 120, None, None, None, None, None, None],
        ["Close the grapple", 2, None, None, None, None, None, None, None, None, None, "extend", 55, 90],
        ["Lift the logs", 4, None, None, None, "extend", 142, 105, "retract", 24, 90, None, None, None],
        ["Slew to the trailer", 3.5, "forward", 520, 60, "extend", 128, 40, None, None, None, None, None, None],
        ["Lower the logs", 3, None, None, None, "retract", -135, 100, None, None, None, None, None, None],
        ["Open the grapple", 1.5, None, None, None, None, None, None, None, None, None, "retract", 3, 90],
        ["Slew back", 3.5, "reverse", 300, 75, "extend", 70, 60, None, None, None, None, None, None],
        ["Drive to the next pile", 9, None, None, None, None, None, None, None, None, None, None, None, None],
    ],
    "Coolers": [
        ["Cooler", "Kind", "Oil flow [L/min]", "Capacity [kW/K]", "Pressure drop [bar]", "Fan power [kW]", "Price"],
        ["Engine-side core", "air", 20, 0.16, 0.2, 0.0, 540],
        ["Engine-side core", "air", 120, 0.24, 1.3, 0.0, 540],
        ["Core with fan", "air", 20, 0.30, 0.2, 0.35, 890],
        ["Core with fan", "air", 120, 0.46, 1.1, 0.35, 890],
    ],
}  # fmt: skip
"""A load-sensing crane that lowers its loads over a counterbalance valve, with the cooler in the return."""

PRESS: Sheets = {
    "Machine": {
        "Machine": "Veneer press with two pumps",
        "Site": "Invented example",
        "Ambient temperature": 24,
        "Operating hours": 4200,
        "Energy price": 0.19,
        "CO2 factor": 0.33,
    },
    "Oil": {"Viscosity grade": 46},
    "Reservoir": {"Oil volume": 400, "Steel mass": 600, "Raised": "yes", "Extra surface": 3},
    "Drives": [["Drive", "Kind", "Speed [rpm]", "Power limit [kW]"], ["Motor", "electric", 1470, 22]],
    "Pumps": [
        ["Pump", "Type", "Control", "Drive", "Displacement [cm³/rev]", "Outlet"],
        ["Fast pump", "vane", "fixed", "Motor", 82, "P2"],
        ["Pressure pump", "piston", "fixed", "Motor", 10, "P1"],
    ],
    "Lines": [
        ["Line", "From", "To", "Service", "Size", "Length [m]", "Bends [-]", "Bend type", "Rise [m]"],
        ["Feed", "P1", "Stand.P", "pressure", "30x4", 2.5, 3, "drilled", 0.5],
        ["Lift tube left", "Platen valve.A", "J", "pressure", "30x4", 3.5, 4, "swept", 0.6],
        ["Lift tube right", "J", "Platen.A", "pressure", "30x4", 1.8, 2, "swept", 0.4],
        ["Unloading tube", "U", "Tank", "return", "30x3", 1.2, 2, "swept", None],
        ["Clamp hose head", "Clamp valve.A", "Clamp.A", "pressure", "DN10", 4, 2, "swept", None],
        ["Clamp hose rod", "Clamp valve.B", "Clamp.B", "pressure", "DN10", 4, 2, "swept", None],
        ["Return tube", "Stand.T", "R", "return", "38x3", 2.5, 3, "swept", -0.5],
    ],
    "Valves": [
        ["Valve", "Kind", "From", "To", "Rated flow [L/min]", "Rated drop [bar]", "Opening pressure [bar]",
         "Pilot from"],
        ["High relief", "relief", "P1", "Tank", 20, 12, 230, None],
        ["Low relief", "relief", "P2", "Tank", None, None, 90, None],
        ["Non-return", "check", "P2", "P1", 160, 1.5, 0.5, None],
        ["Unloading valve", "unloading", "P2", "U", 160, 3, 65, "P1"],
        ["Return filter", "filter", "R", "Tank", 200, 0.7, None, None],
        ["Filter bypass", "check", "R", "Tank", 200, 1.0, 2.0, None],
    ],
    "Directional valves": [
        ["Section", "Bank", "Feed", "Size", "Centre"],
        ["Clamp valve", "Stand", "tandem", "NG16", "open"],
        ["Platen valve", "Stand", "tandem", "NG16", "open"],
    ],
    "Actuators": [
        ["Actuator", "Kind", "Section", "Bore [mm]", "Rod [mm]", "Trapped volume [L]"],
        ["Platen", "plunger", "Platen valve", 220, None, 26],
        ["Clamp", "cylinder", "Clamp valve", 50, 28, None],
    ],
    "Duty cycle": [
        ["Phase", "Duration [s]", "Platen move", "Platen load [kN]", "Platen opening [%]", "Clamp move",
         "Clamp load [kN]", "Clamp speed [mm/s]"],
        ["Load the press", 30, None, None, None, None, None, None],
        ["Clamp", 3, None, None, None, "extend", 4, 60],
        ["Close fast", 6, "extend", 60, None, None, None, None],
        ["Squeeze", 8, "extend", 620, None, None, None, None],
        ["Hold the pressure", 5, "press", 800, None, None, None, None],
        ["Open under its weight", 12, "retract", -45, 25, None, None, None],
        ["Unclamp", 3, None, None, None, "retract", 2, 60],
    ],
    "Coolers": [
        ["Cooler", "Kind", "Oil flow [L/min]", "Capacity [kW/K]", "Water flow [L/min]", "Pressure drop [bar]", "Price"],
        ["Water, small", "water", 30, 0.35, 12, 0.3, 480],
        ["Water, small", "water", 100, 0.55, 12, 1.6, 480],
    ],
}  # fmt: skip
"""A press with a high and a low pressure pump that unloads, and oil that is let down from pressure."""

SWEEPER: Sheets = {
    "Machine": {
        "Machine": "Yard sweeper with hydrostatic drive",
        "Site": "Invented example",
        "Ambient temperature": 20,
        "Design ambient temperature": 35,
        "Operating hours": 1100,
        "Energy price": 1.50,
        "CO2 factor": 2.65,
    },
    "Oil": {"Viscosity grade": 46, "Viscosity index": 140},
    "Reservoir": {"Oil volume": 70, "Steel mass": 250, "Air movement": "draught", "Extra surface": 1.5,
                  "Other heat": 0.4, "Cooler capacity": 0.1, "Cooler oil flow": 40},
    "Drives": [["Drive", "Kind", "Speed [rpm]", "Power limit [kW]"], ["Engine", "diesel", 2200, 40]],
    "Pumps": [
        ["Pump", "Type", "Control", "Drive", "Speed ratio [-]", "Displacement [cm³/rev]", "Setting [bar]", "Outlet",
         "Suction", "Charge pressure [bar]"],
        ["Travel pump", "piston", "set displacement", "Engine", 1, 46, 320, "LA", "LB", 22],
        ["Brush pump", "gear", "fixed", "Engine", 1, 22, None, "P2", "Tank", None],
    ],
    "Lines": [
        ["Line", "From", "To", "Service", "Size", "Length [m]", "Bends [-]", "Bend type", "Rise [m]"],
        ["Loop hose ahead", "LA", "Wheel motor.A", "pressure", "DN20", 2.2, 3, "swept", None],
        ["Loop hose astern", "LB", "Wheel motor.B", "pressure", "DN20", 2.2, 3, "swept", None],
        ["Brush feed", "P2", "Brushes.P", "pressure", "DN12", 2.5, 3, "elbow", None],
        ["Brush hose there", "Brush valve.A", "Side brushes.A", "pressure", "DN12", 3.5, 4, "elbow", None],
        ["Brush hose back", "Brush valve.B", "Side brushes.B", "pressure", "DN12", 3.5, 4, "elbow", None],
        ["Tip hose head", "Tip valve.A", "Tip cylinder.A", "pressure", "DN10", 3, 3, "swept", 0.6],
        ["Tip hose rod", "Tip valve.B", "Tip cylinder.B", "pressure", "DN10", 3, 3, "swept", 0.6],
        ["Return hose", "Brushes.T", "R", "return", "DN16", 2, 3, "elbow", None],
    ],
    "Valves": [
        ["Valve", "Kind", "From", "To", "Rated flow [L/min]", "Rated drop [bar]", "Opening pressure [bar]"],
        ["Loop relief ahead", "relief", "LA", "LB", None, None, 320],
        ["Loop relief astern", "relief", "LB", "LA", None, None, 320],
        ["Brush relief", "relief", "P2", "Tank", None, None, 170],
        ["Return filter", "filter", "R", "Tank", 80, 0.8, None],
        ["Filter bypass", "check", "R", "Tank", 80, 1.0, 2.0],
    ],
    "Directional valves": [
        ["Section", "Bank", "Feed", "P-A [L/min]", "Rated drop [bar]", "Centre"],
        ["Tip valve", "Brushes", "tandem", 50, 8, "open"],
        ["Brush valve", "Brushes", "tandem", 50, 8, "open"],
    ],
    "Actuators": [
        ["Actuator", "Kind", "Section", "Bore [mm]", "Rod [mm]", "Displacement [cm³/rev]", "Count [-]"],
        ["Wheel motor", "motor", None, None, None, 160, 1],
        ["Side brushes", "motor", "Brush valve", None, None, 80, 2],
        ["Tip cylinder", "cylinder", "Tip valve", 70, 40, None, 1],
    ],
    "Duty cycle": [
        ["Phase", "Duration [s]", "Travel pump displacement [%]", "Wheel motor move", "Wheel motor load [N·m]",
         "Side brushes move", "Side brushes load [N·m]", "Tip cylinder move", "Tip cylinder load [kN]",
         "Tip cylinder speed [mm/s]"],
        ["Sweep", 240, 35, "forward", 170, "forward", 150, None, None, None],
        ["Sweep up the ramp", 60, 35, "forward", 430, "forward", 150, None, None, None],
        ["Down the ramp", 45, 50, "forward", -160, None, None, None, None, None],
        ["Drive to the heap", 90, 90, "forward", 210, None, None, None, None, None],
        ["Back up", 15, -30, "reverse", 140, None, None, None, None, None],
        ["Tip", 12, 0, None, None, None, None, "extend", 38, 60],
        ["Tip down", 9, 0, None, None, None, None, "retract", -9, 80],
        ["Wait", 60, 0, None, None, None, None, None, None, None],
    ],
    "Coolers": [
        ["Cooler", "Kind", "Oil flow [L/min]", "Capacity [kW/K]", "Pressure drop [bar]", "Fan power [kW]", "Price"],
        ["Radiator part", "air", 20, 0.08, 0.2, 0.0, 260],
        ["Radiator part", "air", 60, 0.12, 0.9, 0.0, 260],
        ["Core with fan", "air", 20, 0.19, 0.2, 0.25, 610],
        ["Core with fan", "air", 60, 0.27, 0.7, 0.25, 610],
    ],
}  # fmt: skip
"""A closed loop for travel that also brakes, and brush motors fed in tandem from an open centre."""

MACHINES = {"baler.xlsx": BALER, "crane.xlsx": CRANE, "press.xlsx": PRESS, "sweeper.xlsx": SWEEPER}


def write_example(path: Path, sheets: Sheets) -> None:
    """Fill a blank workbook in."""
    write_blank(path)
    book = load_workbook(path)
    for title, content in sheets.items():
        if isinstance(content, dict):
            _fill_settings(book[title], content)
        else:
            _fill_table(book[title], content)
    book.active = book.sheetnames.index("Machine")
    book.save(path)


def _fill_settings(sheet: Worksheet, values: dict[str, Any]) -> None:
    rows = {row[0].value: row for row in sheet.iter_rows(min_row=2)}
    for item, value in values.items():
        rows[item][1].value = value


def _fill_table(sheet: Worksheet, table: Table) -> None:
    headers = {cell.value: cell.column for cell in sheet[1] if cell.value}
    style = sheet.cell(1, 1)
    sheet.delete_rows(2)
    for header in table[0]:
        if header not in headers:
            free = [name for name in headers if ": " in str(name)]
            column = headers.pop(free[0]) if free else sheet.max_column + 1
            cell = sheet.cell(1, column, header)
            cell._style = copy(style._style)
            sheet.column_dimensions[cell.column_letter].width = max(12, len(header) + 2)
            headers[header] = column
    for number, row in enumerate(table[1:], 2):
        for header, value in zip(table[0], row, strict=True):
            if value is not None:
                sheet.cell(number, headers[header], value)


if __name__ == "__main__":
    EXAMPLES.mkdir(exist_ok=True)
    for name, sheets in MACHINES.items():
        (EXAMPLES / name).unlink(missing_ok=True)
        write_example(EXAMPLES / name, sheets)
