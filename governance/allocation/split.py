"""The allowable of a season, split into the pool's reserve and the members' allotments."""

from collections.abc import Mapping
from dataclasses import dataclass
from datetime import date

from governance import facts, quantities
from governance.allocation import apportionment, bases
from governance.bylaws import clauses


@dataclass(frozen=True, slots=True, kw_only=True)
class Split:
    """What stays in the pool and what each member is allotted, in base units.

    ``reserve`` and ``parts`` sum to the allowable; ``parts`` stands in order of member number.
    ``working`` is the arithmetic in sentences, in base units.
    """

    reserve: int
    parts: Mapping[int, int]
    working: tuple[str, ...]


def split_allowable(
    *, clause: clauses.Allocation, roster: facts.Roster, day: date, allowable: int
) -> Split:
    """Split an allowable as a clause says, by the shares and classes of a day.

    The reserve is rounded down; all the rest is allotted.

    :raises apportionment.NegativeTotal: if the allowable lies below 0.
    :raises apportionment.NobodyToHold: if something is to be allotted and nobody has a weight.
    """
    if allowable < 0:
        # Checked before the reserve: of -1 all would be reserve, and nought left to refuse.
        raise apportionment.NegativeTotal(total=allowable)
    reserve = quantities.rounded(allowable * clause.reserve, quantities.Rounding.DOWN)
    held = bases.weights(clause=clause, roster=roster, day=day)
    parts = apportionment.apportion(total=allowable - reserve, weights=held, how=clause.rounding)
    reserve_percent = quantities.decimal_text(clause.reserve * 100)
    method = clause.rounding.replace("_", " ")
    working = (
        f"reserve: {reserve_percent} % of {allowable:,}, rounded down, is {reserve:,}",
        f"allotted: {allowable:,} - {reserve:,} = {allowable - reserve:,},"
        f" among {len(parts)} members by {clause.basis}, rounded by {method};"
        f" {apportionment.TIE_BREAK}",
    )
    return Split(reserve=reserve, parts=parts, working=working)
