"""A mapped export as a netlist of the language, in a stable order."""

from __future__ import annotations

import re
from collections.abc import Sequence

from netaudit.circuit.mapping import Mapped
from netaudit.circuit.raw import RawDevice
from netaudit.failure import printable
from netaudit.syntax.export import Export
from netaudit.syntax.parse import RESERVED

_BARE = re.compile(r"^[A-Za-z0-9_+\-./~]+$")


def name_text(name: str, designator: bool = False) -> str:
    """A net or designator, in quotes where the language needs them."""
    bare = bool(_BARE.match(name)) and ".." not in name and name != "nc"
    if bare and not (designator and name in RESERVED):
        return name
    # a line break cannot stand in a netlist: it is shown as its escape
    escaped = printable(name).replace("\\", "\\\\").replace('"', '\\"')
    return f'"{escaped}"'


def netlist_text(export: Export, mapped: Mapped, parts: Sequence[str] = ()) -> str:
    """The netlist: devices in the order of their designators, remarks and findings as comments."""
    lines = ["netlist 1", f"# from {printable(export.file)}"]
    lines += [f"# {printable(remark)}" for remark in mapped.remarks]
    lines += [f"# {printable(f.message)}" for f in mapped.findings]
    lines += [f'parts "{path}"' for path in parts]
    lines += ["# add: ground NET, ambient, supplies, modes, expectations", ""]
    lines += [device_text(d) for d in sorted(mapped.devices, key=_natural)]
    return "\n".join(lines) + "\n"


def device_text(device: RawDevice) -> str:
    """One device statement."""
    spec = device.spec
    items = [word.text for word in (spec.state, spec.value, spec.span, spec.tolerance) if word is not None]
    items += [f"{key}={_value(word.text)}" for key, word in spec.keys.items()]
    items += [f"{name_text(pin)}:{'nc' if net is None else name_text(net)}" for pin, net in device.pins.items()]
    return f"{name_text(device.name, True)} {device.kind.name} {' '.join(items)}"


def _value(text: str) -> str:
    return f'"{text}"' if re.search(r"[\s:=#\"]", text) else text


def _natural(device: RawDevice) -> list[tuple[int, str]]:
    """R2 before R10."""
    return [(int(t), "") if t.isdigit() else (-1, t) for t in re.split(r"(\d+)", device.name)]
