"""What makes two findings the same one: the rule and what it is about, not where it stands.

A part is known by its kind and the nets of its pins, so that a finding survives moved lines, renamed files, changed
values and new designators; where several parts of a board look alike, the designator tells them apart.
"""

from __future__ import annotations

import hashlib
from collections import Counter
from collections.abc import Iterator, Mapping, Sequence

from netaudit.audit.records import PartRow
from netaudit.finding import Finding

Seat = tuple[str, tuple[tuple[str, str | None], ...]]


def seat(part: PartRow) -> Seat:
    """Where a part sits: its kind and its pins' nets."""
    return (part.kind, tuple(sorted(part.pins.items())))


def about(finding: Finding) -> tuple[str | None, ...]:
    """What a finding is about besides its part and mode."""
    return (finding.rule, finding.net, finding.pin, finding.quantity, finding.variant)


def fingerprints(findings: Sequence[Finding], parts: Sequence[PartRow]) -> Iterator[str]:
    """A fingerprint for each finding, in their order; findings that cannot be told apart are numbered."""
    seats = {part.name: seat(part) for part in parts}
    alike = Counter(seats.values())
    seen: Counter[str] = Counter()
    for finding in findings:
        text = repr((about(finding), finding.mode, _part(finding.device, seats, alike)))
        seen[text] += 1
        yield hashlib.sha256(f"{text}#{seen[text]}".encode()).hexdigest()[:32]


def _part(device: str | None, seats: Mapping[str, Seat], alike: Counter[Seat]) -> object:
    if device is None or device not in seats:
        return device
    own = seats[device]
    return own if alike[own] == 1 else (own, device)
