"""Names in messages: the nearest known one, a found one in quotes, the accepted ones in a row."""

import difflib
from collections.abc import Iterable

_LONGEST_SHOWN = 60
_MOST_LISTED = 20


def nearest(name: str, known: Iterable[str]) -> str | None:
    """Return the known name that a misspelt one is closest to, if any is close.

    One that differs by capitals alone comes first: ``Kg`` is meant for ``kg``, never for ``g``.
    """
    if len(name) > _LONGEST_SHOWN:
        return None
    short = sorted(each for each in known if len(each) <= _LONGEST_SHOWN)
    same = [each for each in short if each.casefold() == name.casefold()]
    if same:
        return same[0]
    matches = difflib.get_close_matches(name, short, n=1, cutoff=0.6)
    return matches[0] if matches else None


def quoted(text: str) -> str:
    """Write a found text in quotes, cut to a length that a message can carry."""
    return repr(text if len(text) <= _LONGEST_SHOWN else text[:_LONGEST_SHOWN] + "…")


def choice(names: Iterable[str], *, none: str = "nothing") -> str:
    """Write accepted names as alternatives, or say in words that there are none."""
    listed = [quoted(str(name)) for name in names]
    more = len(listed) - _MOST_LISTED
    tail = [f"and {more:,} more"] if more > 0 else []
    return ", ".join(listed[:_MOST_LISTED] + tail) or none
