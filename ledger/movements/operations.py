"""The writers of withdrawals, contributions and dues: each act is one entry."""

from collections.abc import Iterable, Sequence
from dataclasses import replace
from datetime import date
from typing import ClassVar

from governance import quantities
from governance.bylaws import clauses
from governance.periods import DateRange
from ledger.commons import operations as commons
from ledger.commons import queries as commons_queries
from ledger.foundation import transactions
from ledger.foundation.errors import LedgerError
from ledger.foundation.hands import Hand
from ledger.journal import operations as journal
from ledger.journal import queries as journal_queries
from ledger.journal.leaves import Draft, Posting, Receipt
from ledger.movements import queries, writing
from ledger.movements.writing import Line as Line
from ledger.movements.writing import Slip as Slip
from ledger.movements.writing import base_amount as base_amount
from ledger.seasons import queries as seasons

_WORK = {"resource": "work", "unit": "min"}


class NotAWithdrawal(LedgerError):
    """An entry that is to be corrected is of another kind."""

    code: ClassVar[str] = "movements.not_a_withdrawal"
    message: ClassVar[str] = "Found entry {number} to be a {kind}; accepted is a withdrawal."


class UndoneAfterClose(LedgerError):
    """A slip of a closed season cannot be undone without the right one beside it."""

    code: ClassVar[str] = "movements.undone_after_close"
    message: ClassVar[str] = (
        "Entry {number} counts in a season that is closed; accepted is to correct it by the right"
        " slip, which keeps the accounts of that season as they were reported."
    )


class NothingGiven(LedgerError):
    """A contribution, a payment or what is given back is not above zero."""

    code: ClassVar[str] = "movements.nothing_given"
    message: ClassVar[str] = "Found the amount {found}; accepted is a whole number above zero."


class DutiesAlreadyAssessed(LedgerError):
    """The duties of a season were charged before."""

    code: ClassVar[str] = "movements.duties_already_assessed"
    message: ClassVar[str] = (
        "Found the duties of the season from {first} charged by entry {entry}; accepted is once."
    )


class UnknownDue(LedgerError):
    """A due is of a kind that the book does not keep."""

    code: ClassVar[str] = "movements.unknown_due"
    message: ClassVar[str] = "Found a due of the kind {found!r}; accepted are {accepted}."


@transactions.required
def record_withdrawals(
    *, commons_id: int, slips: Sequence[Slip], hand: Hand
) -> tuple[Receipt, ...]:
    """Record slips in order, one entry each; what breaks a bylaw is recorded all the same.

    The same key of a device twice adds nothing and returns the first receipt, and so does the same
    slip number twice at the desk. All are recorded or none: what
    :func:`ledger.movements.writing.withdrawal` refuses in one slip is raised for all.

    :raises ledger.journal.operations.KeyReused: if a slip number stands for another content.
    """
    journal.hold(commons_id=commons_id)
    kept = writing.kept(commons_id=commons_id)
    drafts = [writing.withdrawal(kept=kept, slip=slip, key=slip.key or slip.slip) for slip in slips]
    try:
        return _append(commons_id, drafts, hand)
    except journal.KeyReused:
        # A season that opened or closed since has other accounts; the slip is the same for that.
        return _append(commons_id, _as_posted(commons_id, drafts), hand)


@transactions.required
def correct_withdrawal(
    *, commons_id: int, number: int, slip: Slip, reason: str, hand: Hand
) -> tuple[Receipt, Receipt]:
    """Reverse a recorded slip and record it anew; both entries stay, with the reason.

    The accounts of a closed season stay as they were reported: what differs is told apart. The
    right slip is refused for what :func:`ledger.movements.writing.withdrawal` refuses.

    :raises NotAWithdrawal: if the entry is of another kind.
    :raises ledger.journal.queries.EntryNotFound: if there is no such entry.
    :raises ledger.journal.operations.AlreadyReversed: if it was corrected before.
    """
    journal.hold(commons_id=commons_id)
    wrong = journal_queries.entry(commons_id=commons_id, number=number)
    if wrong.kind != queries.WITHDRAWAL:
        raise NotAWithdrawal(number=number, kind=wrong.kind)
    kept = writing.kept(commons_id=commons_id)
    apart = writing.told_apart(kept=kept, undone=wrong)
    right = writing.withdrawal(kept=kept, slip=slip, key=None, also=apart)
    now = hand.clock()
    undone = journal.reverse(
        commons_id=commons_id,
        number=number,
        reason=reason,
        by=hand.by,
        occurred_at=now,
        day=kept.commons.day_of(now),
        clock=hand.clock,
        chance=hand.chance,
    )
    (redone,) = _append(commons_id, [right], hand)
    return undone, redone


@transactions.required
def undo_withdrawal(*, commons_id: int, number: int, reason: str, hand: Hand) -> Receipt:
    """Reverse a recorded slip that should not be there, such as one that was entered twice.

    :raises NotAWithdrawal: if the entry is of another kind.
    :raises UndoneAfterClose: if the slip counts in a season that was closed.
    :raises ledger.journal.queries.EntryNotFound: if there is no such entry.
    :raises ledger.journal.operations.AlreadyReversed: if it was corrected before.
    """
    journal.hold(commons_id=commons_id)
    wrong = journal_queries.entry(commons_id=commons_id, number=number)
    if wrong.kind != queries.WITHDRAWAL:
        raise NotAWithdrawal(number=number, kind=wrong.kind)
    kept = writing.kept(commons_id=commons_id)
    if any(writing.told_apart(kept=kept, undone=wrong)):
        raise UndoneAfterClose(number=number)
    now = hand.clock()
    return journal.reverse(
        commons_id=commons_id,
        number=number,
        reason=reason,
        by=hand.by,
        occurred_at=now,
        day=kept.commons.day_of(now),
        clock=hand.clock,
        chance=hand.chance,
    )


@transactions.required
def assess_duties(
    *,
    commons_id: int,
    duties: Iterable[tuple[clauses.WorkDuty, int]],
    during: DateRange,
    hand: Hand,
) -> Receipt | None:
    """Charge the members with the minutes that each duty asks of them in a season.

    Where nobody owes anything there is no entry.

    :param duties: each duty with the number of a member who owes it.
    :raises DutiesAlreadyAssessed: if it was done for the season that begins on the same day.
    """
    journal.hold(commons_id=commons_id)
    first = during.first.isoformat()
    for row in journal_queries.rows(commons_id=commons_id, kinds=(queries.ASSESSMENT,)):
        if row.facts["from"] == first:
            raise DutiesAlreadyAssessed(first=first, entry=row.number)
    postings: list[Posting] = []
    for clause, member in duties:
        owed = quantities.rounded(clause.days * clause.day_minutes, quantities.Rounding.HALF_UP)
        account = queries.duty_account(clause=clause.head.id, first=during.first, member=member)
        postings += writing.moved(f"duties:{clause.head.id}:{first}", account, amount=owed, **_WORK)
    if not postings:
        return None
    return commons.enter(
        commons_id=commons_id,
        kind=queries.ASSESSMENT,
        facts={"from": first, "until": during.until.isoformat()},
        postings=tuple(postings),
        hand=hand,
    )


@transactions.required
def record_work(
    *, commons_id: int, member: int, clause: str, day: date, minutes: int, task: str, hand: Hand
) -> Receipt:
    """Record work that a member gave towards a duty.

    :raises NothingGiven: if the minutes are not above zero.
    :raises ledger.commons.operations.UnknownMember: if nobody has the number.
    :raises ledger.movements.writing.NoSuchSeason: if no season has been opened.
    :raises ledger.movements.writing.NoSuchDuty: if its season knows no duty of this name.
    """
    _check_above_zero(minutes)
    commons.check_member(commons_id=commons_id, member=member)
    window = writing.duty_season(commons_id=commons_id, day=day)
    writing.check_duty(commons_id=commons_id, clause=clause, day=window.first)
    owed = queries.duty_account(clause=clause, first=window.first, member=member)
    worked = queries.worked_account(clause=clause, first=window.first, member=member)
    draft = Draft(
        kind=queries.WORK,
        occurred_at=hand.clock(),
        day=day,
        subject=member,
        facts={"clause": clause, "minutes": minutes},
        postings=writing.moved(owed, worked, amount=minutes, **_WORK),
        texts={"task": task},
    )
    (receipt,) = _append(commons_id, [draft], hand)
    return receipt


@transactions.required
def record_money_instead(
    *, commons_id: int, member: int, clause: str, day: date, amount: int, hand: Hand
) -> Receipt:
    """Record money, in the smallest coin, that a member gave instead of work.

    The clause in force on the day says how much work it stands for; a part of a minute is lost.

    :raises NothingGiven: if the amount is not above zero.
    :raises ledger.commons.operations.UnknownMember: if nobody has the number.
    :raises ledger.movements.writing.NoSuchSeason: if no season has been opened.
    :raises ledger.movements.writing.NotPayable: if no duty of this name can be paid off.
    """
    _check_above_zero(amount)
    commons.check_member(commons_id=commons_id, member=member)
    window = writing.duty_season(commons_id=commons_id, day=day)
    minutes = writing.minutes_bought(commons_id=commons_id, clause=clause, day=day, amount=amount)
    owed = queries.duty_account(clause=clause, first=window.first, member=member)
    bought = queries.bought_account(clause=clause, first=window.first, member=member)
    money = commons_queries.commons(commons_id=commons_id).money
    paid = f"instead:{clause}:{member}"
    draft = Draft(
        kind=queries.MONEY_INSTEAD,
        occurred_at=hand.clock(),
        day=day,
        subject=member,
        facts={"clause": clause, "amount": amount, "minutes": minutes},
        postings=(
            *writing.moved(owed, bought, amount=minutes, **_WORK),
            *writing.moved(paid, "cash", resource="money", unit=money, amount=amount),
        ),
    )
    (receipt,) = _append(commons_id, [draft], hand)
    return receipt


@transactions.required
def charge_due(
    *, commons_id: int, member: int, kind: str, amount: int, case: int, hand: Hand
) -> Receipt:
    """Charge a member with a due that a decided case makes, in the smallest coin.

    :raises NothingGiven: if the amount is not above zero.
    :raises UnknownDue: if the kind is not one of ``queries.DUE_KINDS``.
    :raises ledger.commons.operations.UnknownMember: if nobody has the number.
    """
    _check_due(commons_id, member, kind, amount)
    money = commons_queries.commons(commons_id=commons_id).money
    due = queries.due_account(kind=kind, member=member)
    return commons.enter(
        commons_id=commons_id,
        kind=queries.DUE_CHARGED,
        facts={"due": kind, "amount": amount, "case": case},
        subject=member,
        postings=writing.moved(f"charged:{kind}", due, resource="money", unit=money, amount=amount),
        hand=hand,
    )


@transactions.required
def pay_due(*, commons_id: int, member: int, kind: str, amount: int, hand: Hand) -> Receipt:
    """Record that a member paid a due, in the smallest coin.

    :raises NothingGiven: if the amount is not above zero.
    :raises UnknownDue: if the kind is not one of ``queries.DUE_KINDS``.
    :raises ledger.commons.operations.UnknownMember: if nobody has the number.
    """
    _check_due(commons_id, member, kind, amount)
    money = commons_queries.commons(commons_id=commons_id).money
    due = queries.due_account(kind=kind, member=member)
    paid = queries.paid_account(kind=kind, member=member)
    return commons.enter(
        commons_id=commons_id,
        kind=queries.DUE_PAID,
        facts={"due": kind, "amount": amount},
        subject=member,
        postings=(
            *writing.moved(due, paid, resource="money", unit=money, amount=amount),
            *writing.moved(f"received:{kind}", "cash", resource="money", unit=money, amount=amount),
        ),
        hand=hand,
    )


@transactions.required
def give_back(
    *, commons_id: int, member: int, season: str, amount: int, case: int, hand: Hand
) -> Receipt:
    """Move what a member took too much from the member's right back to all.

    Out of what is left of the season, or, once that is closed, out of the next allotment that the
    member gets.

    :param amount: base units.
    :raises NothingGiven: if the amount is not above zero.
    :raises ledger.commons.operations.UnknownMember: if nobody has the number.
    :raises ledger.seasons.queries.UnknownSeason: if the season was not opened.
    """
    journal.hold(commons_id=commons_id)
    _check_above_zero(amount)
    commons.check_member(commons_id=commons_id, member=member)
    opened = seasons.season(commons_id=commons_id, code=season)
    resource = commons_queries.resource(commons_id=commons_id, code=opened.resource)
    if opened.closed:
        giving = seasons.carried_account(resource=resource.code, member=member)
        receiving = seasons.source_account(resource=resource.code)
    else:
        giving = seasons.left_account(season=season, member=member)
        receiving = seasons.pool_account(season=season)
    return commons.enter(
        commons_id=commons_id,
        kind=queries.GIVEN_BACK,
        facts={"season": season, "amount": amount, "case": case},
        subject=member,
        postings=writing.moved(
            giving, receiving, resource=resource.code, unit=resource.base, amount=amount
        ),
        hand=hand,
    )


@transactions.required
def undo_give_back(*, commons_id: int, number: int, reason: str, hand: Hand) -> Receipt:
    """Return to a member's right what an entry gave back for a case that no longer stands.

    The entry is reversed; but where its season was closed since, the accounts of that stay as they
    were reported, and the amount goes to the member's next season instead.

    :raises ledger.journal.operations.AlreadyReversed: if the entry was reversed before.
    """
    entry = journal_queries.entry(commons_id=commons_id, number=number)
    assert entry.subject is not None, "a member gives back"
    opened = seasons.season(commons_id=commons_id, code=entry.facts["season"])
    left = seasons.left_account(season=opened.code, member=entry.subject)
    if not opened.closed or all(posting.account != left for posting in entry.postings):
        now = hand.clock()
        return journal.reverse(
            commons_id=commons_id,
            number=number,
            reason=reason,
            by=hand.by,
            occurred_at=now,
            day=commons_queries.commons(commons_id=commons_id).day_of(now),
            clock=hand.clock,
            chance=hand.chance,
        )
    resource = commons_queries.resource(commons_id=commons_id, code=opened.resource)
    amount = entry.facts["amount"]
    return commons.enter(
        commons_id=commons_id,
        kind="give_back_undone",
        facts={"entry": number, "amount": amount},
        texts={"reason": reason},
        subject=entry.subject,
        postings=writing.moved(
            seasons.source_account(resource=resource.code),
            seasons.carried_account(resource=resource.code, member=entry.subject),
            resource=resource.code,
            unit=resource.base,
            amount=amount,
        ),
        hand=hand,
    )


def _as_posted(commons_id: int, drafts: Sequence[Draft]) -> list[Draft]:
    """Return slips with the accounts that they were posted to, where they stand already."""
    return [_with_standing_postings(commons_id, draft) for draft in drafts]


def _with_standing_postings(commons_id: int, draft: Draft) -> Draft:
    assert draft.key is not None, "every slip that is recorded has a key"
    numbers = journal_queries.numbers_by_key(
        commons_id=commons_id, device=draft.device, keys=[draft.key]
    )
    if draft.key not in numbers:
        return draft
    standing = journal_queries.entry(commons_id=commons_id, number=numbers[draft.key])
    return replace(draft, postings=standing.postings)


def _append(commons_id: int, drafts: Sequence[Draft], hand: Hand) -> tuple[Receipt, ...]:
    return journal.append(
        commons_id=commons_id, drafts=drafts, by=hand.by, clock=hand.clock, chance=hand.chance
    )


def _check_due(commons_id: int, member: int, kind: str, amount: int) -> None:
    _check_above_zero(amount)
    if kind not in queries.DUE_KINDS:
        raise UnknownDue(found=kind, accepted=", ".join(queries.DUE_KINDS))
    commons.check_member(commons_id=commons_id, member=member)


def _check_above_zero(amount: int) -> None:
    if type(amount) is not int or amount <= 0:
        raise NothingGiven(found=amount)
