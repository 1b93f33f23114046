"""A finding opened in words: the clause, whom and when, the arithmetic, and what was used."""

from governance.bylaws import clauses
from governance.compliance import findings, sentences


def explain(*, finding: findings.Finding, book: clauses.Book) -> tuple[str, ...]:
    """Return a finding as short lines, from the clause down to the entries.

    :param book: the edition that the finding was judged by.
    """
    assert book.edition == finding.edition, "a finding is explained by the edition that judged it"
    key = finding.key
    return (
        *_clause_lines(clause_id=key.clause, book=book),
        f"About {key.subject_kind.value} {key.subject}"
        + (f", {key.resource}" if key.resource else "")
        + f", {sentences.when(key.window)}.",
        *finding.working,
        _entries_line(finding),
        _figures_line(finding=finding, book=book),
        _ladder_line(finding),
        f"Judged by edition {book.edition} of {book.name},"
        f" adopted by the {book.adopted.by} on {book.adopted.on}, in force from"
        f" {book.in_force.first}. Inputs {finding.inputs}.",
    )


def _clause_lines(*, clause_id: str, book: clauses.Book) -> tuple[str, ...]:
    for clause in book.clauses:
        if clause.head.id == clause_id:
            return (f"Clause {clause_id}: {clause.head.title}", clause.head.text)
    # Only a suspension can outlive the clause that it was decided for.
    return (f"Clause {clause_id}, which edition {book.edition} no longer holds.",)


def _entries_line(finding: findings.Finding) -> str:
    if not finding.entries:
        return "It rests on no entry: nothing was recorded."
    return "It rests on: " + ", ".join(str(number) for number in finding.entries) + "."


def _figures_line(*, finding: findings.Finding, book: clauses.Book) -> str:
    total, limit, breach, overuse = (
        sentences.figure(amount=amount, base=finding.base, resource=finding.key.resource, book=book)
        for amount in (finding.total, finding.limit, finding.breach, finding.overuse)
    )
    return f"Total {total}; limit {limit}; breach {breach}; overuse {overuse}."


def _ladder_line(finding: findings.Finding) -> str:
    if finding.or_else is None:
        return "The book ties no sanction to this clause: it is reported only."
    return f"What may follow stands in {finding.or_else}; people decide."
