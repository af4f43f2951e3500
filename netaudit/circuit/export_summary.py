"""What became of a schematic export, by name: the coverage that is said before anything else."""

from __future__ import annotations

from dataclasses import dataclass


@dataclass(frozen=True)
class ExportSummary:
    """Counts and names of one export.

    ``kinds``: kind, by which rule, designators; ``unread``: designator and what could not be read; ``symbols``: drawing
    symbols that are no parts; ``units``: packages drawn in several units and in how many; ``ratings``: rating symbol,
    property it was read from, designators;
    ``unconnected``: fitted parts of which no pin is on a net.
    """

    file: str
    instances: int
    nets: int
    kinds: tuple[tuple[str, str, tuple[str, ...]], ...]
    not_fitted: tuple[str, ...] = ()
    unread: tuple[tuple[str, str], ...] = ()
    symbols: tuple[str, ...] = ()
    units: tuple[tuple[str, int], ...] = ()
    ratings: tuple[tuple[str, str, tuple[str, ...]], ...] = ()
    unconnected: tuple[str, ...] = ()

    @property
    def parts(self) -> int:
        """Parts, units of one package counted once, not fitted ones included."""
        return sum(len(names) for _, _, names in self.kinds)

    @property
    def unmodelled(self) -> tuple[str, ...]:
        """Fitted parts that nothing is known of."""
        left_out = set(self.not_fitted)
        return tuple(n for kind, _, names in self.kinds if kind == "unmodelled" for n in names if n not in left_out)
