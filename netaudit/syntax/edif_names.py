"""Names, keys, designators and properties of EDIF forms."""

from __future__ import annotations

import re
from dataclasses import dataclass
from itertools import product

from netaudit.failure import InputError
from netaudit.place import Place
from netaudit.syntax.export import Property
from netaudit.syntax.forms import Form, identifier, plain, string

#: how a property names the units that numberDefinition may scale
_UNITS = {
    "resistance": "ohm", "capacitance": "F", "inductance": "H", "voltage": "V", "current": "A", "power": "W",
    "temperature": "K", "time": "s", "frequency": "Hz",
}  # fmt: skip
_RANGE = re.compile(
    r"^(?P<base>.*)(?P<open>[\[(<])\s*(?P<first>\d+)\s*(?::|\.\.|-)\s*(?P<last>\d+)\s*[\])>]$", re.DOTALL
)
_CLOSING = {"[": "]", "(": ")", "<": ">"}
_LARGEST_ARRAY = 100_000
#: before the library of a reference that names none
NOT_NAMED = "\0"


@dataclass(frozen=True, slots=True)
class Name:
    """A defined name: its key (case-insensitive), the name people gave it, and the sizes of an array (none: a single)."""

    key: str
    original: str
    sizes: tuple[int, ...] = ()


def members(name: Name) -> list[Name]:
    """The single names in a name: itself, or the members of an array, the left-most first."""
    if not name.sizes:
        return [name]
    indices = list(product(*(range(size) for size in name.sizes)))
    originals = bus_names(name.original, len(indices)) if len(name.sizes) == 1 else None
    return [
        Name(
            name.key + "".join(f"[{k}]" for k in index),
            originals[n] if originals is not None else name.original + "".join(f"[{k}]" for k in index),
        )
        for n, index in enumerate(indices)
    ]


def bus_names(original: str, size: int) -> list[str]:
    """Names of the members: ``D[7:0]`` has D[7] to D[0], a name without a range D[0], D[1], ..."""
    match = _RANGE.match(original)
    if match is not None:
        first, last = int(match["first"]), int(match["last"])
        step = 1 if last >= first else -1
        if abs(last - first) + 1 == size:
            return [
                f"{match['base']}{match['open']}{k}{_CLOSING[match['open']]}" for k in range(first, last + step, step)
            ]
    return [f"{original}[{k}]" for k in range(size)]


class Names:
    """Reads names and properties of one file."""

    def __init__(self, file: str) -> None:
        self.file = file
        self.scales: dict[str, float] = {}

    def fail(self, what: str, line: int, mend: str = "") -> InputError:
        return InputError(what, place=Place(self.file, line), mend=mend)

    def name_of(self, form: Form) -> Name:
        """The name that a form defines, its first item: IDENT, (rename IDENT "original"), (array NAME size), (name …)."""
        item = form.items[0] if form.items else None
        if isinstance(item, str):
            return Name(identifier(item), string(item) if item[0] == '"' else plain(item))
        if item is None:
            raise self.fail(f"({form.keyword}) has no name", form.line)
        if item.keyword == "rename":
            return self._renamed(item)
        if item.keyword == "array":
            return self._array(item)
        if item.keyword == "name" and item.atom():
            return Name(identifier(item.atom()), plain(item.atom()))
        raise self.fail(f"({form.keyword} ({item.keyword} …)): a name was expected", item.line)

    def _array(self, item: Form) -> Name:
        first = item.first("array")
        if first is not None:
            raise self.fail("an array of an array", first.line, "write all sizes in one (array NAME size size)")
        inner = self.name_of(item)
        sizes = tuple(int(a) for a in item.items[1:] if isinstance(a, str) and a.isdigit() and len(a) < 10)
        total = 1
        for size in sizes:
            total *= size
        if not sizes or not 0 < total <= _LARGEST_ARRAY:
            raise self.fail(
                f"an array of {total if sizes else 'unknown'} size",
                item.line,
                f"1 to {_LARGEST_ARRAY} members are read",
            )
        return Name(inner.key, inner.original, sizes)

    def _renamed(self, item: Form) -> Name:
        ident, texts = "", []
        for inner in item.items:
            if isinstance(inner, str):
                if inner[0] == '"':
                    texts.append(inner)
                else:
                    ident = ident or inner
            elif inner.keyword == "stringdisplay":
                texts += inner.atoms()
            elif inner.keyword == "name":
                ident = ident or inner.atom()
        if not ident:
            raise self.fail("(rename) without an identifier", item.line)
        original = next((string(t) for t in texts if t[0] == '"'), "")
        # an empty name is none
        return Name(identifier(ident), original if original.strip() else plain(ident))

    def designator_of(self, form: Form) -> str:
        inner = form.first("designator")
        if inner is None:
            return ""
        display = inner.first("stringdisplay")
        atom = inner.atom() or (display.atom() if display is not None else "")
        return string(atom).strip() if atom else ""

    def property_of(self, form: Form) -> Property:
        name = self.name_of(form).original
        unit_form = form.first("unit")
        unit = unit_form.atom().lower() if unit_form is not None else ""
        for typed in form.items:
            if isinstance(typed, Form) and typed.keyword in _TYPES:
                return self._typed(name, typed, unit)
        loose = form.items[1] if len(form.items) > 1 and isinstance(form.items[1], str) else ""
        return Property(name, string(loose))

    def _typed(self, name: str, typed: Form, unit: str) -> Property:
        if typed.keyword == "string":
            display = typed.first("stringdisplay")
            atom = typed.atom() or (display.atom() if display is not None else "")
            return Property(name, string(atom) if atom else "")
        if typed.keyword == "boolean":
            return Property(name, "true" if typed.first("true") is not None else "false" if typed.items else "")
        items = list(typed.items)
        if typed.keyword == "minomax":
            # minimum, nominal, maximum: the nominal, else the first that is given
            items = [i for i in items if self.number(i) is not None][1:2] or items[:1]
        value = next((n for n in (self.number(i) for i in items) if n is not None), None)
        if value is None:
            return Property(name, "")
        scaled = value * self.scales.get(unit, 1.0)
        return Property(name, f"{scaled:.12g}", scaled, _UNITS.get(unit, unit))

    def number(self, item: Form | str) -> float | None:
        """``150`` or ``(e 5 -2)`` = 5e-2; None when it is neither."""
        if isinstance(item, Form):
            atoms = item.atoms()
            if item.keyword != "e" or len(atoms) != 2:
                return None
            text = f"{atoms[0]}e{atoms[1]}"
        else:
            text = item
        try:
            value = float(text)
        except ValueError:
            return None
        return value if abs(value) < 1e300 else None

    def member_key(self, ref: Form) -> str:
        """The key a reference names: an identifier, or ``(member NAME int)``."""
        atom = ref.atom()
        if atom:
            return identifier(atom)
        member = ref.first("member")
        if member is not None and member.atom():
            name, *indices = member.atoms()
            return identifier(name) + "".join(f"[{k}]" for k in indices)
        named = ref.first("name", "rename")
        if named is not None and named.atom():
            return identifier(named.atom())
        raise self.fail(f"({ref.keyword}) names nothing", ref.line)

    def cell_key(self, reference: Form, library: str) -> tuple[str, str]:
        """Library and cell; a library that is not named is the one being defined, marked by ``NOT_NAMED``."""
        inside = reference.first("libraryref")
        atom = reference.atom()
        if not atom:
            raise self.fail("(cellRef) names no cell", reference.line)
        named = identifier(inside.atom()) if inside is not None and inside.atom() else f"{NOT_NAMED}{library}"
        return (named, identifier(atom))


_TYPES = frozenset({"string", "integer", "number", "boolean", "minomax", "point"})
