"""Cases and their moves: the computer counts, people move."""

from collections.abc import Mapping
from datetime import date
from typing import Any, ClassVar

from django.db import transaction
from drf_spectacular.utils import OpenApiParameter, extend_schema
from rest_framework import serializers
from rest_framework.request import Request
from rest_framework.response import Response

from ledger.api import fields, preconditions, shapes
from ledger.api.views import CommonsView
from ledger.cases import operations
from ledger.cases import queries as cases
from ledger.identity import operations as identity
from ledger.web import visitors
from ledger.web.visitors import NotHere


class HandedIn(fields.StrictSerializer):
    """One attempt to hand something over."""

    on = serializers.DateField()
    means = fields.Text(max_length=60)
    proved = serializers.BooleanField()


class MoveIn(fields.StrictSerializer):
    """A move: its name, in what role and by whom it is made, and what it carries."""

    move = serializers.RegexField(r"^[a-z_]{1,40}$", max_length=40)
    role = serializers.RegexField(r"^[a-z_]{1,20}$", max_length=20)
    member = fields.whole(required=False)
    reason = fields.Text(max_length=20_000, required=False, allow_blank=True)
    officer = fields.whole(required=False)
    handed = HandedIn(required=False)


class CasesView(CommonsView):
    """Whatever reads or moves cases."""

    def sees(self, case: cases.CaseRecord) -> bool:
        """Return whether the visitor may see a case."""
        return self.visitor.sees_everybody() or self.visitor.member in case.so_far.subjects

    def case(self, number: int) -> cases.CaseRecord:
        """Return a case that the visitor may see.

        :raises ledger.web.visitors.NotHere: if there is none.
        """
        try:
            found = cases.case(commons_id=self.commons_id, number=number)
        except cases.UnknownCase as error:
            raise NotHere(what="case") from error
        if not self.sees(found):
            raise NotHere(what="case")
        return found

    def answer(self, case: cases.CaseRecord) -> dict[str, Any]:
        """Return a case as it is answered."""
        so_far = case.so_far
        return {
            "number": case.number,
            "state": str(so_far.state),
            "finding": case.finding.number,
            "clause": case.finding.finding.key.clause,
            "ladder": case.ladder,
            "concerns": sorted(so_far.subjects),
            "officer": so_far.officer,
            "decided_on": _day(so_far.decided_on),
            "final_on": _day(so_far.final_on),
            "amount": str(so_far.amount_minor),
            "money": self.visitor.commons.money,
            "events": [
                {
                    "move": str(event.move),
                    "role": str(event.actor.role),
                    "member": event.actor.member,
                    "on": event.on.isoformat(),
                    "reason": event.reason,
                    "entry": entry,
                }
                for event, entry in zip(case.events, case.entries, strict=True)
            ],
        }


class Cases(CasesView):
    """The cases, as the visitor may see them."""

    @extend_schema(operation_id="list_cases", responses={200: shapes.CasesOut})
    def get(self, request: Request, slug: str) -> Response:
        """List the cases; a member is given those that concern them."""
        found = cases.cases(commons_id=self.commons_id)
        mine = [each for each in found if self.sees(each)]
        return Response({"cases": [self.answer(each) for each in mine]})


class OneCase(CasesView):
    """One case."""

    @extend_schema(
        operation_id="read_case", parameters=[shapes.NUMBER], responses={200: shapes.CaseOut}
    )
    def get(self, request: Request, slug: str, number: int) -> Response:
        """Read a case; its ETag is what a move must show."""
        found = self.case(number)
        return Response(self.answer(found), headers={"ETag": tag(found)})


class CaseMoves(CasesView):
    """The moves of a case."""

    scopes: ClassVar[Mapping[str, str]] = {"POST": identity.MOVE_CASES}

    @extend_schema(
        operation_id="move_case",
        request=MoveIn,
        parameters=[
            shapes.NUMBER,
            OpenApiParameter(
                "If-Match",
                {"type": "string", "maxLength": 60},
                OpenApiParameter.HEADER,
                required=True,
            ),
        ],
        responses={200: shapes.CaseOut},
    )
    def post(self, request: Request, slug: str, number: int) -> Response:
        """Make a move, or write it down for who made it. Step and sum follow from the ladder."""
        given = MoveIn(data=request.data)
        given.is_valid(raise_exception=True)
        asked = given.validated_data
        with transaction.atomic():
            operations.hold(commons_id=self.commons_id)
            before = self.case(number)
            preconditions.check_match(request, now=tag(before))
            operations.move(
                commons_id=self.commons_id,
                case=number,
                act=self._act(asked, before),
                hand=self.hand,
            )
        after = self.case(number)
        return Response(self.answer(after), headers={"ETag": tag(after)})

    def _act(self, asked: dict[str, Any], case: cases.CaseRecord) -> operations.Act:
        role = asked["role"]
        member = asked.get("member")
        if member is None and role not in ("assembly", "book"):
            member = self.visitor.member
        visitors.may_move_case(
            self.visitor,
            move=asked["move"],
            role=role,
            member=member,
            concerned=case.so_far.subjects,
        )
        handed = asked.get("handed")
        return operations.Act(
            move=asked["move"],
            role=role,
            member=member,
            reason=asked.get("reason", ""),
            officer=asked.get("officer"),
            handed=None if handed is None else operations.Handed(**handed),
        )


def tag(case: cases.CaseRecord) -> str:
    """Return the entity tag of a case: it changes with every move and with its finding."""
    return f'"{case.number}-{len(case.events)}-{case.finding.version}"'


def _day(day: date | None) -> str | None:
    return None if day is None else day.isoformat()
