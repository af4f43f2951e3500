"""A sizing as text and as JSON."""

from __future__ import annotations

from typing import Any

from netaudit.audit.size import Sizing
from netaudit.quantities.write import engineering


def size_record(found: Sizing) -> dict[str, Any]:
    return {
        "schema": "netaudit/size/1",
        "device": found.device,
        "unit": found.unit,
        "looked": list(found.looked),
        "passes": [list(p) for p in found.passes],
        "limited_by": [list(r) for r in found.limited_by],
        "preferred": {name: list(values) for name, values in found.preferred.items()},
    }


def size_text(found: Sizing) -> str:
    low, high = (engineering(v, found.unit, 4) for v in found.looked)
    if not found.passes:
        return f"{found.device}: no value between {low} and {high} lets every check of the board pass\n"
    lines = [f"{found.device}: every check of the board passes at its worst case for"]
    for (a, b), (below, above) in zip(found.passes, found.limited_by, strict=True):
        lines.append(f"  {engineering(a, found.unit, 4)} to {engineering(b, found.unit, 4)}")
        lines.append(f"    below: {below or 'not looked at'}; above: {above or 'not looked at'}")
    for name, values in found.preferred.items():
        shown = ", ".join(engineering(v, found.unit) for v in values[:24]) or "none"
        lines.append(f"  {name}: {shown}{' ...' if len(values) > 24 else ''}")
    return "\n".join(lines) + "\n"
