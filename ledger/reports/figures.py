"""The figures of one season, as one record: every rendering of the season report reads only this.

Amounts are whole numbers of the resource's base unit; the record says beside them which base that
is and in which unit people read it. Money is in the smallest coin of the season's currency. People
are numbers: who holds the key may put names to them, this record cannot.
"""

import dataclasses
import hashlib
import json
from dataclasses import dataclass
from datetime import date, datetime
from fractions import Fraction
from typing import ClassVar

from governance.advice.records import Advice
from ledger.foundation.errors import LedgerError
from ledger.reports.details import CaseDetail, FindingDetail, NextHolding

INSTEAD_OF_WORK = "instead of work"
"""The kind of what was paid in place of work, which is no fine."""


class FiguresDisagree(LedgerError):
    """Two figures of one record contradict each other."""

    code: ClassVar[str] = "reports.figures_disagree"
    message: ClassVar[str] = "{what} is {found}, but {other} is {expected}."


def _agree(*, what: str, found: object, other: str, expected: object) -> None:
    if found != expected:
        raise FiguresDisagree(what=what, found=found, other=other, expected=expected)


@dataclass(frozen=True, slots=True, kw_only=True)
class EditionFigures:
    """The edition of the bylaw book that the season was judged under, and its adoption.

    ``in_force_from`` is its first day; the votes are counts of voters.
    """

    number: int
    in_force_from: date
    adopted_by: str
    adopted_on: date
    votes_for: int
    votes_against: int
    votes_abstained: int


@dataclass(frozen=True, slots=True, kw_only=True)
class DayTake:
    """What the group took on one local day, net of reversals, in base units."""

    day: date
    amount: int


@dataclass(frozen=True, slots=True, kw_only=True)
class AllowableStep:
    """The allowable in force from a day on, in base units."""

    from_day: date
    amount: int


@dataclass(frozen=True, slots=True, kw_only=True)
class ZoneRow:
    """What was taken from one zone: slips (a count) and amount (base units)."""

    zone: str
    slips: int
    taken: int


@dataclass(frozen=True, slots=True, kw_only=True)
class SettlementFigures:
    """How a resource's season was settled, in base units, summed over the members.

    ``given_back`` went from the members' allotments to the pool in the course of the season.
    ``carried`` goes into the members' next allotments, ``owed`` comes off them, ``unclaimed``
    returned to the pool. ``after_close`` was entered as taken once all that was settled.
    """

    given_back: int
    carried: int
    unclaimed: int
    owed: int
    after_close: int


@dataclass(frozen=True, slots=True, kw_only=True)
class ResourceFigures:
    """The use of one resource over its season.

    ``base`` and ``unit`` are the UCUM codes of the amounts as kept and as read. ``opens`` and
    ``closes`` are the first and the last local day, both included. ``allowable`` is the one in
    force on the last day; ``allotted`` and ``reserve`` are its parts; ``carried_in`` came from the
    season before; ``left`` is what remained of all of it, and ``settlement`` says where that went.
    ``daily`` holds a row for each day with a
    take, in the order of days, and sums to ``taken``. ``members_took`` of ``members_entitled`` took
    anything.

    :raises FiguresDisagree: if the daily takes do not sum to ``taken``, their days are not in
        order, or what was left does not follow from the rest or does not go where it is settled.
    """

    code: str
    name: str
    base: str
    unit: str
    opens: date
    closes: date
    allowable: int
    reserve: int
    allotted: int
    carried_in: int
    taken: int
    left: int
    slips: int
    members_took: int
    members_entitled: int
    daily: tuple[DayTake, ...]
    allowable_steps: tuple[AllowableStep, ...]
    zones: tuple[ZoneRow, ...]
    settlement: SettlementFigures

    def __post_init__(self) -> None:
        _agree(
            what=f"The sum of the daily takes of {self.code}",
            found=sum(row.amount for row in self.daily),
            other="the amount taken",
            expected=self.taken,
        )
        days = [row.day for row in self.daily]
        _agree(
            what=f"The list of days of {self.code}",
            found=days,
            other="the same list in order",
            expected=sorted(set(days)),
        )
        _agree(
            what=f"What is left of {self.code}",
            found=self.left,
            other="the allowable and what was carried in, less what was taken",
            expected=self.allowable + self.carried_in - self.taken,
        )
        settled = self.settlement
        _agree(
            what=f"What is left of {self.code}",
            found=self.left,
            other="the sum of the parts that it was settled into",
            expected=self.reserve
            + settled.given_back
            + settled.carried
            + settled.unclaimed
            - settled.owed
            - settled.after_close,
        )

    @property
    def used(self) -> Fraction | None:
        """Return the share of the allowable that was taken, or None where nothing was allowable."""
        return Fraction(self.taken, self.allowable) if self.allowable else None


@dataclass(frozen=True, slots=True, kw_only=True)
class HoldingFigures:
    """One member's position in one resource when its season closed, in its base unit.

    ``allotment`` is the part of the allowable, ``carried_in`` what came from the season before
    (below zero where something was owed), ``given_back`` what cases took off in the season.
    ``left`` is negative where more was taken than the member had.

    :raises FiguresDisagree: if ``left`` does not follow from the others.
    """

    resource: str
    allotment: int
    carried_in: int
    given_back: int
    taken: int
    left: int

    def __post_init__(self) -> None:
        _agree(
            what=f"What a member has left of {self.resource}",
            found=self.left,
            other="the allotment and what was carried in, less what was given back and taken",
            expected=self.allotment + self.carried_in - self.given_back - self.taken,
        )


@dataclass(frozen=True, slots=True, kw_only=True)
class StandingRow:
    """Where one member stands at the end of the season: by number, never by name.

    Duties are in the duty's base unit, ``dues_owed`` in the smallest coin.
    """

    member: int
    household: int
    member_class: str
    holdings: tuple[HoldingFigures, ...]
    duty_owed: int
    duty_rendered: int
    duty_short: int
    dues_owed: int
    open_cases: int


@dataclass(frozen=True, slots=True, kw_only=True)
class FindingRow:
    """The findings of one clause: ``found`` is ``standing`` plus ``withdrawn``, all counts.

    :raises FiguresDisagree: if it is not.
    """

    clause: str
    title: str
    found: int
    standing: int
    withdrawn: int

    def __post_init__(self) -> None:
        _agree(
            what=f"The number of findings of clause {self.clause}",
            found=self.found,
            other="the number of standing and withdrawn ones",
            expected=self.standing + self.withdrawn,
        )


@dataclass(frozen=True, slots=True, kw_only=True)
class CaseStepRow:
    """The cases on one step of one ladder, all counts.

    ``step`` counts from 1; ``measure`` is the step in a word or two. ``opened`` is the sum of the
    other four: set aside before a decision, decided and not overturned, overturned on appeal, and
    not decided yet.

    :raises FiguresDisagree: if it is not.
    """

    ladder: str
    title: str
    step: int
    measure: str
    opened: int
    set_aside: int
    upheld: int
    overturned: int
    undecided: int

    def __post_init__(self) -> None:
        _agree(
            what=f"The number of cases on step {self.step} of {self.ladder}",
            found=self.opened,
            other="the number by outcome",
            expected=self.set_aside + self.upheld + self.overturned + self.undecided,
        )


@dataclass(frozen=True, slots=True, kw_only=True)
class CountRow:
    """How many of something there are, under a label in words."""

    label: str
    count: int


@dataclass(frozen=True, slots=True, kw_only=True)
class CaseFigures:
    """The cases of the season: by ladder and step, by present state, by reason of setting aside.

    The medians are in days, exact, and None where no case came so far.
    """

    steps: tuple[CaseStepRow, ...]
    states: tuple[CountRow, ...]
    set_aside: tuple[CountRow, ...]
    days_act_to_told: Fraction | None
    days_told_to_decided: Fraction | None


@dataclass(frozen=True, slots=True, kw_only=True)
class MoneyDueRow:
    """Dues in money of one kind, in the smallest coin: ``open`` is not paid and not waived."""

    kind: str
    count: int
    charged: int
    paid: int
    open: int


@dataclass(frozen=True, slots=True, kw_only=True)
class RestitutionRow:
    """What cases took off members' allotments, in the resource's base unit.

    It is what was taken beyond a limit, and is left to all: nothing goes back into the water.
    """

    resource: str
    count: int
    amount: int


@dataclass(frozen=True, slots=True, kw_only=True)
class DutyFigures:
    """Duties of work, summed over the members, in their base unit; ``members_short`` is a count.

    ``replaced`` was answered by money instead of work, as the book allows.
    """

    base: str
    unit: str
    owed: int
    rendered: int
    replaced: int
    short: int
    members_short: int

    @property
    def beyond(self) -> int:
        """Return how much those gave beyond what they owed who gave more."""
        return self.rendered + self.replaced + self.short - self.owed


@dataclass(frozen=True, slots=True, kw_only=True)
class ReportingFigures:
    """How long after the landing the slips were reported: counts of slips, median in hours.

    ``within_48`` counts those after 24 hours and within 48.

    :raises FiguresDisagree: if the three parts do not sum to ``slips``.
    """

    slips: int
    within_24: int
    within_48: int
    later: int
    median_hours: Fraction | None

    def __post_init__(self) -> None:
        _agree(
            what="The number of slips by delay",
            found=self.within_24 + self.within_48 + self.later,
            other="the number of slips",
            expected=self.slips,
        )


@dataclass(frozen=True, slots=True, kw_only=True)
class InspectionRow:
    """Slips of one class of members: all, checked by a monitor, and checked with a difference."""

    member_class: str
    slips: int
    checked: int
    differences: int


@dataclass(frozen=True, slots=True, kw_only=True)
class OrderRow:
    """An outside authority's order: ``until`` is the first day it no longer holds, or None."""

    authority: str
    resource: str
    zones: tuple[str, ...]
    from_day: date
    until: date | None
    reason: str


@dataclass(frozen=True, slots=True, kw_only=True)
class ObservationRow:
    """One reading of the resource: an exact value in a unit (``1`` for an index without one)."""

    resource: str
    kind: str
    zone: str
    year: int
    value: Fraction
    unit: str


@dataclass(frozen=True, slots=True, kw_only=True)
class NextSeasonRow:
    """The next season of one resource as adopted, in its base unit.

    ``allowable`` is ``reserve`` and ``allotted``; ``holdings`` say what each member may take.

    :raises FiguresDisagree: if the allotments do not sum to ``allotted``.
    """

    resource: str
    opens: date
    closes: date
    adopted_by: str
    adopted_on: date
    allowable: int
    reserve: int
    allotted: int
    holdings: tuple[NextHolding, ...]

    def __post_init__(self) -> None:
        _agree(
            what=f"The sum of the next allotments of {self.resource}",
            found=sum(held.allotment for held in self.holdings),
            other="what is allotted",
            expected=self.allotted,
        )
        _agree(
            what=f"What is allotted of {self.resource}",
            found=self.allotted,
            other="the allowable less the reserve",
            expected=self.allowable - self.reserve,
        )

    @property
    def carried_in(self) -> int:
        """Return what members carry in from the season before, summed."""
        return sum(held.carried_in for held in self.holdings)

    @property
    def owed(self) -> int:
        """Return what comes off for what was taken beyond the measure, summed."""
        return sum(held.owed for held in self.holdings)

    @property
    def given_back(self) -> int:
        """Return what comes off for what cases took off since the close, summed."""
        return sum(held.given_back for held in self.holdings)

    @property
    def may_take(self) -> int:
        """Return what the members may take in all."""
        return sum(held.may_take for held in self.holdings)

    @property
    def shares(self) -> tuple[int, ...]:
        """Return what each may take who may take anything, from the smallest."""
        return tuple(sorted(held.may_take for held in self.holdings if held.may_take > 0))


@dataclass(frozen=True, slots=True, kw_only=True)
class NameRow:
    """What a code of the book is called on a page."""

    code: str
    name: str


@dataclass(frozen=True, slots=True, kw_only=True)
class SeasonFigures:
    """Everything that the season report states.

    ``made_at`` is the aware moment of making, shown in the time zone ``zone``; ``proof`` is the
    proof line of the journal's head that the figures rest on; ``currency`` is an ISO 4217 code.
    ``first`` is the first day of the season; ``names`` are those of zones, seasons and clauses,
    for texts that name them by code. ``cautions`` are the sentences that the reader must see.

    :raises FiguresDisagree: if a row names a resource that the record does not hold.
    """

    commons: str
    is_demo: bool
    season: str
    first: date
    made_at: datetime
    zone: str
    proof: str
    currency: str
    edition: EditionFigures
    resources: tuple[ResourceFigures, ...]
    names: tuple[NameRow, ...]
    findings: tuple[FindingRow, ...]
    finding_details: tuple[FindingDetail, ...]
    cases: CaseFigures
    case_details: tuple[CaseDetail, ...]
    dues: tuple[MoneyDueRow, ...]
    restitution: tuple[RestitutionRow, ...]
    duties: DutyFigures | None
    reporting: ReportingFigures
    inspections: tuple[InspectionRow, ...]
    standings: tuple[StandingRow, ...]
    orders: tuple[OrderRow, ...]
    observations: tuple[ObservationRow, ...]
    advice: tuple[Advice, ...]
    next_season: tuple[NextSeasonRow, ...]
    cautions: tuple[str, ...]

    def __post_init__(self) -> None:
        assert self.made_at.tzinfo is not None, "a moment without a zone names no moment"
        known = {resource.code for resource in self.resources}
        named = {
            row.resource
            for rows in (self.restitution, self.orders, self.observations, self.next_season)
            for row in rows
        }
        named |= {row.resource for row in self.advice}
        named |= {held.resource for row in self.standings for held in row.holdings}
        _agree(
            what="The list of resources that rows name",
            found=sorted(named | known),
            other="the list of resources of the report",
            expected=sorted(known),
        )

    def name_of(self, code: str) -> str:
        """Return what a code is called, or the code where it has no name."""
        return next((row.name for row in self.names if row.code == code), code)

    def resource(self, code: str) -> ResourceFigures:
        """Return the use of the resource of a code, which the record is known to hold."""
        return next(row for row in self.resources if row.code == code)


def digest(figures: SeasonFigures) -> str:
    """Return the SHA-256 of the figures in hex; the moment of making is left out.

    Two reports from the same entries carry the same digest, whenever they were made.
    """
    record = dataclasses.asdict(figures)
    del record["made_at"]
    text = json.dumps(record, sort_keys=True, ensure_ascii=False, default=str)
    return hashlib.sha256(text.encode()).hexdigest()
