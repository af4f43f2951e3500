"""The closest known word, for messages that say what was probably meant."""

from __future__ import annotations

from collections.abc import Iterable


def closest(word: str, candidates: Iterable[str]) -> str | None:
    """The candidate most like the word, None when none is near."""
    from difflib import get_close_matches

    options = list(dict.fromkeys(candidates))
    folded = {c.casefold(): c for c in reversed(options)}
    if word.casefold() in folded:
        return folded[word.casefold()]
    if len(options) > 5000 or len(word) > 100:
        return None
    found = get_close_matches(word.casefold(), list(folded), n=1, cutoff=0.6)
    return folded[found[0]] if found else None
