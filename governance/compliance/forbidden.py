"""A take that was not allowed at all: the whole of it is breach and overuse."""

from collections.abc import Iterable

from governance.bylaws import clauses
from governance.compliance import evidence, findings, ground, sentences


def finding(
    *,
    clause_id: str,
    or_else: str | None,
    book: clauses.Book,
    takes: ground.Takes,
    acts: tuple[evidence.Act, ...],
    lines: Iterable[str],
    reasons: Iterable[str],
) -> findings.Finding:
    """Return the finding on what one member took of one resource on one day.

    :param lines: the working after what was taken; the sum itself is added at its end.
    :param reasons: the rows of the digest that say why the take was not allowed.
    :raises UnitMismatch: if the book counts the resource in another base unit than the takes.
    """
    read = sentences.reading(book=book, table=takes.table)
    key = findings.Key(
        clause=clause_id,
        subject_kind=findings.SubjectKind.MEMBER,
        subject=acts[0].member,
        resource=takes.table.resource,
        window=evidence.day_of(acts),
    )
    total = sum(act.amount for act in acts)
    return findings.Finding(
        key=key,
        edition=book.edition,
        or_else=or_else,
        base=read.base,
        total=total,
        limit=0,
        breach=total,
        overuse=total,
        entries=evidence.entries(acts),
        working=(
            sentences.taken(acts=acts, window=key.window, read=read),
            *lines,
            f"Nothing was allowed: all of it, {read.text(total)}, lies beyond the limit.",
        ),
        inputs=evidence.digest(book=book, key=key, limit=0, rows=(*evidence.lines(acts), *reasons)),
    )
