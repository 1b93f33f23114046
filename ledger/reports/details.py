"""The rows of the report that go one by one: findings, cases, and who may take what next season.

Amounts are whole base units, money the smallest coin, people numbers. None of these records holds
a word that a person wrote.
"""

from dataclasses import dataclass
from datetime import date


@dataclass(frozen=True, slots=True, kw_only=True)
class FindingDetail:
    """One finding: about whom, in which window (both days included), and how far beyond what.

    ``base`` and ``unit`` are the UCUM codes of the amounts as kept and as read. ``entries`` are
    the numbers of all the entries that it rests on. Not ``standing`` means withdrawn.
    """

    number: int
    clause: str
    subject_kind: str
    subject: int
    first: date
    last: date
    base: str
    unit: str
    total: int
    limit: int
    breach: int
    entries: tuple[int, ...]
    standing: bool


@dataclass(frozen=True, slots=True, kw_only=True)
class CaseDetail:
    """One case and its days; None is what did not come to pass.

    ``finding`` is the number of the finding that it rests on, ``ladder`` the title of the ladder,
    ``step`` counts from 1, ``measure`` is that step in a word, ``amount`` the fine.
    """

    number: int
    finding: int
    ladder: str
    state: str
    step: int | None
    measure: str
    amount: int
    told_on: date | None
    decided_on: date | None
    final_on: date | None


@dataclass(frozen=True, slots=True, kw_only=True)
class NextHolding:
    """What one member may take of one resource in the next season, as it was adopted.

    ``allotment`` is the part of the allowable; ``carried_in`` is added to it; ``owed`` is what was
    taken beyond the measure and ``given_back`` what cases took off since the close: both come off.
    """

    member: int
    household: int
    allotment: int
    carried_in: int
    owed: int
    given_back: int

    @property
    def may_take(self) -> int:
        """Return what the member may take in all."""
        return self.allotment + self.carried_in - self.owed - self.given_back
