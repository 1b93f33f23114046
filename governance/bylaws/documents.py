"""The text of a bylaw book to its records, with every mistake named by line and column."""

import hashlib
from collections.abc import Mapping
from dataclasses import dataclass

from governance import quantities
from governance.bylaws import (
    clause_shapes,
    clauses,
    context,
    declarations,
    deontics,
    ladder_shapes,
    markup,
    quota_shapes,
    shapes,
    spelling,
    tree,
    validation,
)
from governance.bylaws.problems import Problems


def read(*, text: str, name: str) -> clauses.Book:
    """Return the book that a text holds.

    :param name: what messages call the text, such as the name of its file.
    :raises UnreadableBook: if anything in the text is wrong; it names all of it.
    """
    problems = Problems(file=name)
    root = markup.parse(text=text, problems=problems)
    parts = None if root is None else _parts(root, problems)
    problems.refuse_if_any()
    assert parts is not None, "a text without a problem is a book"
    return _book(parts, text)


@dataclass(frozen=True, slots=True, kw_only=True)
class _Parts:
    """The parts of a book that could be read; a part with problems is left out."""

    cover: shapes.Cover
    clauses: tuple[shapes.ClauseShape, ...]
    ladders: Mapping[str, ladder_shapes.Ladder]
    quotas: Mapping[str, quota_shapes.Quota]


def _parts(root: tree.Node, problems: Problems) -> _Parts | None:
    """Read every part, whatever is wrong with the others, so that all problems are noted."""
    reading = declarations.gathered(root=root, problems=problems)
    cover = validation.validated(shape=shapes.Cover, node=root, reading=reading)
    if not isinstance(root, tree.Mapping):
        return None
    ladders = _ladders(root.value("ladders"), reading)
    found = _clauses(root.value("clauses"), ladders, reading)
    quotas = _quotas(root.value("quota"), reading)
    if cover is None:
        return None
    for node, clause in found:
        _check_days(node, clause, cover, reading)
    return _Parts(
        cover=cover,
        clauses=tuple(clause for _, clause in found),
        ladders=ladders,
        quotas=quotas,
    )


def _ladders(node: tree.Node | None, reading: context.Reading) -> dict[str, ladder_shapes.Ladder]:
    ladders = {}
    for name, each in node.items() if isinstance(node, tree.Mapping) else ():
        validation.check_name(name=name, reading=reading)
        ladder = validation.validated(shape=ladder_shapes.Ladder, node=each, reading=reading)
        if ladder is not None:
            ladders[str(name)] = ladder
    return ladders


def _quotas(node: tree.Node | None, reading: context.Reading) -> dict[str, quota_shapes.Quota]:
    quotas = {}
    for resource, each in node.items() if isinstance(node, tree.Mapping) else ():
        if reading.resources is not None and resource not in reading.resources:
            reading.problems.add(
                at=resource,
                found=spelling.quoted(resource),
                accepted=f"a resource of this book: {spelling.choice(sorted(reading.resources))}",
                nearest=spelling.nearest(resource, reading.resources),
            )
        quota = validation.validated(shape=quota_shapes.Quota, node=each, reading=reading)
        if quota is not None:
            quotas[str(resource)] = quota
    return quotas


def _clauses(
    node: tree.Node | None, ladders: Mapping[str, ladder_shapes.Ladder], reading: context.Reading
) -> list[tuple[tree.Mapping, shapes.ClauseShape]]:
    found = []
    ids: set[str] = set()
    for each in node if isinstance(node, tree.Sequence) else ():
        if not isinstance(each, tree.Mapping):
            accepted = "a clause: a mapping with 'id', 'title', 'kind', 'what' and 'text'"
            reading.problems.add(at=each, found=tree.described(each), accepted=accepted)
            continue
        _check_id(each, ids, reading)
        clause = _clause(each, reading)
        if clause is not None:
            _check_fines(each, clause, ladders, reading)
            found.append((each, clause))
    return found


def _check_id(node: tree.Mapping, ids: set[str], reading: context.Reading) -> None:
    clause_id = node.value("id")
    if not isinstance(clause_id, tree.Scalar):
        return
    if clause_id in ids:
        reading.problems.add(
            at=clause_id,
            found=f"the id {spelling.quoted(clause_id)} a second time",
            accepted="an id of its own for every clause",
        )
    ids.add(str(clause_id))


def _clause(node: tree.Mapping, reading: context.Reading) -> shapes.ClauseShape | None:
    kind = node.value("kind")
    kinds = clause_shapes.KINDS
    shape = kinds.get(kind) if isinstance(kind, tree.Scalar) else None
    if shape is None:
        reading.problems.add(
            at=node if kind is None else kind,
            found="no 'kind'" if kind is None else f"the kind {tree.described(kind)}",
            accepted=f"one of {spelling.choice(kinds)}",
            nearest=spelling.nearest(str(kind), kinds) if kind is not None else None,
        )
        return None
    rest = deontics.checked(node=node, shape=shape, reading=reading)
    return validation.validated(shape=shape, node=rest, reading=reading)


def _check_fines(
    node: tree.Mapping,
    clause: shapes.ClauseShape,
    ladders: Mapping[str, ladder_shapes.Ladder],
    reading: context.Reading,
) -> None:
    """Note a ladder that fines by a unit which a breach of the clause is not counted in."""
    named, counted = node.value("or_else"), clause.counted_in(reading)
    ladder = ladders.get(named) if isinstance(named, tree.Scalar) else None
    if ladder is None or counted is None or named is None:
        return
    measured = quantities.unit(counted).measures
    for per in ladder.fined_per():
        if quantities.unit(per).measures != measured:
            reading.problems.add(
                at=named,
                found=f"the ladder {tree.described(named)}, which fines for each {per}",
                accepted=f"a ladder that fines by {measured} or by a flat sum",
            )


def _check_days(
    node: tree.Mapping,
    clause: shapes.ClauseShape,
    cover: shapes.Cover,
    reading: context.Reading,
) -> None:
    own, book = node.value("in_force"), cover.in_force.days()
    if (
        own is not None
        and clause.in_force is not None
        and not clause.in_force.days().overlaps(book)
    ):
        reading.problems.add(
            at=own,
            found="days on which this edition is never in force",
            accepted=f"days that meet the edition's, from {book.first}",
        )


def _book(parts: _Parts, text: str) -> clauses.Book:
    cover, days = parts.cover, parts.cover.in_force.days()
    return clauses.Book(
        name=cover.book,
        edition=cover.edition,
        in_force=days,
        adopted=cover.adopted.record(),
        zone=cover.zone,
        money=cover.money,
        resources=tuple(
            clauses.ResourceUnits(resource=name, unit=units.unit, base=units.base)
            for name, units in cover.resources.items()
        ),
        clauses=(
            *(clause.record(book=days) for clause in parts.clauses),
            *(ladder.record(name=name, book=days) for name, ladder in parts.ladders.items()),
            *(quota.record(resource=name, book=days) for name, quota in parts.quotas.items()),
        ),
        digest=hashlib.sha256(text.encode()).hexdigest(),
    )
