"""A row to a Part: one model, ratings, spreads and package pins, each error at the key that is wrong."""

from __future__ import annotations

from collections.abc import Callable
from itertools import pairwise
from typing import Any, NoReturn, TypeVar

from netaudit.failure import InputError
from netaudit.parts.fit import fit_forward
from netaudit.parts.materials import material
from netaudit.parts.names import MODEL_DATA, PARAMETERS, RATINGS, WORD_CHOICES, WORDS, is_parameter, is_rating
from netaudit.parts.part import Part, Rating
from netaudit.parts.ratings import read_rating
from netaudit.parts.row import Row, known_key, meant
from netaudit.parts.values import listed, pair, physical, read_parameter, spread_of
from netaudit.place import Place
from netaudit.quantities.quantity import Quantity, exact
from netaudit.quantities.read import read_span
from netaudit.syntax.suggest import closest

T = TypeVar("T")
#: what a fit or a curve brings along
_FITTED = ("I_S", "n", "R_S")


def make_part(row: Row) -> Part:
    """The part of a row.  Raises InputError for what the row may not say."""
    for key in row.values:
        if not known_key(key):
            row.fail(f"unknown key {key}", key, mend=meant(key))
    kind = row.word("kind") if "kind" in row.values else None
    words = _words(row)
    parameters = _parameters(row, kind)
    points = _points(row)
    error = _model(row, words, parameters, bool(points))
    generic = _generic(row)
    source = row.word("source") if "source" in row.values else ""
    ratings = _ratings(row, kind, parameters, generic)
    _spreads(row, parameters)
    return Part(
        row.name, kind, row.place, row.word("block") if "block" in row.values else None, parameters, words, points,
        ratings, {str(k): row.word("pins", k) for k in row.group("pins")}, _pin_limits(row), source, error,
        f"{row.name} is a generic class ({source or 'no source stated'})" if generic else "", generic,
    )  # fmt: skip


def _at(row: Row, path: tuple[str, ...], read: Callable[..., T], *arguments: Any) -> T:
    """``read(*arguments, place)`` with the part and the key in front of what is wrong."""
    try:
        # the place costs a walk through the row: it is looked for only when something is wrong
        return read(*arguments, _NOWHERE)
    except InputError as error:
        raise InputError(
            f"part {row.name}: {'.'.join(path)}: {error.what}", place=row.locate(*path), mend=error.mend
        ) from None


_NOWHERE = Place("", 1)


def _words(row: Row) -> dict[str, str]:
    words = {}
    for key in WORDS:
        if key not in row.values:
            continue
        words[key] = row.word(key)
        choices = WORD_CHOICES.get(key)
        if choices and words[key] not in choices:
            row.fail(f"{key} = {words[key]!r}", key, mend=f"{key} is {' or '.join(choices)}")
        if key == "material":
            _at(row, ("material",), material, words[key])
    return words


def _parameters(row: Row, kind: str | None) -> dict[str, Quantity]:
    out: dict[str, Quantity] = {}
    for key, value in row.values.items():
        if key == "V_F":
            _no_shift(row, value)
        if is_parameter(key, kind):
            out.update(_at(row, (key,), read_parameter, key, value))
    return out


def _no_shift(row: Row, value: Any) -> NoReturn:
    """V_F alone says neither at which current nor whether it is the voltage or its spread."""
    example = value if isinstance(value, str) and "@" in value else f"{value} @ 20mA"
    row.fail(
        "a forward voltage needs the current at which it holds",
        "V_F",
        mend=f'write forward = ["{example}"], and a spread between specimens as spread = {{ V_F = "0.15V" }}',
    )


def _points(row: Row) -> tuple[tuple[float, float], ...]:
    if "points" not in row.values:
        return ()
    texts = _at(row, ("points",), listed, row.values["points"])
    points = sorted(_at(row, ("points",), pair, text, "V", "A") for text in texts)
    if len(points) < 2:
        row.fail("a curve of one point: it needs two points at least", "points", mend="or write it as forward")
    for (v0, i0), (v1, i1) in pairwise(points):
        if v0 == v1:
            row.fail(f"two currents, {i0:g} A and {i1:g} A, at {v0:g} V", "points", mend="keep one of them")
    return tuple(points)


def _model(row: Row, words: dict[str, str], parameters: dict[str, Quantity], curve: bool) -> float | None:
    """Fits ``forward`` points into the parameters; the fit's largest error.  A part has one model."""
    models = [m for m, given in (("forward", "forward" in row.values), ("points", curve)) if given]
    models += [key for key in _FITTED if key in parameters]
    if len(models) > 1 and models[0] in ("forward", "points"):
        row.fail(f"two models: {' and '.join(models)}", models[1], mend="keep one of them")
    if "forward" not in row.values:
        return None
    known = material(words["material"], row.place) if "material" in words else None
    texts = _at(row, ("forward",), listed, row.values["forward"])
    points = [_at(row, ("forward",), pair, text, "V", "A") for text in texts]
    junction = _at(row, ("forward",), fit_forward, points, known)
    parameters.update(I_S=exact(junction.I_S, "A"), n=exact(junction.n, "1"), R_S=exact(junction.R_S, "ohm"))
    return junction.error


def _generic(row: Row) -> bool:
    generic = row.values.get("generic", False)
    if not isinstance(generic, bool):
        row.fail("generic is true or false", "generic", mend="write generic = true")
    return generic


def _ratings(row: Row, kind: str | None, parameters: dict[str, Quantity], generic: bool) -> dict[str, Rating]:
    """Ratings of the row and of its table ``ratings``; model data among them goes to the parameters."""
    group = row.group("ratings")
    ratings: dict[str, Rating] = {}
    stated: list[tuple[tuple[str, ...], Any]] = [
        ((key,), value) for key, value in row.values.items() if is_rating(key, kind)
    ]
    stated += [(("ratings", key), value) for key, value in group.items() if key != "pins"]
    place = row.place
    origin = f"{row.name} ({place.file}:{place.line})"
    for path, value in stated:
        key = path[-1]
        if key not in RATINGS:
            near = f"{key} is a value of the model: write it above the ratings" if key in PARAMETERS else ""
            row.fail(f"unknown rating {key}", *path, mend=near or meant(key, ratings_only=True))
        if key in ratings or (len(path) > 1 and key in row.values):
            row.fail(f"{key} stands twice", *path, mend="keep one of them")
        if key in MODEL_DATA or not is_rating(key, kind):
            parameters.update(_at(row, path, read_parameter, key, value))
        else:
            ratings[key] = _at(row, path, lambda k, v, at: read_rating(k, v, at, origin, generic), key, value)
    power = ratings.get("P_tot")
    if power is not None and len(power.points) == 1 and power.points[0][0] == power.points[0][0]:
        # "5W @ 70degC" states the temperature that P_tot refers to
        ratings.setdefault("T_ref", Rating("T_ref", ((float("nan"), power.points[0][0]),), origin, generic))
    return ratings


def _spreads(row: Row, parameters: dict[str, Quantity]) -> None:
    for key, value in row.group("spread").items():
        path = ("spread", key)
        if key not in PARAMETERS:
            near = closest(key, list(PARAMETERS))
            row.fail(
                f"spread of an unknown value {key}",
                *path,
                mend=f"did you mean {near}?" if near else "name a value of the part, as V_F, V_Z or h_FE",
            )
        if key != "V_F" and key not in parameters:
            row.fail(
                f"spread of {key}, which the part does not have",
                *path,
                mend=f"state {key} itself too, or remove its spread",
            )
        quantity = _at(row, path, spread_of, key, value, parameters)
        wrong = physical(PARAMETERS[key], quantity)
        if wrong:
            row.fail(f"{key} {wrong}", *path, mend="narrow the spread")
        parameters[key] = quantity


def _pin_limits(row: Row) -> dict[str, tuple[float, float]]:
    """Absolute limits of pins, ``"-0.3V..3.6V"`` each."""
    limits = {}
    for pin in row.group("ratings", "pins") if "ratings" in row.values else ():
        text = row.word("ratings", "pins", pin)
        limits[str(pin)] = _at(row, ("ratings", "pins", pin), read_span, text, "V")
    return limits
