"""Cases: the list, one case as its notice, and the moves that people make in it."""

from collections.abc import Iterator
from dataclasses import dataclass
from statistics import median_low

from django.contrib import messages
from django.db import transaction
from django.http import HttpRequest, HttpResponse
from django.shortcuts import redirect
from django.views.decorators.http import require_POST

from governance.errors import StintbookError
from ledger.cases import operations
from ledger.cases import queries as cases
from ledger.cases.queries import CaseRecord, OpenMove
from ledger.commons import queries as commons
from ledger.foundation.clocks import system_chance, system_clock
from ledger.foundation.hands import Hand
from ledger.judgement import queries as judgement
from ledger.pages.cases.forms import MoveForm
from ledger.pages.cases.words import MOVES, ROLES, state_in_words
from ledger.pages.visiting import page, show
from ledger.reports import cautions, numbers
from ledger.web import visitors
from ledger.web.visitors import NotHere, Visitor

# A member's answer needs words, though the procedure takes a bare one.
ENDED = frozenset({"set_aside", "overturned", "done"})
WORDED = frozenset({"answer", "lodge_appeal"})


@dataclass(frozen=True, slots=True, kw_only=True)
class Offered:
    """A move that the visitor may make or write down now, and in what role."""

    move: OpenMove
    role: str
    names_member: bool

    @property
    def carries(self) -> frozenset[str]:
        """Return what the form asks for."""
        return self.move.carries | ({"reason"} if self.move.move in WORDED else set())


@page
def cases_page(request: HttpRequest, visitor: Visitor) -> HttpResponse:
    """List the cases that the visitor may see, the open ones first."""
    found = [
        case for case in cases.cases(commons_id=visitor.commons.commons_id) if _sees(visitor, case)
    ]
    rows = [(case, state_in_words(case), str(case.so_far.state) in ENDED) for case in found]
    only = request.GET.get("only")
    wanted = {"open": (False,), "ended": (True,)}.get(only or "", (False, True))
    days = [cases.days_between(case) for case in found]
    return show(
        request,
        visitor,
        "cases/cases.html",
        rows=sorted(
            (row for row in rows if row[2] in wanted), key=lambda row: (row[2], row[0].number)
        ),
        any_at_all=bool(rows),
        sees_all=visitor.sees_everybody(),
        to_told=_median([told for told, _ in days if told is not None]),
        to_decided=_median([decided for _, decided in days if decided is not None]),
    )


@page
def case_page(request: HttpRequest, visitor: Visitor, number: int) -> HttpResponse:
    """Show a case: what happened, which rule, where it stands, until when to answer or appeal."""
    return _shown(request, visitor, _case(visitor, number))


@require_POST
@page
def move(request: HttpRequest, visitor: Visitor, number: int) -> HttpResponse:
    """Make a move, or say why it is refused and keep what was typed."""
    before = _case(visitor, number)
    asked = (request.POST.get("move", ""), request.POST.get("role", ""))
    offered = {(each.move.move, each.role): each for each in _offered(visitor, before)}
    if asked not in offered:
        messages.error(request, "This move does not follow now, or is not yours to make.")
        return _shown(request, visitor, before, status=409)
    chosen = offered[asked]
    form = _form(chosen, before, data=request.POST)
    if not form.is_valid():
        return _shown(request, visitor, before, tried=(asked, form), status=400)
    try:
        _make(visitor, before, chosen, form)
    except visitors.NotYours:
        raise
    except StintbookError as error:
        form.add_error(None, str(error))
        return _shown(request, visitor, _case(visitor, number), tried=(asked, form), status=409)
    after = _case(visitor, number)
    messages.success(
        request,
        f"Recorded by entry {after.entries[-1]}: {MOVES[asked[0]]}, by {ROLES[asked[1]]}."
        f" The case is now {state_in_words(after)}.",
    )
    return redirect("case", slug=visitor.commons.slug, number=number)


class SeenOld(StintbookError):
    """Somebody else moved the case meanwhile."""

    code = "pages.seen_old"
    message = (
        "Somebody moved this case while you wrote. Nothing was recorded; read what stands now, and"
        " try again if it still fits."
    )


def _make(visitor: Visitor, before: CaseRecord, chosen: Offered, form: MoveForm) -> None:
    given = form.cleaned_data
    member = given.get("member")
    if member is None and chosen.role not in ("assembly", "book"):
        member = visitor.member
    handed = None
    if "delivery" in chosen.carries:
        handed = operations.Handed(
            on=given["on"], means=given["means"], proved=bool(given["proved"])
        )
    visitors.may_move_case(
        visitor,
        move=chosen.move.move,
        role=chosen.role,
        member=member,
        concerned=before.so_far.subjects,
    )
    commons_id = visitor.commons.commons_id
    with transaction.atomic():
        operations.hold(commons_id=commons_id)
        if len(cases.case(commons_id=commons_id, number=before.number).events) != given["seen"]:
            raise SeenOld
        operations.move(
            commons_id=commons_id,
            case=before.number,
            act=operations.Act(
                move=chosen.move.move,
                role=chosen.role,
                member=member,
                reason=given.get("reason", ""),
                officer=given.get("officer"),
                handed=handed,
            ),
            hand=Hand(by=visitor.member, clock=system_clock, chance=system_chance),
        )


def _sees(visitor: Visitor, case: CaseRecord) -> bool:
    return visitor.sees_everybody() or visitor.member in case.so_far.subjects


def _case(visitor: Visitor, number: int) -> CaseRecord:
    try:
        found = cases.case(commons_id=visitor.commons.commons_id, number=number)
    except cases.UnknownCase as error:
        raise NotHere(what="case") from error
    if not _sees(visitor, found):
        raise NotHere(what="case")
    return found


def _offered(visitor: Visitor, case: CaseRecord) -> Iterator[Offered]:
    """Yield the moves that may follow and are the visitor's to make or to write down."""
    concerned = case.so_far.subjects
    for each in cases.open_moves(case=case):
        for role in each.roles:
            # What a member says stands in the member's name, whoever writes it down.
            if role == "secretary" and "member" in each.roles:
                continue
            own = visitor.member if role != "member" or visitor.member in concerned else None
            named = own is None and role == "member"
            member = min(concerned, default=None) if named else own
            if role in ("assembly", "book"):
                member = None
            try:
                visitors.may_move_case(
                    visitor, move=each.move, role=role, member=member, concerned=concerned
                )
            except visitors.NotYours:
                continue
            yield Offered(move=each, role=role, names_member=named)


def _form(offered: Offered, case: CaseRecord, *, data: object = None) -> MoveForm:
    return MoveForm(
        data,
        carries=offered.carries,
        names_member=offered.names_member,
        auto_id=f"id_{offered.move.move}_{offered.role}_%s",
        initial={"seen": len(case.events), "move": offered.move.move, "role": offered.role},
    )


def _shown(
    request: HttpRequest,
    visitor: Visitor,
    case: CaseRecord,
    *,
    tried: tuple[tuple[str, str], MoveForm] | None = None,
    status: int = 200,
) -> HttpResponse:
    commons_id = visitor.commons.commons_id
    today = visitor.commons.day_of(system_clock())
    ahead = cases.step_ahead(commons_id=commons_id, case=case, today=today)
    decided = cases.step_decided(commons_id=commons_id, case=case)
    forms = [
        tried[1]
        if tried is not None and tried[0] == (each.move.move, each.role)
        else _form(each, case)
        for each in _offered(visitor, case)
    ]
    return show(
        request,
        visitor,
        "cases/case.html",
        status=status,
        case=case,
        state=state_in_words(case),
        clause=cases.clause_text(commons_id=commons_id, case=case),
        reasons=judgement.explained(commons_id=commons_id, number=case.finding.number),
        ahead=ahead,
        ahead_sum=_sum(visitor, ahead),
        decided=decided,
        decided_sum=_sum(visitor, decided),
        days=cases.days_given(commons_id=commons_id, case=case, today=today),
        deciders=_names(visitor, cases.deciders(commons_id=commons_id, case=case, today=today)),
        events=[
            (event, entry, MOVES[str(event.move)], ROLES[str(event.actor.role)])
            for event, entry in zip(case.events, case.entries, strict=True)
        ],
        forms=forms,
        cautions=cautions.OF_A_CASE,
    )


def _sum(visitor: Visitor, step: cases.StepInWords | None) -> str:
    """Return what a step costs with its currency, or nothing where it costs nothing."""
    if step is None or not step.amount_minor:
        return ""
    currency = visitor.commons.money
    return f"{numbers.money(step.amount_minor, currency=currency)} {currency}"


def _names(visitor: Visitor, members: frozenset[int]) -> list[str]:
    known = commons.members(commons_id=visitor.commons.commons_id)
    return [known[number].name for number in sorted(members)]


def _median(days: list[int]) -> int | None:
    return median_low(days) if days else None
