"""A mapped export as a netlist of the language, in a stable order."""

from __future__ import annotations

import re
from collections.abc import Sequence

from netaudit.circuit.mapping import Mapped
from netaudit.circuit.pins import natural
from netaudit.circuit.raw import RawDevice
from netaudit.failure import printable
from netaudit.parts.part import Part
from netaudit.report.export_text import export_lines
from netaudit.syntax.export import Export, Instance
from netaudit.syntax.parse import RESERVED

_BARE = re.compile(r"^[A-Za-z0-9_+\-./~]+$")
_PLAIN = re.compile(r"^[A-Za-z0-9_+\-./~%]+$")


def name_text(name: str, designator: bool = False) -> str:
    """A net or designator, in quotes where the language needs them."""
    bare = bool(_BARE.match(name)) and ".." not in name and name != "nc"
    if bare and not (designator and name in RESERVED):
        return name
    return quoted(name)


def netlist_text(export: Export, mapped: Mapped, parts: Sequence[str] = ()) -> str:
    """The netlist: devices in the order of their designators, remarks and findings as comments."""
    lines = ["netlist 1", f"# from {printable(export.file)}"]
    lines += [f"# {line}" for line in export_lines(mapped.summary, most=10_000)]
    lines += [f"# {printable(remark)}" for remark in mapped.remarks]
    lines += [f"# {printable(f.message)}" for f in mapped.findings]
    lines += [f"parts {quoted(path)}" for path in parts]
    lines += ["# add: ground NET, ambient, supplies, modes, expectations", ""]
    lines += [device_text(d) for d in sorted(mapped.devices, key=lambda d: natural(d.name))]
    lines += [package_text(i, part) for i, part in sorted(mapped.packages, key=lambda p: natural(p[0].name))]
    if mapped.omitted:
        lines += ["", "# not fitted"]
        lines += [f"omit {name_text(name, True)}" for name in sorted(mapped.omitted, key=natural)]
    return "\n".join(lines) + "\n"


def package_text(instance: Instance, part: Part) -> str:
    """A package of several devices: its part's row opens it into a block, which the netlist must define."""
    pins = " ".join(f"{name_text(pin)}:{name_text(net)}" for pin, net in instance.pins.items())
    return f"{name_text(instance.name, True)} unmodelled part={_value(part.name)} {pins}".rstrip()


def device_text(device: RawDevice) -> str:
    """One device statement."""
    spec = device.spec
    items = [word.text for word in (spec.state, spec.value, spec.span, spec.tolerance) if word is not None]
    items += [f"{key}={_value(word.text)}" for key, word in spec.keys.items()]
    items += [f"{name_text(pin)}:{'nc' if net is None else name_text(net)}" for pin, net in device.pins.items()]
    return f"{name_text(device.name, True)} {device.kind.name} {' '.join(items)}"


def quoted(text: str) -> str:
    # a line break cannot stand in a netlist: it is shown as its escape
    escaped = printable(text).replace("\\", "\\\\").replace('"', '\\"')
    return f'"{escaped}"'


def _value(text: str) -> str:
    return text if _PLAIN.match(text) and ".." not in text else quoted(text)
