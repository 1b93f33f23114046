"""Who is asking, in which commons, in which offices; and what each may see and do there.

Both doors for people, the API and the pages, ask here and nowhere else. Offices are read from the
commons at every request, so that a change holds from the next one on.
"""

from dataclasses import dataclass
from datetime import datetime
from typing import ClassVar

from ledger.commons import queries as commons
from ledger.commons.queries import CommonsRecord
from ledger.foundation import logs
from ledger.foundation.errors import LedgerError
from ledger.identity import operations as identity
from ledger.identity import queries as accounts

SECRETARY, MONITOR, BOARD, AUDITOR = "secretary", "monitor", "board", "auditor"
OFFICES = (SECRETARY, MONITOR, BOARD, AUDITOR)


# Kinds of entries that monitors read of others: what was taken, worked and inspected.
_WATCHED = frozenset({"withdrawal", "work_given", "inspection"})


# Kinds about nobody in particular whose postings show what each member has, took or owes.
_SPLIT = frozenset({"allowable_adopted", "season_closed", "duties_assessed"})


class NotHere(LedgerError):
    """There is nothing here for whoever asks; whether there is for others is not told."""

    code: ClassVar[str] = "web.not_here"
    message: ClassVar[str] = "There is no {what} here that you may see."


class NotYours(LedgerError):
    """Whoever asks may see this and may not do what they ask for."""

    code: ClassVar[str] = "web.not_yours"
    message: ClassVar[str] = "This needs {needed}; you are here as {found}."


class OutOfScope(LedgerError):
    """The device's token does not reach so far."""

    code: ClassVar[str] = "web.out_of_scope"
    message: ClassVar[str] = "This needs a token with the scope {needed}; this one has {found}."


@dataclass(frozen=True, slots=True, kw_only=True)
class Visitor:
    """A member at a door: the commons, the member's number, the offices held today.

    ``scopes`` limits what a device may do; a person at a page has all of them. ``device`` is the
    name under which a device's entries keep their keys; a person at a page has none.
    """

    account_id: int
    commons: CommonsRecord
    member: int
    roles: frozenset[str]
    scopes: frozenset[str] = frozenset(identity.SCOPES)
    device: str = ""

    @property
    def title(self) -> str:
        """Return in what capacity the visitor is here, in words."""
        return ", ".join(role for role in OFFICES if role in self.roles) or "member"

    def holds(self, *offices: str) -> bool:
        """Return whether the visitor holds one of some offices."""
        return not self.roles.isdisjoint(offices)

    def reaches(self, scope: str) -> None:
        """Pass if the visitor's device may do this kind of thing.

        :raises OutOfScope: if it may not.
        """
        if scope not in self.scopes:
            raise OutOfScope(needed=scope, found=", ".join(sorted(self.scopes)) or "none")

    def sees_member(self, member: int) -> bool:
        """Return whether the visitor may see a member's standing, findings and cases."""
        return member == self.member or self.holds(SECRETARY, BOARD, AUDITOR)

    def sees_entry_about(self, member: int | None) -> bool:
        """Return whether the visitor may see an entry about a member, or about nobody."""
        if member is None or member == self.member:
            return True
        return self.holds(SECRETARY, MONITOR, BOARD, AUDITOR)

    def sees_entry(self, *, kind: str, subject: int | None) -> bool:
        """Return whether the visitor may see an entry; a monitor sees of others what was taken.

        What a case, a sanction or a due says of a member is for those alone who may see the case.
        """
        if subject is None:
            return kind not in _SPLIT or self.sees_everybody()
        if self.sees_member(subject):
            return True
        return self.holds(MONITOR) and kind in _WATCHED

    def sees_everybody(self) -> bool:
        """Return whether the visitor may see all members' rows, not group totals alone."""
        return self.holds(SECRETARY, BOARD, AUDITOR)

    def household(self) -> frozenset[int]:
        """Return the members of the visitor's household, the visitor among them."""
        commons_id = self.commons.commons_id
        own = commons.member(commons_id=commons_id, number=self.member)
        assert own is not None, "a seat is a member's"
        return commons.household_of(commons_id=commons_id, household=own.household)

    def records_takes_of(self, member: int) -> bool:
        """Return whether the visitor may record a withdrawal of a member."""
        return member == self.member or self.holds(SECRETARY, MONITOR)

    def needs(self, *offices: str) -> None:
        """Pass if the visitor holds one of some offices.

        :raises NotYours: if not.
        """
        if not self.holds(*offices):
            raise NotYours(needed="the office of " + " or ".join(offices), found=self.title)


def visitor(*, account_id: int, slug: str, now: datetime) -> Visitor:
    """Return who an account is in a commons today.

    :raises NotHere: if there is no such commons, or the account has no seat in it.
    """
    logs.note(account=account_id)
    try:
        kept = commons.commons_named(slug=slug)
    except commons.UnknownCommons as error:
        raise NotHere(what="commons") from error
    seat = accounts.seat(account_id=account_id, commons_id=kept.commons_id)
    if seat is None:
        raise NotHere(what="commons")
    logs.note(commons=kept.commons_id, member=seat.member)
    return Visitor(
        account_id=account_id,
        commons=kept,
        member=seat.member,
        roles=commons.roles_of(
            commons_id=kept.commons_id, member=seat.member, day=kept.day_of(now)
        ),
    )


def visitor_by_token(*, token: accounts.TokenRecord, slug: str, now: datetime) -> Visitor:
    """Return who a device speaks for, in the one commons that its token is for.

    :raises NotHere: if the commons is another.
    """
    logs.note(account=token.account_id, commons=token.commons_id, member=token.member)
    kept = commons.commons(commons_id=token.commons_id)
    if kept.slug != slug:
        raise NotHere(what="commons")
    return Visitor(
        account_id=token.account_id,
        commons=kept,
        member=token.member,
        roles=commons.roles_of(
            commons_id=kept.commons_id, member=token.member, day=kept.day_of(now)
        ),
        scopes=token.scopes,
        device=f"{token.member}:{token.device}",
    )


# What the secretary may write down for others: what a member says, and what the assembly decided.
_SPOKEN = frozenset({"answer", "lodge_appeal"})


def may_move_case(
    visitor: Visitor, *, move: str, role: str, member: int | None, concerned: frozenset[int]
) -> None:
    """Pass if the visitor may make or write down a move in a case.

    Whoever holds an office acts in it themself; so nobody decides in another's name.

    :param member: the member who acts, or None for the assembly and for the book.
    :param concerned: the members whom the case concerns.
    :raises NotYours: if not.
    """
    if role == "member":
        own = member == visitor.member and member in concerned
        written_down = move in _SPOKEN and visitor.holds(SECRETARY) and member in concerned
        allowed = own or written_down
    elif move in _SPOKEN:
        # What a member says is the member's, whoever writes it down.
        allowed = False
    elif role == "assembly":
        allowed = visitor.holds(SECRETARY)
    elif role == "book":
        # That the reasons were handed over is written down by whoever handed them over.
        allowed = move == "open_appeal" and visitor.holds(SECRETARY)
    else:
        allowed = role in OFFICES and visitor.holds(role) and member in (None, visitor.member)
    if not allowed:
        raise NotYours(needed=f"to act as {role} yourself", found=visitor.title)
