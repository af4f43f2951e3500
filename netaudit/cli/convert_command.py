"""``netaudit convert``: a netlist of this language from a schematic export."""

from __future__ import annotations

import argparse
import sys
from pathlib import Path
from typing import Any

from netaudit.failure import InputError


def add(commands: Any) -> None:
    command = commands.add_parser(
        "convert",
        help="a netlist from a schematic export",
        description="Writes the netlist language from an EDIF 2 0 0 file or connection tables, in a stable order; what was not "
        "understood stands in comments.",
        allow_abbrev=False,
    )
    command.add_argument("files", nargs="+", metavar="EXPORT", help=".edf .edn .edif, or .csv tables of one board")
    command.add_argument("--parts", action="append", default=[], metavar="PARTS.toml", help="part table to map by")
    command.add_argument("-o", "--output", metavar="FILE", help="write there instead of to the terminal")
    command.set_defaults(run=run)


def run(options: argparse.Namespace) -> int:
    from netaudit.circuit.mapping import map_export
    from netaudit.parts.tables import PartTable, read_table
    from netaudit.report.netlist_text import netlist_text
    from netaudit.syntax.reader import read_bytes, read_export
    from netaudit.syntax.tables import merged

    table = PartTable()
    for path in options.parts:
        table = table.merge(read_table(path))
    exports = []
    for path in options.files:
        if not path.lower().endswith((".edf", ".edn", ".edif", ".csv")):
            raise InputError(f"{path} is no export", mend="its name must end in .edf, .edn, .edif or .csv")
        exports.append(read_export(read_bytes(path, path, None), path))
    export = merged(exports) if len(exports) > 1 else exports[0]
    text = netlist_text(export, map_export(export, table), options.parts)
    if options.output:
        try:
            Path(options.output).write_text(text, encoding="utf-8")
        except OSError as error:
            raise InputError(f"{options.output} cannot be written: {error.strerror}") from None
    else:
        sys.stdout.write(text)
    return 0
