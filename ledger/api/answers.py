"""What the API answers: one function a record, and beside it the shape that the schema tells."""

from typing import Any

from drf_spectacular.types import OpenApiTypes
from drf_spectacular.utils import OpenApiParameter, extend_schema_field
from rest_framework import serializers

from governance.errors import StintbookError
from ledger.api import fields, problems
from ledger.journal import queries as journal
from ledger.journal.leaves import EntryRecord, HeadRecord, Receipt

Shape = serializers.Serializer[Any]


def bounded(most: int) -> serializers.CharField:
    """Return the shape of a text of at most so many signs."""
    return serializers.CharField(max_length=most, allow_blank=True)


def many(shape: serializers.Field[Any, Any, Any, Any], most: int) -> serializers.ListField:
    """Return the shape of a list of at most so many."""
    return serializers.ListField(child=shape, max_length=most)


def count(**kwargs: Any) -> serializers.IntegerField:
    """Return the shape of an entry's number or of a count."""
    return serializers.IntegerField(**{"min_value": 0, "max_value": fields.ENTRY_MAX, **kwargs})


@extend_schema_field(
    {"type": "string", "pattern": r"^-?[0-9]{1,19}$", "maxLength": 20, "example": "12500"}
)
class Units(serializers.CharField):
    """A whole number of base units or of the smallest coin, as a text."""


@extend_schema_field({"type": "string", "pattern": "^([0-9a-f]{64})$", "maxLength": 64})
class Hash(serializers.CharField):
    """A SHA-256 in hex."""


@extend_schema_field({"type": "object", "additionalProperties": True})
class Facts(serializers.JSONField):
    """What an entry says beside its postings; each kind of entry has facts of its own."""


ENTRY_NUMBER = OpenApiParameter(
    "number",
    {"type": "integer", "minimum": 0, "maximum": fields.ENTRY_MAX},
    OpenApiParameter.PATH,
)
DATE = OpenApiTypes.DATE


class HeadOut(Shape):
    """The journal's tree head."""

    size = count()
    root = Hash()  # type: ignore[assignment]  # The framework takes fields off the class.
    recorded_at = fields.Instant()
    proof_line = bounded(200)


class ReceiptOut(Shape):
    """What the one who recorded takes home."""

    number = count()
    leaf_hash = Hash()
    size = count()
    root = Hash()  # type: ignore[assignment]  # The framework takes fields off the class.
    recorded_at = fields.Instant()
    replayed = serializers.BooleanField()


class WrongField(Shape):
    """One field that is wrong, and why."""

    field = bounded(500)
    detail = bounded(2000)


class ProblemOut(Shape):
    """Why a request was refused (RFC 9457)."""

    type = bounded(200)
    title = bounded(200)
    status = serializers.IntegerField(min_value=400, max_value=599)
    detail = bounded(20_000)
    errors = serializers.ListField(  # type: ignore[assignment]  # As above.
        child=WrongField(), required=False, max_length=10_000
    )


class OneOfBatch(Shape):
    """The answer to one slip of a batch: a receipt, or a problem."""

    receipt = ReceiptOut(required=False)
    problem = ProblemOut(required=False)


class BatchOut(Shape):
    """The answers to a batch, in the order of its slips."""

    answers = many(OneOfBatch(), 500)


class ReversalOut(Shape):
    """The receipts of a reversal and, where a right slip was given, of that."""

    receipts = many(ReceiptOut(), 2)


class PostingOut(Shape):
    """One signed amount of an entry."""

    account = bounded(255)
    resource = bounded(64)
    unit = bounded(64)
    amount = Units()


class EntryOut(Shape):
    """One entry as it stands in the journal."""

    number = count()
    kind = bounded(64)
    day = serializers.DateField()
    occurred_at = fields.Instant()
    recorded_at = fields.Instant()
    by = count()
    subject = count(allow_null=True)
    reverses = count(allow_null=True)
    reversed_by = count(allow_null=True)
    facts = Facts()
    postings = many(PostingOut(), 100_000)
    texts = serializers.DictField(child=bounded(1_000_000))


class EntriesOut(Shape):
    """A part of the journal."""

    entries = many(EntryOut(), 200)
    next = serializers.CharField(max_length=500, allow_null=True)


class ProofOut(Shape):
    """A receipt that can be checked without this service."""

    number = count()
    leaf = bounded(10_000_000)
    path = many(Hash(), 64)
    head = HeadOut()


def head(record: HeadRecord) -> dict[str, Any]:
    """Return a head as it is answered."""
    return {
        "size": record.size,
        "root": record.root.hex(),
        "recorded_at": record.recorded_at.isoformat(),
        "proof_line": journal.proof_line(record),
    }


def receipt(record: Receipt) -> dict[str, Any]:
    """Return a receipt as it is answered."""
    return {
        "number": record.number,
        "leaf_hash": record.leaf_hash.hex(),
        "size": record.size,
        "root": record.root.hex(),
        "recorded_at": record.recorded_at.isoformat(),
        "replayed": record.replayed,
    }


def of_one(found: Receipt | StintbookError) -> dict[str, Any]:
    """Return the answer to one slip of a batch."""
    if isinstance(found, StintbookError):
        return {"problem": problems.refusal(found)}
    return {"receipt": receipt(found)}


def entry(record: EntryRecord) -> dict[str, Any]:
    """Return an entry as it is answered; amounts are texts, for some readers round numbers."""
    return {
        "number": record.number,
        "kind": record.kind,
        "day": record.day.isoformat(),
        "occurred_at": record.occurred_at.isoformat(),
        "recorded_at": record.recorded_at.isoformat(),
        "by": record.by,
        "subject": record.subject,
        "reverses": record.reverses,
        "reversed_by": record.reversed_by,
        "facts": record.facts,
        "postings": [
            {
                "account": posting.account,
                "resource": posting.resource,
                "unit": posting.unit,
                "amount": str(posting.amount),
            }
            for posting in record.postings
        ],
        "texts": record.texts,
    }
