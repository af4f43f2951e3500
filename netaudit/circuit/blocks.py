"""Blocks opened: every placed block becomes its parts under names such as ``A1/R1``."""

from __future__ import annotations

import re
from collections.abc import Iterator, Mapping, Sequence
from dataclasses import dataclass, replace
from graphlib import CycleError, TopologicalSorter

from netaudit.circuit.raw import RawDevice, sort_items
from netaudit.devices import KINDS
from netaudit.failure import InputError
from netaudit.syntax.statements import (
    BlockStatement,
    CoveredStatement,
    DeviceStatement,
    Items,
    KeyItem,
    SameHeatStatement,
    Statement,
    Word,
)
from netaudit.syntax.suggest import closest

#: a netlist that opens to more devices than this is a slip (blocks that multiply), and would fill the memory
_MOST = 1_000_000

_PARAMETER = re.compile(r"\$([A-Za-z_][A-Za-z0-9_]*)")


@dataclass(frozen=True)
class Scope:
    """Where a statement stands: the prefix of its names, its nets' outer names, and the block's parameters."""

    prefix: str
    nets: Mapping[str, str]
    parameters: Mapping[str, Word]
    above: tuple[str, ...]

    def net(self, name: str, grounds: frozenset[str]) -> str:
        if not self.prefix or name in grounds:
            return name
        return self.nets.get(name, f"{self.prefix}{name}")


@dataclass
class Opened:
    """What opening gives: devices, and the ``covered`` and ``same-heat`` lines of blocks with their prefixes."""

    devices: list[RawDevice]
    covered: list[tuple[str, CoveredStatement]]
    heat: list[tuple[str, SameHeatStatement]]


class Opener:
    """Opens a netlist's device statements."""

    def __init__(self, blocks: Mapping[str, BlockStatement], grounds: frozenset[str]) -> None:
        self.blocks = blocks
        self.grounds = grounds

    def open(self, statements: Sequence[Statement]) -> Opened:
        """All devices, in the order of the netlist, depth first; with a stack of its own."""
        out = Opened([], [], [])
        top = Scope("", {}, {}, ())
        self._check_size(statements)
        stack: list[Iterator[tuple[Statement, Scope]]] = [iter([(s, top) for s in statements])]
        while stack:
            found = next(stack[-1], None)
            if found is None:
                stack.pop()
                continue
            statement, scope = found
            if isinstance(statement, CoveredStatement):
                out.covered.append((scope.prefix, statement))
            elif isinstance(statement, SameHeatStatement):
                out.heat.append((scope.prefix, statement))
            elif isinstance(statement, DeviceStatement):
                if statement.kind.text in self.blocks:
                    stack.append(iter(self._inside(statement, scope)))
                else:
                    out.devices.append(self._device(statement, scope))
        return out

    def _check_size(self, statements: Sequence[Statement]) -> None:
        """Raises InputError when the blocks would open to more devices than a board has; before any is opened."""
        placed = {name: [s for s in b.body if isinstance(s, DeviceStatement)] for name, b in self.blocks.items()}
        within = {name: {s.kind.text for s in body} & placed.keys() for name, body in placed.items()}
        try:
            order = list(TopologicalSorter(within).static_order())
        except CycleError:
            # a block within itself has a message of its own when it is opened
            return
        sizes: dict[str, int] = {}
        for name in order:
            sizes[name] = sum(sizes.get(s.kind.text, 1) for s in placed[name])
        total = 0
        for statement in statements:
            if isinstance(statement, DeviceStatement):
                total += sizes.get(statement.kind.text, 1)
                if total > _MOST:
                    raise InputError(
                        f"{statement.designator.text}: the netlist opens to more than {_MOST:,} devices",
                        place=statement.place,
                        mend="place fewer blocks within blocks",
                    )

    def _inside(self, statement: DeviceStatement, scope: Scope) -> list[tuple[Statement, Scope]]:
        block = self.blocks[statement.kind.text]
        name = f"{scope.prefix}{statement.designator.text}"
        if block.name.text in scope.above:
            raise InputError(f"block {block.name.text} contains itself", place=statement.place, mend="break the cycle")
        if statement.items.words:
            word = statement.items.words[0]
            raise InputError(
                f"{name}: {word.text!r}: a block takes keys and pins only", place=word.place, mend="write key=value"
            )
        given = {item.key.text: item for item in statement.items.keys}
        known = {item.key.text: item.value for item in block.defaults}
        for key, item in given.items():
            if key not in known:
                near = closest(key, list(known))
                mend = f"did you mean {near}?" if near else f"it has {', '.join(known) or 'none'}"
                raise InputError(f"{name}: block {block.name.text} has no key {key}", place=item.key.place, mend=mend)
        parameters = {**known, **{k: self._filled(item.value, scope) for k, item in given.items()}}
        nets = self._pins(name, statement, tuple(w.text for w in block.pins), scope)
        outer = {pin: net if net is not None else f"nc({name}:{pin})" for pin, net in nets.items()}
        inner = Scope(f"{name}/", outer, parameters, (*scope.above, block.name.text))
        return [(s, inner) for s in block.body]

    def _pins(
        self, name: str, statement: DeviceStatement, pins: tuple[str, ...], scope: Scope
    ) -> dict[str, str | None]:
        given = {p.pin.text: p for p in statement.items.pins}
        listed = " ".join(pins)
        for pin, item in given.items():
            if pin not in pins:
                near = closest(pin, list(pins))
                hint = f"did you mean {near}? " if near else ""
                raise InputError(
                    f"{name}: a {statement.kind.text} has no pin {pin}",
                    place=item.pin.place,
                    mend=f"{hint}it has {listed}",
                )
        lacking = [pin for pin in pins if pin not in given]
        if lacking:
            raise InputError(
                f"{name}: pin {' and '.join(lacking)} of the {statement.kind.text} is not connected",
                place=statement.place,
                mend=f"it has {listed}; write {lacking[0]}:nc to leave it open on purpose",
            )
        return {pin: None if given[pin].open else scope.net(given[pin].net.text, self.grounds) for pin in pins}

    def _device(self, statement: DeviceStatement, scope: Scope) -> RawDevice:
        kind = KINDS.get(statement.kind.text)
        name = f"{scope.prefix}{statement.designator.text}"
        if kind is None:
            near = closest(statement.kind.text, [*KINDS, *self.blocks])
            mend = f"did you mean {near}?" if near else "netaudit explain lists the kinds"
            raise InputError(
                f"{name}: there is no kind or block {statement.kind.text}", place=statement.kind.place, mend=mend
            )
        items = self._items(statement.items, scope)
        pins = kind.pins_for([p.pin.text for p in statement.items.pins])
        nets = self._pins(name, replace(statement, items=items), pins, scope)
        return RawDevice(name, kind, sort_items(name, kind, items), nets, statement.place)

    def _items(self, items: Items, scope: Scope) -> Items:
        if not scope.prefix:
            return items
        words = tuple(self._filled(w, scope) for w in items.words)
        keys = tuple(KeyItem(k.key, self._filled(k.value, scope)) for k in items.keys)
        return Items(words, keys, items.pins)

    def _filled(self, word: Word, scope: Scope) -> Word:
        """A word with every ``$key`` replaced by the block's parameter."""
        if "$" not in word.text:
            return word

        def value(match: re.Match[str]) -> str:
            found = scope.parameters.get(match[1])
            if found is None:
                raise InputError(
                    f"there is no parameter ${match[1]} here",
                    place=word.place,
                    mend=f"the block has {', '.join(scope.parameters) or 'none'}",
                )
            return found.text

        return replace(word, text=_PARAMETER.sub(value, word.text))
