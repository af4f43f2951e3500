"""``netaudit convert``: a netlist of this language from a schematic export."""

from __future__ import annotations

import argparse
import os
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
    from netaudit.circuit.export_section import export_settings
    from netaudit.circuit.load import project_table
    from netaudit.circuit.mapping import map_export
    from netaudit.cli.common import deliver
    from netaudit.parts.tables import PartTable, read_table
    from netaudit.project.read import find_project
    from netaudit.report.netlist_text import netlist_text
    from netaudit.syntax.reader import LARGEST_EXPORT, read_bytes, read_export
    from netaudit.syntax.tables import merged

    project = find_project(os.path.dirname(options.files[0]) or os.curdir)
    settings = export_settings(project.export if project is not None else None)
    table = project_table(project) if project is not None else PartTable()
    for path in options.parts:
        table = table.merge(read_table(path))
    exports = []
    for path in options.files:
        if not path.lower().endswith((".edf", ".edn", ".edif", ".csv")):
            raise InputError(f"{path} is no export", mend="its name must end in .edf, .edn, .edif or .csv")
        exports.append(read_export(read_bytes(path, path, None, LARGEST_EXPORT), path, settings))
    export = merged(exports) if len(exports) > 1 else exports[0]
    parts = options.parts
    if options.output:
        # a netlist names files from where it stands
        beside = os.path.dirname(options.output) or os.curdir
        parts = [os.path.relpath(path, beside).replace(os.sep, "/") for path in parts]
    deliver(netlist_text(export, map_export(export, table, settings), parts), options.output)
    return 0
