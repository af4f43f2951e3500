"""``netaudit fit``: a part row from a measured curve."""

from __future__ import annotations

import argparse
import sys
from pathlib import Path
from typing import Any

from netaudit.failure import InputError
from netaudit.place import Place
from netaudit.quantities.read import read_number


def add(commands: Any) -> None:
    command = commands.add_parser(
        "fit",
        help="a part row from a measured curve",
        description="Fits I_S, n, R_S, leakage and breakdown to a measured curve and prints the part's row. When no exponential "
        "fits, the row keeps the curve itself.",
        allow_abbrev=False,
    )
    command.add_argument("file", metavar="CURVE.csv", help="columns voltage and current, units in the heading")
    command.add_argument("--name", required=True, help="the part's name in the table")
    command.add_argument(
        "--kind",
        default="diode",
        choices=("diode", "led", "zener", "suppressor", "bridge", "curve"),
        help="what the part is (default: diode); a curve keeps its points",
    )
    command.add_argument(
        "-o", "--output", metavar="PARTS.toml", help="append the row to this table instead of printing it"
    )
    command.add_argument(
        "--voltage-unit", default="", metavar="mV", help="unit of the voltages where the heading has none"
    )
    command.add_argument(
        "--current-unit", default="", metavar="mA", help="unit of the currents where the heading has none"
    )
    command.add_argument(
        "--current-first", action="store_true", help="without a heading: the first column is the current"
    )
    command.add_argument("--series", metavar="1kohm", help="a supply was swept behind this resistor: columns V_S, V_D")
    command.add_argument("--temperature", default="25degC", metavar="T", help="where the heading states none")
    command.add_argument("--volts", default="1mV", metavar="1mV", help="the meter's uncertainty in volts")
    command.add_argument(
        "--share", default="1%", metavar="1%", help="the meter's uncertainty as a share of the current"
    )
    command.add_argument("--noise", default="0A", metavar="10nA", help="the meter's offset noise")
    command.add_argument("--limit", metavar="100mA", help="the instrument's current limit (looked for when not given)")
    command.set_defaults(run=run)


def run(options: argparse.Namespace) -> int:
    from netaudit.parts.bench import Meter, fit_curves
    from netaudit.parts.measured import Layout, read_curves
    from netaudit.report.part_row import fit_text, part_row

    place = Place("netaudit fit", 1)
    series = read_number(options.series, "ohm", place, code=True) if options.series else None
    layout = Layout(options.voltage_unit, options.current_unit, series, options.current_first)
    meter = Meter(
        read_number(options.volts, "V", place),
        read_number(options.share, "1", place),
        read_number(options.noise, "A", place),
        read_number(options.limit, "A", place) if options.limit else None,
    )
    try:
        data = Path(options.file).read_bytes()
    except OSError as error:
        raise InputError(f"{options.file} cannot be read: {error.strerror}") from None
    curves = read_curves(data, options.file, layout)
    try:
        found = fit_curves(curves, meter, read_number(options.temperature, "degC", place))
    except InputError as error:
        raise InputError(
            error.what,
            place=Place(options.file, error.place.line if error.place else curves[0].lines[0]),
            mend=error.mend,
        ) from None
    row = part_row(options.name, options.kind, found, options.file)
    sys.stdout.write(fit_text(options.name, options.kind, found, curves) + "\n")
    if options.output:
        _append(options.output, options.name, row)
        sys.stdout.write(f"row {options.name} added to {options.output}\n")
    else:
        sys.stdout.write(row)
    return 0


def _append(path: str, name: str, row: str) -> None:
    """Adds a row to a table, whole or not at all; a row of that name is not overwritten."""
    import os
    import tempfile

    from netaudit.parts.tables import read_table

    target = Path(path)
    before = ""
    if target.exists():
        if name in read_table(path).rows:
            raise InputError(f"{path} already has a part {name}", mend="choose another --name or remove the row")
        before = target.read_text(encoding="utf-8").rstrip("\n") + "\n\n"
    handle, temporary = tempfile.mkstemp(dir=target.parent or Path("."), prefix=".netaudit-")
    try:
        with os.fdopen(handle, "w", encoding="utf-8") as out:
            out.write(before + row)
        os.replace(temporary, path)
    except OSError as error:
        Path(temporary).unlink(missing_ok=True)
        raise InputError(f"{path} cannot be written: {error.strerror}") from None
