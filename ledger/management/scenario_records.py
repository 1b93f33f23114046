"""A scenario as read from its folder: what people, slips, checks, readings and acts there are.

Weights and money are exact decimals in the unit of the file; nothing here is judged. Instants are
aware, in the commons' zone: bring two of them to UTC before taking their difference, or Python
subtracts the clocks on the wall, which go forward in March.
"""

from dataclasses import dataclass
from datetime import date, datetime, time
from decimal import Decimal
from fractions import Fraction

from governance.periods import DateRange


@dataclass(frozen=True, slots=True, kw_only=True)
class Resource:
    """What is drawn on: the unit of the sheets and the base unit of the book."""

    code: str
    name: str
    unit: str
    base: str


@dataclass(frozen=True, slots=True, kw_only=True)
class Zone:
    """A part of a resource."""

    code: str
    name: str
    resource: str


@dataclass(frozen=True, slots=True, kw_only=True)
class Boat:
    """A draw point."""

    code: str
    name: str


@dataclass(frozen=True, slots=True, kw_only=True)
class Share:
    """A member's measure of right in a resource."""

    resource: str
    measure: Fraction


@dataclass(frozen=True, slots=True, kw_only=True)
class Member:
    """A member; one who may not take has no shares and no boat."""

    number: int
    name: str
    household: int
    membership_class: str
    shares: tuple[Share, ...]
    boat: str | None


@dataclass(frozen=True, slots=True, kw_only=True)
class Office:
    """A role and the member who holds it."""

    role: str
    member: int


@dataclass(frozen=True, slots=True, kw_only=True)
class Season:
    """A season window; the allowable is None where it is still to be advised."""

    code: str
    resource: str
    during: DateRange
    closes_on: date
    allowable: Decimal | None


@dataclass(frozen=True, slots=True, kw_only=True)
class Commons:
    """The association on the day its book is opened."""

    name: str
    zone: str
    money: str
    book_opened: date
    resources: tuple[Resource, ...]
    seasons: tuple[Season, ...]
    zones: tuple[Zone, ...]
    boats: tuple[Boat, ...]
    members: tuple[Member, ...]
    offices: tuple[Office, ...]


@dataclass(frozen=True, slots=True, kw_only=True)
class Weighed:
    """An amount of one resource; ``ground`` is the zone it came from."""

    resource: str
    ground: str
    amount: Decimal


@dataclass(frozen=True, slots=True, kw_only=True)
class Landing:
    """One slip, in the order handed in."""

    slip: int
    landed_at: datetime
    handed_in_at: datetime
    member: int
    boat: str
    takes: tuple[Weighed, ...]
    note: str


@dataclass(frozen=True, slots=True, kw_only=True)
class Work:
    """A stint of work in minutes, or money in its stead; the other is None."""

    done_on: date
    member: int
    minutes: int | None
    paid: Decimal | None
    task: str
    recorded_on: date


@dataclass(frozen=True, slots=True, kw_only=True)
class Seen:
    """What a monitor's scales read of one resource."""

    resource: str
    amount: Decimal


@dataclass(frozen=True, slots=True, kw_only=True)
class Inspection:
    """A monitor's check of a take, with the slip that was written about it."""

    seen_at: datetime
    monitor: int
    member: int
    ground: str
    seen: tuple[Seen, ...]
    slip: int
    remark: str


@dataclass(frozen=True, slots=True, kw_only=True)
class HistoryYear:
    """A year's catch in tonnes and survey index; no catch where the journal tells it."""

    resource: str
    year: int
    catch_t: Decimal | None
    index: Decimal
    observed_on: date


@dataclass(frozen=True, slots=True, kw_only=True)
class GroundSurvey:
    """The biomass found on a ground, with its coefficient of variation."""

    resource: str
    ground: str
    surveyed_on: date
    biomass_kg: Decimal
    cv: Decimal


@dataclass(frozen=True, slots=True, kw_only=True)
class WaterStatus:
    """An authority's notice; ``until`` is the first day it no longer holds, None if not said."""

    received_at: datetime
    authority: str
    resource: str
    grounds: tuple[str, ...]
    closed: bool
    first: date
    until: date | None
    notice: str


@dataclass(frozen=True, slots=True, kw_only=True)
class Actor:
    """Who acts, and in what role.

    No member where a body acts, or where it is the board member named as the case's officer.
    """

    role: str
    member: int | None


@dataclass(frozen=True, slots=True, kw_only=True, order=True)
class CaseRef:
    """A case by its clause, the number of its subject, and the first day of its window."""

    clause: str
    subject: int
    window_first: date


@dataclass(frozen=True, slots=True, kw_only=True)
class Correction:
    """A slip recorded wrongly: undone, and recorded anew as ``landing``."""

    at: datetime
    by: Actor
    words: str
    why: str
    landing: Landing


@dataclass(frozen=True, slots=True, kw_only=True)
class Answer:
    """The member's side of a case."""

    at: datetime
    by: Actor
    words: str
    case: CaseRef


@dataclass(frozen=True, slots=True, kw_only=True)
class SetAside:
    """A case not pursued, with a reason code."""

    at: datetime
    by: Actor
    words: str
    case: CaseRef
    reason: str


@dataclass(frozen=True, slots=True, kw_only=True)
class Appeal:
    """An appeal lodged."""

    at: datetime
    by: Actor
    words: str
    case: CaseRef


@dataclass(frozen=True, slots=True, kw_only=True)
class AppealDecision:
    """What the assembly says to an appeal: upheld is the decision, not the appeal."""

    at: datetime
    by: Actor
    words: str
    case: CaseRef
    upheld: bool


@dataclass(frozen=True, slots=True, kw_only=True)
class Payment:
    """Dues paid, in the money of the commons."""

    at: datetime
    by: Actor
    words: str
    case: CaseRef
    amount: Decimal


Act = Correction | Answer | SetAside | Appeal | AppealDecision | Payment


@dataclass(frozen=True, slots=True, kw_only=True)
class Habit:
    """An act done so many days after the one before it, at a time of day."""

    by: Actor
    after_days: int
    clock: time


@dataclass(frozen=True, slots=True, kw_only=True)
class Telling:
    """How a member is told.

    In ``fails_for`` the first attempt, by ``failing_means``, does not arrive; the next is made
    ``again_after_days`` later, by ``means``.
    """

    habit: Habit
    means: str
    failing_means: str
    again_after_days: int
    fails_for: tuple[CaseRef, ...]


@dataclass(frozen=True, slots=True, kw_only=True)
class Deciding:
    """Who decides on the first such weekday (Monday is 0) after the answer or the silence.

    A board member's own case is decided by ``own_by`` at ``own_at``.
    """

    by: Actor
    weekday: int
    clock: time
    reasons_after_days: int
    own_by: Actor
    own_at: datetime


@dataclass(frozen=True, slots=True, kw_only=True)
class Completing:
    """Who closes a final case, where its step is one of ``steps``."""

    habit: Habit
    steps: tuple[str, ...]


@dataclass(frozen=True, slots=True, kw_only=True)
class Paying:
    """When fines are paid after they are final, and whose never are."""

    after_days: int
    clock: time
    unpaid: tuple[CaseRef, ...]


@dataclass(frozen=True, slots=True, kw_only=True)
class Routine:
    """How every case goes that no act names otherwise; ``officers`` take turns."""

    take_up: Habit
    officers: tuple[int, ...]
    tell: Telling
    decide: Deciding
    complete: Completing
    pay: Paying


@dataclass(frozen=True, slots=True, kw_only=True)
class Scenario:
    """Everything in the folder but the bylaw book."""

    commons: Commons
    landings: tuple[Landing, ...]
    work: tuple[Work, ...]
    inspections: tuple[Inspection, ...]
    history: tuple[HistoryYear, ...]
    survey: tuple[GroundSurvey, ...]
    orders: tuple[WaterStatus, ...]
    acts: tuple[Act, ...]
    routine: Routine
