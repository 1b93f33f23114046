"""Recording, reading and undoing entries."""

import base64
from collections.abc import Mapping, Sequence
from datetime import timedelta
from typing import Any, ClassVar

from django.db import transaction
from drf_spectacular.utils import OpenApiParameter, extend_schema
from rest_framework import serializers, status
from rest_framework.request import Request
from rest_framework.response import Response

from governance.errors import StintbookError
from ledger.api import answers, cursors, fields, preconditions
from ledger.api.views import CommonsView
from ledger.foundation.clocks import system_clock
from ledger.foundation.errors import LedgerError
from ledger.identity import operations as identity
from ledger.journal import queries as journal
from ledger.journal.leaves import Receipt
from ledger.movements import operations as movements
from ledger.movements.operations import Line, Slip
from ledger.web.visitors import SECRETARY, NotHere, NotYours

BATCH_MAX = 500
# Clocks of phones go wrong by minutes; a take of tomorrow is a slip of the pen.
AHEAD_MAX = timedelta(minutes=10)


class TakenAhead(LedgerError):
    """A take is dated ahead of now."""

    code: ClassVar[str] = "api.taken_ahead"
    message: ClassVar[str] = "Found {found}, which lies ahead; accepted is now or before."


class LineIn(fields.StrictSerializer):
    """One resource on a slip."""

    resource = fields.Text(max_length=40)
    zone = fields.Text(max_length=40)
    amount = fields.Amount()
    unit = fields.Text(max_length=20)


class SlipIn(fields.StrictSerializer):
    """A landing slip."""

    slip = fields.Text(max_length=60)
    member = fields.whole()
    taken_at = fields.Instant()
    handed_in = fields.Instant()
    draw_point = fields.Text(max_length=120)
    lines = serializers.ListField(child=LineIn(), min_length=1, max_length=50)
    note = fields.Text(max_length=2000, required=False, allow_blank=True)


class KeyedSlipIn(SlipIn):
    """A slip in a batch, with the key that a single call has in its header."""

    key = serializers.RegexField(r"^[!-~]{1,255}$", max_length=255)


class BatchIn(fields.StrictSerializer):
    """Slips that are recorded in one call."""

    slips = serializers.ListField(child=KeyedSlipIn(), min_length=1, max_length=BATCH_MAX)


class ReversalIn(fields.StrictSerializer):
    """Why a slip is undone, and the right one where it is recorded anew."""

    reason = fields.Text(max_length=2000)
    slip = SlipIn(required=False)


class Recording(CommonsView):
    """Whatever records slips."""

    scopes: ClassVar[Mapping[str, str]] = {"POST": identity.RECORD}

    def slip(self, given: dict[str, Any], *, key: str | None) -> Slip:
        """Return a slip as the book takes it.

        :raises NotYours: if the visitor may not record for its member.
        :raises TakenAhead: if it is dated ahead of now.
        """
        member = given["member"]
        if not self.visitor.records_takes_of(member):
            raise NotYours(needed="the office of secretary or monitor", found=self.visitor.title)
        for name in ("taken_at", "handed_in"):
            if given[name] > system_clock() + AHEAD_MAX:
                raise TakenAhead(found=f"{name} {given[name].isoformat()}")
        return Slip(
            slip=given["slip"],
            member=member,
            taken_at=given["taken_at"],
            handed_in=given["handed_in"],
            draw_point=given["draw_point"],
            note=given.get("note", ""),
            device=self.visitor.device,
            key=key,
            lines=tuple(
                Line(
                    resource=line["resource"],
                    zone=line["zone"],
                    given=line["amount"],
                    unit=line["unit"],
                )
                for line in given["lines"]
            ),
        )

    def record(self, slips: Sequence[Slip]) -> tuple[Receipt, ...]:
        """Record slips in one transaction, all or none."""
        with transaction.atomic():
            return movements.record_withdrawals(
                commons_id=self.commons_id, slips=slips, hand=self.hand
            )


class Withdrawals(Recording):
    """Slips one at a time."""

    @extend_schema(
        operation_id="record_withdrawal",
        request=SlipIn,
        responses={201: answers.ReceiptOut, 200: answers.ReceiptOut},
        parameters=[
            OpenApiParameter(
                "Idempotency-Key",
                {"type": "string", "minLength": 1, "maxLength": 255, "pattern": "^[!-~]+$"},
                OpenApiParameter.HEADER,
                required=True,
            )
        ],
    )
    def post(self, request: Request, slug: str) -> Response:
        """Record a withdrawal. The same key again records nothing and gives the same receipt."""
        key = preconditions.key(request)
        given = SlipIn(data=request.data)
        given.is_valid(raise_exception=True)
        (receipt,) = self.record([self.slip(given.validated_data, key=key)])
        code = status.HTTP_200_OK if receipt.replayed else status.HTTP_201_CREATED
        return Response(answers.receipt(receipt), status=code)


class WithdrawalBatch(Recording):
    """Many slips in one call, as a device hands them in that was away from the network."""

    @extend_schema(
        operation_id="record_withdrawals",
        request=BatchIn,
        responses={200: answers.BatchOut},
    )
    def post(self, request: Request, slug: str) -> Response:
        """Record slips and answer for each, in their order; one that is refused stops no other."""
        given = BatchIn(data=request.data)
        given.is_valid(raise_exception=True)
        found = [self._checked(each) for each in given.validated_data["slips"]]
        good = [each for each in found if isinstance(each, Slip)]
        receipts = iter(self._recorded(good))
        return Response(
            {
                "answers": [
                    answers.of_one(next(receipts) if isinstance(each, Slip) else each)
                    for each in found
                ]
            }
        )

    def _checked(self, given: dict[str, Any]) -> Slip | StintbookError:
        try:
            return self.slip(given, key=given["key"])
        except StintbookError as error:
            return error

    def _recorded(self, slips: list[Slip]) -> list[Receipt | StintbookError]:
        """Record all in one go, which is quick; where one is refused, each by itself."""
        if not slips:
            return []
        try:
            return list(self.record(slips))
        except StintbookError:
            return [self._recorded_alone(slip) for slip in slips]

    def _recorded_alone(self, slip: Slip) -> Receipt | StintbookError:
        try:
            return self.record([slip])[0]
        except StintbookError as error:
            return error


class Reversal(Recording):
    """Undoing a slip."""

    @extend_schema(
        operation_id="reverse_entry",
        request=ReversalIn,
        responses={201: answers.ReversalOut},
        parameters=[answers.ENTRY_NUMBER],
    )
    def post(self, request: Request, slug: str, number: int) -> Response:
        """Reverse a withdrawal, and record the right slip where one is given. Both stay."""
        self.visitor.needs(SECRETARY)
        given = ReversalIn(data=request.data)
        given.is_valid(raise_exception=True)
        reason, right = given.validated_data["reason"], given.validated_data.get("slip")
        with transaction.atomic():
            if right is None:
                made: tuple[Receipt, ...] = (
                    movements.undo_withdrawal(
                        commons_id=self.commons_id, number=number, reason=reason, hand=self.hand
                    ),
                )
            else:
                made = movements.correct_withdrawal(
                    commons_id=self.commons_id,
                    number=number,
                    slip=self.slip(right, key=None),
                    reason=reason,
                    hand=self.hand,
                )
        return Response(
            {"receipts": [answers.receipt(each) for each in made]}, status=status.HTTP_201_CREATED
        )


class Entries(CommonsView):
    """The entries of the journal, as the visitor may see them."""

    @extend_schema(
        operation_id="list_entries",
        parameters=cursors.PARAMETERS,
        responses={200: answers.EntriesOut},
    )
    def get(self, request: Request, slug: str) -> Response:
        """List entries from the oldest; ``next`` leads on and never misses or repeats one."""
        asked = cursors.asked(request)
        member = asked.member
        if member is not None and not self.visitor.sees_entry_about(member):
            raise NotHere(what="member")
        return cursors.answer(request, visitor=self.visitor, asked=asked)


class OneEntry(CommonsView):
    """One entry."""

    @extend_schema(
        operation_id="read_entry",
        parameters=[answers.ENTRY_NUMBER],
        responses={200: answers.EntryOut},
    )
    def get(self, request: Request, slug: str, number: int) -> Response:
        """Read an entry with its postings."""
        entry = journal.entry(commons_id=self.commons_id, number=number)
        if not self.visitor.sees_entry(kind=entry.kind, subject=entry.subject):
            raise NotHere(what="entry")
        return Response(answers.entry(entry))


class EntryReceipt(CommonsView):
    """The receipt of an entry."""

    @extend_schema(
        operation_id="read_receipt",
        parameters=[answers.ENTRY_NUMBER],
        responses={200: answers.ProofOut},
    )
    def get(self, request: Request, slug: str, number: int) -> Response:
        """Read the leaf of an entry and the path that leads from it to the head (RFC 9162)."""
        entry = journal.entry(commons_id=self.commons_id, number=number)
        if not self.visitor.sees_entry(kind=entry.kind, subject=entry.subject):
            raise NotHere(what="entry")
        head = journal.head(commons_id=self.commons_id)
        leaf = journal.receipt_leaf(commons_id=self.commons_id, number=number)
        path = journal.inclusion_proof(commons_id=self.commons_id, number=number, size=head.size)
        return Response(
            {
                "number": number,
                "leaf": base64.b64encode(leaf).decode("ascii"),
                "path": [each.hex() for each in path],
                "head": answers.head(head),
            }
        )
