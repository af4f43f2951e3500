"""A model that is the material's default or a generic class, not the part's own.

Its operating point is roughly right; a rating check near its limit is not to be trusted to the last tenth.  A row with
data-sheet points replaces it.

    fails:  D1 diode material=silicon A:A K:K
    passes: D1 diode part=DIODE-1A A:A K:K   with forward points in its row
"""

from __future__ import annotations

from collections.abc import Iterable

from netaudit.audit.rule import Rule, Site, about
from netaudit.finding import Finding


def find(site: Site) -> Iterable[Finding]:
    for device in site.graph.circuit.devices:
        if device.rough and not device.missing:
            text = f"{device.name}: {device.rough}, not the part's own data"
            yield Finding(RULE.name, RULE.level, text, **about(device))


RULE = Rule("part/rough-model", "note", "structure", "a model that is only a default", find)
