"""A case as its events so far make it: who, what was delivered, what was decided."""

from collections.abc import Sequence
from dataclasses import dataclass, replace
from datetime import date, timedelta
from typing import ClassVar

from governance.errors import StintbookError
from governance.sanctions import moves

# Whoever acts in any other role is a person, and answers for it by number.
_NO_PERSON = (moves.Role.BOOK, moves.Role.ASSEMBLY)
# Two attempts on one trip say only that nobody was at home that week.
ATTEMPTS_APART = timedelta(days=7)


class ActorUnnamed(StintbookError):
    """A person acts without a member number, so that no conflict of interest could be seen."""

    code: ClassVar[str] = "procedure.actor_unnamed"
    message: ClassVar[str] = "Whoever acts as {role} needs a member number."


@dataclass(frozen=True, slots=True, kw_only=True)
class Actor:
    """Who moves a case, and in what role; the book and the assembly need no member number.

    :raises ActorUnnamed: if a person has no number.
    """

    role: moves.Role
    member: int | None

    def __post_init__(self) -> None:
        if self.member is None and self.role not in _NO_PERSON:
            raise ActorUnnamed(role=self.role)


@dataclass(frozen=True, slots=True, kw_only=True)
class Delivery:
    """One attempt to hand something over: when, how, and whether its arrival is proved."""

    on: date
    means: str
    proved: bool

    @property
    def kind_of_means(self) -> str:
        """Return the means without regard to capitals and spaces: ``Post`` again is ``post``."""
        return "".join(self.means.split()).casefold()


@dataclass(frozen=True, slots=True, kw_only=True)
class Event:
    """One move of a case, on a day of the commons' zone.

    What a move carries: a note ``subjects`` (the members of the household concerned), a check
    ``officer``, telling ``delivery`` and ``proposes_warning`` (the notice proposes no more than a
    warning, which is answered sooner), another attempt and the opening of the appeal ``delivery``,
    a decision ``step`` (its index on the ladder) and ``amount_minor`` (the fine in the smallest
    coin). Any event may say that ``monitors`` watched in this case, or that it
    ``concerns_board``: that somebody concerned sits on the board.
    """

    move: moves.Move
    actor: Actor
    on: date
    reason: str = ""
    subjects: frozenset[int] = frozenset()
    concerns_board: bool = False
    monitors: frozenset[int] = frozenset()
    officer: int | None = None
    delivery: Delivery | None = None
    proposes_warning: bool = False
    step: int | None = None
    amount_minor: int = 0


@dataclass(frozen=True, slots=True, kw_only=True)
class CaseSoFar:
    """Where a case stands and what its moves have established; ``last_on`` is the last one's day.

    A return to checking forgets the notice and the decision: both must be made again.
    """

    state: moves.State
    last_on: date
    subjects: frozenset[int]
    concerns_board: bool
    reporter: int | None
    monitors: frozenset[int]
    officer: int | None = None
    deliveries: tuple[Delivery, ...] = ()
    proposes_warning: bool = False
    decided_on: date | None = None
    step: int | None = None
    amount_minor: int = 0
    reasons_delivered_on: date | None = None
    final_on: date | None = None

    @property
    def told_on(self) -> date | None:
        """Return the day that the notice counts as delivered, or None if it does not yet.

        A proved delivery counts; without one, the last of at least two attempts by different
        means, each a week or more after the one before. Repeating a means that failed before is no
        further attempt.
        """
        proved = next((each.on for each in self.deliveries if each.proved), None)
        if proved is not None:
            return proved
        counted: dict[str, date] = {}
        last: date | None = None
        for each in self.deliveries:
            apart = last is None or each.on - last >= ATTEMPTS_APART
            if apart and each.kind_of_means not in counted:
                counted[each.kind_of_means] = last = each.on
        return last if len(counted) > 1 else None


def fold(events: Sequence[Event]) -> CaseSoFar:
    """Return the case that recorded events make, in the order of their recording.

    The events were checked when they were recorded (see ``procedure.advance``): here one that
    fits no state is an impossibility.
    """
    case: CaseSoFar | None = None
    for event in events:
        case = applied(case=case, event=event)
    assert case is not None, "a case begins with a note"
    return case


def applied(*, case: CaseSoFar | None, event: Event) -> CaseSoFar:
    """Return the case after an event that its state allows."""
    row = moves.row_of(event.move)
    assert (case.state if case else None) in row.sources, f"{event.move} does not follow"
    watching = event.monitors
    if event.actor.role is moves.Role.MONITOR and event.actor.member is not None:
        watching |= {event.actor.member}
    if case is None:
        return CaseSoFar(
            state=row.to,
            last_on=event.on,
            subjects=event.subjects,
            concerns_board=event.concerns_board,
            reporter=event.actor.member,
            monitors=watching,
        )
    moved = replace(
        case,
        state=row.to,
        last_on=event.on,
        concerns_board=case.concerns_board or event.concerns_board,
        monitors=case.monitors | watching,
    )
    return _established(moved, event)


def _established(case: CaseSoFar, event: Event) -> CaseSoFar:
    match event.move:
        case moves.Move.CHECK:
            return replace(case, officer=event.officer)
        case moves.Move.TELL | moves.Move.ATTEMPT:
            assert event.delivery is not None, "a notice was checked for its delivery"
            warned = case.proposes_warning or event.proposes_warning
            deliveries = (*case.deliveries, event.delivery)
            return replace(case, deliveries=deliveries, proposes_warning=warned)
        case moves.Move.DECIDE:
            return replace(
                case, decided_on=event.on, step=event.step, amount_minor=event.amount_minor
            )
        case moves.Move.OPEN_APPEAL:
            assert event.delivery is not None, "the reasons were checked for their delivery"
            return replace(case, reasons_delivered_on=event.delivery.on)
        case moves.Move.UPHOLD | moves.Move.LET_STAND:
            return replace(case, final_on=event.on)
        case moves.Move.RETURN_TO_CHECKING:
            return replace(
                case,
                deliveries=(),
                proposes_warning=False,
                decided_on=None,
                step=None,
                amount_minor=0,
                reasons_delivered_on=None,
                final_on=None,
            )
        case _:
            return case
