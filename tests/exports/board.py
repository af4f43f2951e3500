"""The export of a board of 300 parts: a greenhouse controller with two microcontrollers, as a capture tool writes it.

``python -m tests.exports.board FOLDER`` writes ``vent.edf`` and three netlists beside it: what the export alone gives,
the same with an hour of ``covered`` lines, and with part rows as well; the README states the numbers of ``coverage``.
"""

from __future__ import annotations

import sys
from pathlib import Path

import netaudit
from netaudit.audit.records import Coverage
from tests.exports.writer import Placed, edif

_HEAD = """netlist 1
title "Greenhouse controller"
{parts}include "vent.edf"
ground GND
ambient 25degC 0degC..50degC
PS1 supply 24V 21V..27V limit=3A  +:V24 -:GND
PS2 supply 5V 4.9V..5.1V limit=1A +:V5 -:GND
PS3 supply 3.3V 3.2V..3.4V limit=1A +:V3 -:GND
"""
COVERED = """covered U1 "controller: data sheet, run mode" draws 5:7=35mA,20mA..45mA 6:7=35mA,20mA..45mA
covered U2 "radio: data sheet, transmitting" draws 5:7=90mA,60mA..110mA 6:7=0mA
covered U3 "24 V to 5 V: its output is PS2" no-current
covered U4 "5 V to 3.3 V: its output is PS3" no-current
covered U5 "bus driver" draws 5:7=12mA
covered U6 "converter of the sensors" draws 5:7=3mA
covered Y1 "crystal" no-current
covered Y2 "crystal" no-current
"""
ROWS = """[CHIP-0603]
kind = "resistor"
ratings = { P_tot = "100mW", V_max = "75V" }
[CAP-50V]
kind = "capacitor"
ratings = { V_R = "50V" }
[LED-GREEN]
kind = "led"
material = "GaP"
pins = { "1" = "K", "2" = "A" }
ratings = { I_F = "20mA", V_R = "5V", P_tot = "60mW", T_j = "100degC", R_th_ja = "450K/W" }
[DIODE-100V]
kind = "diode"
I_S = "4e-9"
n = 1.9
pins = { "1" = "K", "2" = "A" }
ratings = { I_F = "200mA", V_R = "75V", P_tot = "300mW", T_j = "150degC", R_th_ja = "400K/W" }
[NMOS-60V]
kind = "nmos"
V_GS_th = "1.6V"
K = "0.5"
pins = { "1" = "G", "2" = "S", "3" = "D" }
ratings = { I_D = "300mA", V_DS = "60V", V_GS = "20V", P_tot = "350mW", T_j = "150degC", R_th_ja = "350K/W" }
[RELAY-24V]
kind = "relay"
R = "1440ohm"
pins = { "1" = "C1", "2" = "C2", "3" = "COM", "4" = "NO", "5" = "NC" }
ratings = { I_max = "5A" }
"""
RULES = """parts = ["rows.toml"]
[[export.rules]]
when = { designator = "R*", "PCB Footprint" = "*0603*" }
part = "CHIP-0603"
[[export.rules]]
when = { designator = "C*", "PCB Footprint" = "*0603*" }
part = "CAP-50V"
"""


def board() -> list[Placed]:
    """301 parts: 16 valve channels of 12, 40 sensor inputs of 2, supplies, controllers, connectors."""
    placed: list[Placed] = []
    count: dict[str, int] = {}

    def add(letter: str, symbol: str, pins: dict[str, str], **properties: str) -> None:
        count[letter] = count.get(letter, 0) + 1
        named = {name.replace("_", " "): value for name, value in properties.items()}
        placed.append(Placed(f"{letter}{count[letter]}", symbol, pins, named))

    def two(letter: str, value: str, a: str, b: str) -> None:
        footprint = "CHIP_0603" if letter in "RC" else ""
        add(letter, f"SYM_{letter}", {"1": a, "2": b}, Value=value, PCB_Footprint=footprint)

    for k in range(1, 17):
        two("R", "100", f"OUT{k}", f"G{k}")
        two("R", "100k", f"G{k}", "GND")
        add("Q", "SYM_Q", {"1": f"G{k}", "2": "GND", "3": f"COIL{k}"}, Value="NMOS-60V")
        two("D", "DIODE-100V", "V24", f"COIL{k}")
        relay = {"1": "V24", "2": f"COIL{k}", "3": "V24", "4": f"VALVE{k}"}
        add("K", "SYM_K", relay, Value="RELAY-24V")
        two("R", "4k7", f"VALVE{k}", f"LAMP{k}")
        two("D", "LED-GREEN", "GND", f"LAMP{k}")
        two("C", "10n", f"VALVE{k}", "GND")
        add("J", "SYM_J", {"1": f"VALVE{k}", "2": "GND"}, Value="VALVE")
        two("R", "47k", f"VALVE{k}", f"MON{k}")
        two("R", "4k7", f"MON{k}", "GND")
        two("C", "100n", f"MON{k}", "GND")
    for k in range(1, 41):
        two("R", "10k 1%", "V3", f"NTC{k}")
        two("C", "100n", f"NTC{k}", "GND")
    for letter, value, supply in [("U", "MCU-48", "V3"), ("U", "RADIO-24", "V3")]:
        add(letter, "SYM_U", {"1": "OUT1", "2": "MON1", "3": "NTC1", "5": supply, "6": supply, "7": "GND"}, Value=value)
    add("U", "SYM_REG", {"1": "V24", "2": "GND", "3": "V5"}, Value="STEP-DOWN-5V")
    add("U", "SYM_REG", {"1": "V5", "2": "GND", "3": "V3"}, Value="LINEAR-3V3")
    add("U", "SYM_U", {"5": "V5", "7": "GND", "1": "BUS_A", "2": "BUS_B"}, Value="BUS-DRIVER")
    add("U", "SYM_U", {"5": "V3", "7": "GND", "1": "NTC2", "2": "NTC3"}, Value="CONVERTER-16")
    for k in (1, 2):
        two("Y", "8 MHz", f"X{k}A", f"X{k}B")
        two("C", "18p", f"X{k}A", "GND")
        two("C", "18p", f"X{k}B", "GND")
    add("J", "SYM_BUS", {"1": "BUS_A", "2": "BUS_B", "3": "GND"}, Value="BUS")
    add("J", "SYM_J", {"1": "V24", "2": "GND"}, Value="SUPPLY")
    for k in range(2, 17):
        two("R", "1k", f"OUT{k}", "GND")
    return placed


def write(folder: Path) -> dict[str, Path]:
    """The three netlists by what was worked into them; the last one in a project of its own."""
    text = edif(board())
    rows = folder / "rows"
    rows.mkdir(parents=True, exist_ok=True)
    for place in (folder, rows):
        (place / "vent.edf").write_text(text, encoding="utf-8")
    (rows / "rows.toml").write_text(ROWS, encoding="utf-8")
    (rows / "netaudit.toml").write_text(RULES, encoding="utf-8")
    paths = {"export": folder / "export.netlist", "covered": folder / "covered.netlist", "rows": rows / "rows.netlist"}
    head = _HEAD.format(parts="")
    paths["export"].write_text(head, encoding="utf-8")
    paths["covered"].write_text(head + COVERED, encoding="utf-8")
    paths["rows"].write_text(head + COVERED, encoding="utf-8")
    return paths


def coverage(path: Path) -> tuple[Coverage, dict[str, int]]:
    """Coverage of the audit at nominal values, and how many findings of each level."""
    audit = netaudit.load(str(path)).audit(nominal=True)
    levels = {level: sum(f.level == level for f in audit.findings) for level in ("error", "warning", "note")}
    return audit.coverage, levels


if __name__ == "__main__":
    for what, path in write(Path(sys.argv[1])).items():
        found, levels = coverage(path)
        print(
            f"{what}: {found.parts} parts, {found.audited} audited, {found.covered} covered, {len(found.unmodelled)} not "
            f"modelled, {found.checks} checks, {found.checks_missing_rating} without rating; {levels}"
        )
