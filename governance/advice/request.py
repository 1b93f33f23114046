"""What an advice is made from."""

from collections.abc import Mapping
from dataclasses import dataclass
from datetime import date

from governance import facts
from governance.bylaws import clauses


@dataclass(frozen=True, slots=True, kw_only=True)
class Request:
    """The quota clause and the facts that the advice for one season rests on.

    ``season`` is the code of the season that is advised for, and ``year`` the year of its first
    day. ``catches`` are the journal's own takes by year, in base units; they stand before observed
    catches of the same year. ``present`` is the allowable in force, in base units, nought where
    none is. ``zones`` are the resource's zones that no order closes on the season's first day.
    ``seed`` is recorded beside the result; whoever asks makes the generator from it.
    """

    clause: clauses.PoolTotal
    units: clauses.ResourceUnits
    season: str
    year: int
    observations: tuple[facts.Observation, ...]
    catches: Mapping[int, int]
    present: int
    zones: frozenset[str]
    seed: int
    made_on: date
