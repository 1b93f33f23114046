"""Clause kinds as data: what a bylaw book can say.

Every clause carries the same head. A clause without an ``or_else`` is reported on and never
sanctioned. The five parts of the institutional grammar (Crawford & Ostrom 1995: attributes,
deontic, aim, conditions, or else) stand in every clause that binds somebody: ``who``, the kind's
own *must* or *must not*, what it is about, when and where, and ``or_else``.
"""

import enum
from dataclasses import dataclass
from datetime import date
from fractions import Fraction

from governance.periods import DateRange, Per
from governance.quantities import Amount, Money, Price


@dataclass(frozen=True, slots=True, kw_only=True)
class Head:
    """What every clause begins with; ``or_else`` names a ladder, by its id."""

    id: str
    title: str
    text: str
    in_force: DateRange
    who: str | None
    or_else: str | None


class CountedBy(enum.StrEnum):
    """Whose takes are added up."""

    MEMBER = "member"
    HOUSEHOLD = "household"


class Basis(enum.StrEnum):
    """What a member's part of the allowable rests on."""

    SHARES = "shares"
    EQUAL = "equal"


class Apportionment(enum.StrEnum):
    """How parts become whole base units that sum to the total."""

    LARGEST_REMAINDER = "largest_remainder"
    WEBSTER = "webster"
    JEFFERSON = "jefferson"


@dataclass(frozen=True, slots=True, kw_only=True)
class Membership:
    """Who belongs: the classes of member that the other clauses speak of."""

    head: Head
    classes: tuple[str, ...]


@dataclass(frozen=True, slots=True, kw_only=True)
class Allocation:
    """How an allowable is split: ``reserve`` stays in the pool; ties go to the lower number."""

    head: Head
    resource: str
    basis: Basis
    rounding: Apportionment
    reserve: Fraction


@dataclass(frozen=True, slots=True, kw_only=True)
class QuantityLimit:
    """No holder takes more than this in each span; ``more_than`` None is the holder's allotment."""

    head: Head
    resource: str
    more_than: Amount | None
    per: Per
    counted_by: CountedBy
    tolerance: Fraction


@dataclass(frozen=True, slots=True, kw_only=True)
class YearlyWindow:
    """Days of every year, both ends included, as (month, day)."""

    first: tuple[int, int]
    last: tuple[int, int]


@dataclass(frozen=True, slots=True, kw_only=True)
class ClosedWindow:
    """Nobody takes a resource in these zones on these days; no zones named means everywhere."""

    head: Head
    resource: str
    zones: tuple[str, ...]
    closed: YearlyWindow


@dataclass(frozen=True, slots=True, kw_only=True)
class OutsideOrder:
    """Nobody takes from a zone while an outside authority's order closes it."""

    head: Head
    resource: str


@dataclass(frozen=True, slots=True, kw_only=True)
class ReportingDuty:
    """A slip is handed in within so many hours of the take."""

    head: Head
    within_hours: int


@dataclass(frozen=True, slots=True, kw_only=True)
class WorkDuty:
    """Work owed each season, in working days of ``day_minutes``; ``instead`` is money for a day.

    Without ``instead`` the work cannot be paid off.
    """

    head: Head
    days: Fraction
    day_minutes: int
    instead: Price | None


@dataclass(frozen=True, slots=True, kw_only=True)
class CarryOver:
    """What is left of an allotment goes on to the next season, at most this part of it."""

    head: Head
    resource: str
    at_most: Fraction


@dataclass(frozen=True, slots=True, kw_only=True)
class Payback:
    """What was taken beyond an allotment comes off the next one, times ``factor``."""

    head: Head
    resource: str
    factor: Fraction


@dataclass(frozen=True, slots=True, kw_only=True)
class Warning:
    """A written warning."""


@dataclass(frozen=True, slots=True, kw_only=True)
class Fine:
    """A sum of money: flat, or for each unit of the breach, with a cap."""

    flat: Money | None
    per_excess: Price | None
    at_most: Money | None


@dataclass(frozen=True, slots=True, kw_only=True)
class Suspension:
    """Days without the right to take; duties go on."""

    days: int


@dataclass(frozen=True, slots=True, kw_only=True)
class Referral:
    """The case goes to another body."""

    body: str


Step = Warning | Fine | Suspension | Referral


@dataclass(frozen=True, slots=True, kw_only=True)
class SanctionLadder:
    """Graduated steps: earlier acts within the window before the act move a case up."""

    head: Head
    window_days: int
    restore: bool
    steps: tuple[Step, ...]


@dataclass(frozen=True, slots=True, kw_only=True)
class Procedure:
    """The days that a fair procedure gives: to answer, to answer a warning, to appeal."""

    head: Head
    answer_days: int
    answer_to_warning_days: int
    appeal_days: int
    appeal_to: str


@dataclass(frozen=True, slots=True, kw_only=True)
class Reference:
    """A multiple of a reference point of the stock: ``0.2 K``, ``0.8 Fmsy``, ``1 Bmsy``."""

    multiple: Fraction
    of: str


class Growth(enum.StrEnum):
    """The growth model that a quota clause names."""

    SCHAEFER = "schaefer"
    PELLA_TOMLINSON = "pella_tomlinson"


class Sequence(enum.StrEnum):
    """Whether a season's take comes before or after its growth."""

    TAKE_THEN_GROW = "take_then_grow"
    GROW_THEN_TAKE = "grow_then_take"


@dataclass(frozen=True, slots=True, kw_only=True)
class HockeyStick:
    """Nothing at or below the limit, a ramp to the trigger, a constant fraction above it."""

    limit: Reference
    trigger: Reference
    fraction: Reference


class FortyTenReading(enum.StrEnum):
    """The two published readings of the same rule's middle part."""

    STRAIGHT_LINE_IN_CATCH = "straight_line_in_catch"
    RAMP_IN_FRACTION = "ramp_in_fraction"


@dataclass(frozen=True, slots=True, kw_only=True)
class FortyTen:
    """Nothing at or below the lower level, the full fraction from the upper level."""

    lower: Reference
    upper: Reference
    fraction: Reference
    reading: FortyTenReading


@dataclass(frozen=True, slots=True, kw_only=True)
class ConstantEscapement:
    """Whatever stands above the level that must be left."""

    leave: Reference


Rule = HockeyStick | FortyTen | ConstantEscapement


@dataclass(frozen=True, slots=True, kw_only=True)
class ByGrowthModel:
    """The allowable from a fitted growth model and a harvest control rule.

    ``shape`` is the exponent of a Pella–Tomlinson model; a Schaefer model has none.
    """

    growth: Growth
    shape: Fraction | None
    sequence: Sequence
    rule: Rule


@dataclass(frozen=True, slots=True, kw_only=True)
class BySurvey:
    """The allowable as a rate of what the survey found on the zones that may open."""

    rate: Fraction


@dataclass(frozen=True, slots=True, kw_only=True)
class Risk:
    """What the board accepts: at most this chance of lying below a level in any season."""

    below: Reference
    at_most: Fraction


@dataclass(frozen=True, slots=True, kw_only=True)
class PoolTotal:
    """How the next season's allowable is advised, bounded, and confirmed."""

    head: Head
    resource: str
    method: ByGrowthModel | BySurvey
    up_at_most: Fraction | None
    down_at_most: Fraction | None
    unless_below: Reference | None
    risk: Risk | None
    review_days: int
    confirm_by: str
    approvals: int


Clause = (
    Membership
    | Allocation
    | QuantityLimit
    | ClosedWindow
    | OutsideOrder
    | ReportingDuty
    | WorkDuty
    | CarryOver
    | Payback
    | SanctionLadder
    | Procedure
    | PoolTotal
)


@dataclass(frozen=True, slots=True, kw_only=True)
class ResourceUnits:
    """How a resource is measured: the unit people read, and the base unit that is counted."""

    resource: str
    unit: str
    base: str


@dataclass(frozen=True, slots=True, kw_only=True)
class Adoption:
    """Who adopted an edition, when, and by which votes."""

    by: str
    on: date
    votes_for: int
    votes_against: int
    votes_abstained: int


@dataclass(frozen=True, slots=True, kw_only=True)
class Book:
    """One edition of a bylaw book; ``digest`` is the SHA-256 of its text, in hex."""

    name: str
    edition: int
    in_force: DateRange
    adopted: Adoption
    zone: str
    money: str
    resources: tuple[ResourceUnits, ...]
    clauses: tuple[Clause, ...]
    digest: str

    def units_of(self, resource: str) -> ResourceUnits:
        """Return how a resource is measured."""
        return next(units for units in self.resources if units.resource == resource)

    def clause(self, clause_id: str) -> Clause:
        """Return the clause of an id that the book holds."""
        return next(clause for clause in self.clauses if clause.head.id == clause_id)
