"""How exports are read: names of columns and properties, letters, rules, marks.  ``[export]`` of a project changes it."""

from __future__ import annotations

import re
from collections.abc import Iterable, Mapping
from dataclasses import dataclass, field
from fnmatch import translate
from functools import cached_property

#: property names and column headings, compared without case, blanks, dots, dashes and underscores
COLUMNS: Mapping[str, tuple[str, ...]] = {
    "designator": (
        "designator", "refdes", "reference designator", "reference", "references", "ref", "part reference", "component",
        "part", "device", "instance",
    ),
    "refdes": ("designator", "refdes", "ref des", "reference designator", "reference", "part reference"),
    "pin": ("pin", "pin number", "pin no", "pin name", "pad", "pad number", "package pin", "terminal"),
    "port": ("pin name", "port", "port name", "function"),
    "net": ("net", "net name", "signal", "signal name", "node"),
    "value": ("value", "val", "nominal", "comment"),
    "part": (
        "part number", "mpn", "manufacturer part number", "order code", "part", "part name", "device", "name", "comment",
    ),
    "tolerance": ("tolerance", "tol"),
    "fitted": ("fitted", "populate", "populated", "mount", "mounted", "assemble"),
    "not-fitted": ("dnp", "dnf", "dni", "not fitted", "do not populate", "do not fit", "no mount"),
}  # fmt: skip
#: rating symbols by the property names that are read as them
RATING_NAMES: Mapping[str, tuple[str, ...]] = {
    "P_tot": ("p_tot", "power", "max. power dissipation", "power rating", "rated power", "wattage"),
    "V_R": ("v_r", "vr", "rated voltage", "voltage rating", "max. voltage", "voltage"),
    "I_F": ("i_f", "if", "imax", "max. current", "forward current"),
    "I_max": ("i_max", "rated current", "current rating", "max. current", "imax"),
    "V_max": ("v_max", "element voltage", "max. voltage"),
}
#: designator letters whose kind leaves no choice (IEC 81346-2, IEEE 315, GOST 2.710, common practice)
LETTERS: Mapping[str, str] = {
    "R": "resistor", "C": "capacitor", "L": "inductor", "F": "fuse", "FU": "fuse", "FB": "link", "NT": "link",
    "D": "diode", "CR": "diode", "VD": "diode", "LED": "led", "DS": "led", "HL": "led", "VR": "zener", "ZD": "zener",
    "J": "connector", "P": "connector", "X": "connector", "CN": "connector", "CON": "connector", "JP": "connector",
    "XP": "connector", "XS": "connector", "TP": "testpoint", "FID": "testpoint", "H": "testpoint", "MH": "testpoint",
    "MP": "testpoint",
}  # fmt: skip
#: what stands in a value where a part is not fitted
NOT_FITTED = (
    "dnp", "dnf", "dni", "dns", "nf", "n.f.", "np", "n.m.", "not fitted", "not populated", "not mounted", "not placed",
    "do not fit", "do not populate", "do not place", "do not mount", "no fit", "no pop", "no mount", "unpopulated",
    "unfitted", "не ставить", "не устанавливать",
)  # fmt: skip


def folded(name: str) -> str:
    """A column or property name as it is compared."""
    return re.sub(r"[\s._\-#]+", "", name).casefold()


@dataclass(frozen=True)
class Rule:
    """A mapping rule: parts whose named texts match all patterns are of this kind, part, state, or not fitted.

    ``patterns`` maps ``designator``, ``value``, ``part``, ``cell`` or a property's name to a pattern in which ``*`` and
    ``?`` stand for any characters; letter case does not count.
    """

    patterns: Mapping[str, str]
    kind: str = ""
    part: str = ""
    state: str = ""
    value: str = ""
    fitted: bool | None = None

    @cached_property
    def tests(self) -> tuple[tuple[str, re.Pattern[str]], ...]:
        return tuple((what, re.compile(translate(p), re.IGNORECASE)) for what, p in self.patterns.items())


@dataclass(frozen=True)
class ExportSettings:
    """Everything that a project may say of its exports."""

    columns: Mapping[str, tuple[str, ...]] = field(default_factory=lambda: dict(COLUMNS))
    ratings: Mapping[str, tuple[str, ...]] = field(default_factory=lambda: dict(RATING_NAMES))
    letters: Mapping[str, str] = field(default_factory=lambda: dict(LETTERS))
    rules: tuple[Rule, ...] = ()
    not_fitted: tuple[str, ...] = NOT_FITTED
    encoding: str = ""

    def called(self, what: str) -> frozenset[str]:
        """The folded names of a column."""
        return self._folded[what]

    @cached_property
    def _folded(self) -> dict[str, frozenset[str]]:
        return {what: frozenset(map(folded, names)) for what, names in self.columns.items()}

    @cached_property
    def _marks(self) -> tuple[frozenset[str], re.Pattern[str]]:
        """The marks, and those of three letters and more as words in a longer text (``100 NF`` is a value)."""
        longest: Iterable[str] = sorted((m for m in self.not_fitted if len(m) > 2), key=len, reverse=True)
        words = "|".join(r"[\s_-]+".join(map(re.escape, w.split())) for w in longest) or r"(?!)"
        return frozenset(map(folded, self.not_fitted)), re.compile(rf"(?<![\w.])(?:{words})(?![\w.])", re.IGNORECASE)

    def marked(self, text: str, whole: bool) -> bool:
        """Whether a text is a mark of a part that is not fitted, or (not ``whole``) has one in it."""
        marks, words = self._marks
        return folded(text) in marks or (not whole and words.search(text) is not None)


DEFAULTS = ExportSettings()
