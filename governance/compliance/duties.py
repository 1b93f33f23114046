"""The work duty: days of work owed each season, rendered in work or, if the book lets, money."""

import math
from collections.abc import Sequence
from typing import NamedTuple

import numpy as np

from governance import facts, periods, quantities
from governance.bylaws import clauses
from governance.compliance import evidence, findings, ground, sentences


class Gift(NamedTuple):
    """One row of contributions: minutes of work, or money in the smallest coin."""

    entry: int
    kind: str
    day: int
    amount: int


def short(
    *,
    clause: clauses.WorkDuty,
    book: clauses.Book,
    live: ground.Mask,
    laid: ground.Ground,
) -> tuple[findings.Finding, ...]:
    """Return one finding per member who owed work and rendered less by the season's end.

    Nobody is judged before the season has ended. Whoever is in the clause's class on the season's
    first day owes; what is rendered on the season's days counts. Owed minutes are rounded down,
    and so, once, are the minutes that a member's money comes to.

    :param live: the days of the season on which this version of the clause is in force; the
        season is judged by the version of its first day.
    """
    if laid.as_of < laid.season.until or not live[0]:
        return ()
    owed = quantities.rounded(clause.days * clause.day_minutes, quantities.Rounding.DOWN)
    work, worked = _rendered(laid.facts.work, clause=clause, laid=laid)
    money, paid = _rendered(laid.facts.money, clause=clause, laid=laid)
    behind = laid.classes[clause.head.who][:, 0] & (worked < owed)
    found = []
    for position in np.flatnonzero(behind).tolist():
        sums = int(worked[position]), int(paid[position])
        if sums[0] + minutes_of(clause=clause, paid=sums[1]) < owed:
            gifts = (*work.get(position, ()), *money.get(position, ()))
            member = laid.holders.members[position].number
            found.append(
                _finding(
                    clause=clause,
                    book=book,
                    key=_key(clause=clause, member=member, season=laid.season),
                    gifts=tuple(sorted(gifts)),
                    owed=owed,
                    worked=sums[0],
                    paid=sums[1],
                )
            )
    return tuple(found)


def minutes_of(*, clause: clauses.WorkDuty, paid: int) -> int:
    """Return the minutes of work that a sum in the smallest coin stands for, rounded down.

    The price is that of a working day of the clause's own length.
    """
    if clause.instead is None:
        return 0
    return math.floor(paid * clause.day_minutes / clause.instead.money.minor)


def _rendered(
    gifts: facts.Contributions, *, clause: clauses.WorkDuty, laid: ground.Ground
) -> tuple[dict[int, list[Gift]], facts.Column]:
    """Return what each member, by position, rendered under the clause: the gifts and their sum."""
    position = laid.holders.positions(gifts.member)
    kept = (position >= 0) & (gifts.day >= periods.day_number(laid.season.first))
    kept &= gifts.day < periods.day_number(laid.season.until)
    named = [each == clause.head.id for each in gifts.duties]
    kept &= np.isin(gifts.duty, np.flatnonzero(named))
    sums = np.zeros(len(laid.holders.members), dtype=np.int64)
    np.add.at(sums, position[kept], gifts.amount[kept])
    by_member: dict[int, list[Gift]] = {}
    for holder, entry, day, amount in zip(
        position[kept].tolist(),
        gifts.entry[kept].tolist(),
        gifts.day[kept].tolist(),
        gifts.amount[kept].tolist(),
        strict=True,
    ):
        by_member.setdefault(holder, []).append(Gift(entry, gifts.kind, day, amount))
    return by_member, sums


def _key(*, clause: clauses.WorkDuty, member: int, season: periods.DateRange) -> findings.Key:
    return findings.Key(
        clause=clause.head.id,
        subject_kind=findings.SubjectKind.MEMBER,
        subject=member,
        resource="",
        window=season,
    )


def _finding(
    *,
    clause: clauses.WorkDuty,
    book: clauses.Book,
    key: findings.Key,
    gifts: Sequence[Gift],
    owed: int,
    worked: int,
    paid: int,
) -> findings.Finding:
    rendered = worked + minutes_of(clause=clause, paid=paid)
    return findings.Finding(
        key=key,
        edition=book.edition,
        or_else=clause.head.or_else,
        base="min",
        total=rendered,
        limit=owed,
        breach=owed - rendered,
        overuse=owed - rendered,
        entries=tuple(sorted({gift.entry for gift in gifts})),
        working=(
            f"Owed {sentences.hours(owed)}: {quantities.decimal_text(clause.days)}"
            f" × a working day of {sentences.hours(clause.day_minutes)}.",
            *_rendered_lines(clause=clause, gifts=gifts, worked=worked, paid=paid),
            f"Short by {sentences.hours(owed - rendered)}.",
        ),
        inputs=evidence.digest(
            book=book, key=key, limit=owed, rows=(evidence.line(*gift) for gift in gifts)
        ),
    )


def _rendered_lines(
    *, clause: clauses.WorkDuty, gifts: Sequence[Gift], worked: int, paid: int
) -> tuple[str, ...]:
    if not gifts:
        return ("Nothing was rendered in the season.",)
    entries = sentences.listed(sorted({gift.entry for gift in gifts}))
    line = f"{entries}: worked {sentences.hours(worked)}."
    if not paid:
        return (line,)
    if clause.instead is None:
        return (line, "Money does not stand in for this work.")
    price = clause.instead.money
    each = quantities.rounded(price.minor, quantities.Rounding.HALF_UP)
    return (
        line,
        f"Paid {quantities.money_text(paid, currency=price.currency)},"
        f" at {quantities.money_text(each, currency=price.currency)}"
        " for each working day:"
        f" {sentences.hours(minutes_of(clause=clause, paid=paid))}.",
    )
