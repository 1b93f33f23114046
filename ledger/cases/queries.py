"""Cases as they stand, and the step that a ladder comes to."""

from collections import defaultdict
from collections.abc import Collection, Mapping, Sequence
from dataclasses import dataclass
from datetime import date
from itertools import pairwise
from typing import ClassVar, assert_never

from governance.bylaws import clauses, wording
from governance.compliance.findings import SubjectKind
from governance.sanctions import clocks, ladder, record
from governance.sanctions.moves import TABLE, Move, Need, Role, State
from ledger.bylaws import queries as bylaws
from ledger.cases import columns, models
from ledger.commons import queries as commons
from ledger.foundation.errors import LedgerError
from ledger.journal import queries as journal
from ledger.judgement import queries as judgement

# After these moves nothing follows.
ENDING = (Move.SET_ASIDE, Move.OVERTURN, Move.COMPLETE)
# From these states a case may still come to stand, though it is not final.
_MAY_BECOME_FINAL = (
    State.TOLD,
    State.ANSWERED,
    State.UNANSWERED,
    State.DECIDED,
    State.APPEAL_OPEN,
    State.UNDER_APPEAL,
)
# In these states nothing is decided, and something may be.
_UNDECIDED = (State.NOTED, State.CHECKING, State.TOLD, State.ANSWERED, State.UNANSWERED)


class UnknownCase(LedgerError):
    """The commons has no case of this number, or none on such a finding."""

    code: ClassVar[str] = "cases.unknown_case"
    message: ClassVar[str] = "Found no case {found}."


@dataclass(frozen=True, slots=True, kw_only=True)
class CaseRecord:
    """A case: what it rests on and where it stands.

    ``version`` is the finding's version that the last event rests on; ``effects`` are the entries
    that carried the decision out. A return to checking forgets what was told and decided; the
    events keep it.
    """

    commons_id: int
    number: int
    finding: judgement.FindingRecord
    version: int
    ladder: str
    so_far: record.CaseSoFar
    events: tuple[record.Event, ...]
    entries: tuple[int, ...]
    effects: tuple[int, ...]


def cases(
    *,
    commons_id: int,
    ladder: str | None = None,
    findings: Collection[int] | None = None,
    is_open: bool | None = None,
) -> tuple[CaseRecord, ...]:
    """Return the cases of a commons in order of number.

    :param ladder: only those under this ladder.
    :param findings: only those on findings of these numbers.
    :param is_open: only those that something may still happen to, or only those that ended.
    """
    rows = models.Case.objects.filter(commons_id=commons_id).order_by("number")
    if ladder is not None:
        rows = rows.filter(ladder=ladder)
    if findings is not None:
        rows = rows.filter(finding__in=findings)
    if is_open is not None:
        ended = models.Event.objects.filter(commons_id=commons_id, move__in=ENDING).values("case")
        rows = rows.exclude(number__in=ended) if is_open else rows.filter(number__in=ended)
    return _records(commons_id, list(rows))


def case(*, commons_id: int, number: int) -> CaseRecord:
    """Return one case.

    :raises UnknownCase: if there is none of this number.
    """
    row = models.Case.objects.filter(commons_id=commons_id, number=number).first()
    if row is None:
        raise UnknownCase(found=f"of number {number}")
    return _records(commons_id, [row])[0]


def case_on(*, commons_id: int, clause: str, subject: int, first: date) -> CaseRecord:
    """Return the case on a clause, a subject and a window's first day.

    :raises UnknownCase: if there is none.
    """
    for each in cases(commons_id=commons_id):
        key = each.finding.finding.key
        if (key.clause, key.subject, key.window.first) == (clause, subject, first):
            return each
    raise UnknownCase(found=f"on clause {clause}, subject {subject}, from {first}")


def last_on_finding(*, commons_id: int, finding: int) -> CaseRecord | None:
    """Return the last case that was noted on a finding, if one was."""
    return next(reversed(cases(commons_id=commons_id, findings=[finding])), None)


def concerned(*, commons_id: int, finding: judgement.FindingRecord) -> frozenset[int]:
    """Return the members whom a finding concerns: the household, even where one of it acted."""
    member = commons.members(commons_id=commons_id)[finding.finding.key.subject]
    return commons.household_of(commons_id=commons_id, household=member.household)


def responsible(case: CaseRecord) -> frozenset[int]:
    """Return the members whose act a case is about: one, or a household that counts as one."""
    key = case.finding.finding.key
    if key.subject_kind is SubjectKind.HOUSEHOLD:
        return case.so_far.subjects
    return frozenset({key.subject})


def ladder_of(*, commons_id: int, case: CaseRecord) -> clauses.SanctionLadder:
    """Return the ladder of a case, as the edition said that was in force at the act."""
    found = book_of(commons_id=commons_id, case=case).clause(case.ladder)
    assert isinstance(found, clauses.SanctionLadder), "an or-else names a ladder"
    return found


def book_of(*, commons_id: int, case: CaseRecord) -> clauses.Book:
    """Return the edition that the case's finding was judged under."""
    edition = case.finding.finding.edition
    editions = bylaws.adopted(commons_id=commons_id).books
    return next(book for book in editions if book.edition == edition)


def step_due(*, commons_id: int, case: CaseRecord, decided_on: date) -> ladder.StepDue:
    """Return the step that the ladder comes to if the case is decided on a day.

    An earlier case whose finding was withdrawn since does not count.
    """
    return _step(commons_id, case, day=decided_on, may_become_final=False)


def step_foreseen(*, commons_id: int, case: CaseRecord, told_on: date) -> ladder.StepDue:
    """Return the highest step that a decision may come to after a notice on a day.

    An earlier case that is still open may become final before the decision, so it counts here: the
    member hears of the most that may follow, and has the time to answer that goes with it.
    """
    return _step(commons_id, case, day=told_on, may_become_final=True)


def _step(
    commons_id: int, case: CaseRecord, *, day: date, may_become_final: bool
) -> ladder.StepDue:
    about = judgement.numbers_about(commons_id=commons_id, members=case.so_far.subjects)
    earlier = [
        ladder.EarlierAct(
            case=other.number,
            act_on=other.finding.finding.key.window.first,
            told_on=other.so_far.told_on,
            final_on=day
            if may_become_final and other.so_far.state in _MAY_BECOME_FINAL
            else other.so_far.final_on,
        )
        for other in cases(commons_id=commons_id, ladder=case.ladder, findings=about)
        if other.number != case.number
        and other.finding.standing
        and responsible(other) & responsible(case)
    ]
    return ladder.step_for(
        ladder=ladder_of(commons_id=commons_id, case=case),
        act_on=case.finding.finding.key.window.first,
        earlier=earlier,
        decided_on=day,
    )


def measure(*, commons_id: int, case: CaseRecord) -> str | None:
    """Return in a word what was decided, or None before a decision."""
    if case.so_far.step is None:
        return None
    match ladder_of(commons_id=commons_id, case=case).steps[case.so_far.step]:
        case clauses.Warning():
            return "warning"
        case clauses.Fine():
            return "fine"
        case clauses.Suspension():
            return "suspension"
        case clauses.Referral():
            return "referral"
        case other:
            assert_never(other)


@dataclass(frozen=True, slots=True, kw_only=True)
class OpenMove:
    """A move that may follow in a case: who makes it, and what it must carry, in words of the book.

    ``carries`` holds some of ``reason``, ``officer`` and ``delivery``.
    """

    move: str
    roles: tuple[str, ...]
    carries: frozenset[str]


_CARRIED = {
    Need.REASON: "reason",
    Need.OFFICER: "officer",
    Need.DELIVERY: "delivery",
}


def open_moves(*, case: CaseRecord) -> tuple[OpenMove, ...]:
    """Return the moves that may follow the state of a case, other than those the book makes alone.

    Whether one is accepted depends on days and persons too; the procedure says so when it is tried.
    """
    arrived = any(each.proved for each in case.so_far.deliveries)
    return tuple(
        OpenMove(
            move=str(row.move),
            roles=tuple(str(role) for role in row.roles),
            carries=frozenset(_CARRIED[need] for need in row.needs if need in _CARRIED),
        )
        for row in TABLE
        if case.so_far.state in row.sources
        and (Need.DELIVERY in row.needs or Role.BOOK not in row.roles)
        and not (Need.STILL_UNPROVED in row.needs and arrived)
    )


@dataclass(frozen=True, slots=True, kw_only=True)
class StepInWords:
    """A step of the ladder in words, what it costs in the smallest coin, and the arithmetic."""

    words: str
    amount_minor: int
    working: tuple[str, ...]


def step_decided(*, commons_id: int, case: CaseRecord) -> StepInWords | None:
    """Return the step that was decided, or None before a decision."""
    if case.so_far.step is None:
        return None
    step = ladder_of(commons_id=commons_id, case=case).steps[case.so_far.step]
    return StepInWords(
        words=wording.step_words(step), amount_minor=case.so_far.amount_minor, working=()
    )


def step_ahead(*, commons_id: int, case: CaseRecord, today: date) -> StepInWords | None:
    """Return the most that may follow, or None once it is decided or the case has ended.

    Where the member was told, it is what the notice of that day proposed, and not more.
    """
    if case.so_far.state not in _UNDECIDED:
        return None
    told = [event.on for event in case.events if event.move is Move.TELL]
    on = told[-1] if case.so_far.deliveries else today
    due = step_foreseen(commons_id=commons_id, case=case, told_on=on)
    finding = case.finding.finding
    return StepInWords(
        words=wording.step_words(due.step),
        amount_minor=ladder.amount_due(step=due.step, breach=finding.breach, base=finding.base),
        working=due.working,
    )


@dataclass(frozen=True, slots=True, kw_only=True)
class DaysGiven:
    """The days to answer and to appeal, and their last days; None where they do not run now."""

    answer_days: int
    answer_until: date | None
    appeal_days: int
    appeal_to: str
    appeal_until: date | None


def days_given(*, commons_id: int, case: CaseRecord, today: date) -> DaysGiven | None:
    """Return the days that the edition in force today gives, by which moves are judged today.

    None if it has no procedure clause.

    :raises governance.bylaws.editions.NoEditionInForce: if no edition is in force.
    """
    book = bylaws.in_force(commons_id=commons_id, day=today)
    procedure = next((each for each in book.clauses if isinstance(each, clauses.Procedure)), None)
    if procedure is None:
        return None
    so_far = case.so_far
    answer, appeal = (
        clocks.answer_until(case=so_far, procedure=procedure),
        clocks.appeal_until(case=so_far, procedure=procedure),
    )
    return DaysGiven(
        answer_days=procedure.answer_to_warning_days
        if _no_more_than_a_warning(commons_id, case, today)
        else procedure.answer_days,
        answer_until=answer if so_far.state is State.TOLD else None,
        appeal_days=procedure.appeal_days,
        appeal_to=procedure.appeal_to,
        appeal_until=appeal if so_far.state is State.APPEAL_OPEN else None,
    )


def _no_more_than_a_warning(commons_id: int, case: CaseRecord, today: date) -> bool:
    if case.so_far.deliveries:
        return case.so_far.proposes_warning
    foreseen = step_foreseen(commons_id=commons_id, case=case, told_on=today)
    return isinstance(foreseen.step, clauses.Warning)


def deciders(*, commons_id: int, case: CaseRecord, today: date) -> frozenset[int]:
    """Return the members of the board who may decide; none where it falls to the assembly."""
    board = commons.holders_of(commons_id=commons_id, role=Role.BOARD.value, day=today)
    if case.so_far.concerns_board or board & case.so_far.subjects:
        return frozenset()
    return board - case.so_far.monitors - {case.so_far.reporter}


@dataclass(frozen=True, slots=True, kw_only=True)
class ClauseText:
    """A clause as a member reads it, and the edition that it was judged under."""

    id: str
    title: str
    text: str
    edition: int


def clause_text(*, commons_id: int, case: CaseRecord) -> ClauseText:
    """Return the clause that a case is about, as the edition said that was in force at the act."""
    book = book_of(commons_id=commons_id, case=case)
    head = book.clause(case.finding.finding.key.clause).head
    return ClauseText(id=head.id, title=head.title, text=head.text, edition=book.edition)


def days_between(case: CaseRecord) -> tuple[int | None, int | None]:
    """Return the days from the act to the notice, and from the notice to the decision."""
    told, decided = case.so_far.told_on, case.so_far.decided_on
    act = case.finding.finding.key.window.first
    return (
        (told - act).days if told is not None else None,
        (decided - told).days if told is not None and decided is not None else None,
    )


def _records(commons_id: int, rows: Sequence[models.Case]) -> tuple[CaseRecord, ...]:
    events: dict[int, list[models.Event]] = defaultdict(list)
    for event in models.Event.objects.filter(
        commons_id=commons_id, case__in=[row.number for row in rows]
    ).order_by("case", "place"):
        events[event.case].append(event)
    found = judgement.by_number(commons_id=commons_id, numbers=[row.finding for row in rows])
    texts = journal.texts(
        commons_id=commons_id,
        numbers=[event.entry_number for kept in events.values() for event in kept],
    )
    return tuple(_record(row, events[row.number], found[row.finding], texts) for row in rows)


def _record(
    row: models.Case,
    kept: Sequence[models.Event],
    finding: judgement.FindingRecord,
    texts: Mapping[int, Mapping[str, str]],
) -> CaseRecord:
    assert all(one.place + 1 == two.place for one, two in pairwise(kept)), "events stand in a row"
    folded = tuple(columns.event(each, texts.get(each.entry_number, {})) for each in kept)
    return CaseRecord(
        commons_id=row.commons_id,
        number=row.number,
        finding=finding,
        version=kept[-1].finding_version,
        ladder=row.ladder,
        so_far=record.fold(folded),
        events=folded,
        entries=tuple(each.entry_number for each in kept),
        effects=_effects(kept),
    )


def _effects(kept: Sequence[models.Event]) -> tuple[int, ...]:
    """Return the entries that carried the decision out which stands, if one was."""
    for event in reversed(kept):
        if event.effects or event.move == Move.RETURN_TO_CHECKING:
            return tuple(event.effects)
    return ()
