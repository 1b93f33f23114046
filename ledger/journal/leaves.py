"""What goes into the journal and what comes out, as plain records, and the bytes of a leaf.

A leaf is the canonical JSON (RFC 8785) of every column of an entry. Whole numbers among facts and
amounts are written as decimal strings, so that no reader of JSON rounds them; a text code that
could be taken for such a number is written with an apostrophe before it.
"""

import json
import re
from collections.abc import Mapping, Sequence
from dataclasses import dataclass, field
from datetime import UTC, date, datetime
from hashlib import sha256
from types import MappingProxyType
from typing import Any, ClassVar, NamedTuple, TypeAlias

import rfc8785

from ledger.foundation.errors import LedgerError

Fact: TypeAlias = "int | str | bool | Sequence[Fact] | Mapping[str, Fact] | None"

AMOUNT_MIN, AMOUNT_MAX = -(2**63), 2**63 - 1
# Plain numbers in the leaf stay below what every reader of JSON holds exactly.
NUMBER_MAX = 2**53 - 1
SALT_BYTES = 16
NAME_LENGTH, KEY_LENGTH = 64, 255

_NUMBER_LIKE = re.compile(r"'*-?[0-9]+")
_encode = json.JSONEncoder(
    # Facts may be any mapping; the encoder knows dictionaries.
    ensure_ascii=False,
    sort_keys=True,
    separators=(",", ":"),
    allow_nan=False,
    default=dict,
).encode


class MalformedDraft(LedgerError):
    """A draft holds a value that no entry can hold."""

    code: ClassVar[str] = "journal.malformed_draft"
    message: ClassVar[str] = "{field}: {why}."


@dataclass(frozen=True, slots=True, kw_only=True)
class Posting:
    """One signed amount of a resource in its base unit, and the account that it belongs to."""

    account: str
    resource: str
    unit: str
    amount: int


@dataclass(frozen=True, slots=True, kw_only=True)
class Draft:
    """An entry before it has a number.

    ``day`` is the local day of the commons. ``texts`` are free texts, kept in a table from which
    they can be erased; the leaf holds only a salted digest of each. ``key`` is the idempotency key,
    unique for ever among the entries of a device. ``subject`` is the number of the member that the
    entry is about.

    :raises MalformedDraft: if a value cannot be held.
    """

    kind: str
    occurred_at: datetime
    day: date
    facts: Mapping[str, Fact]
    postings: tuple[Posting, ...] = ()
    texts: Mapping[str, str] = field(default_factory=lambda: MappingProxyType({}))
    key: str | None = None
    device: str = ""
    reverses: int | None = None
    subject: int | None = None

    def __post_init__(self) -> None:
        if self.occurred_at.tzinfo is None:
            raise MalformedDraft(field="occurred_at", why="the instant has no time zone")
        if type(self.day) is not date:
            raise MalformedDraft(field="day", why="it is not a date")
        _check_word("kind", self.kind, longest=NAME_LENGTH)
        if self.key is not None:
            _check_word("key", self.key, longest=KEY_LENGTH)
        if self.device:
            _check_word("device", self.device, longest=KEY_LENGTH)
        for name, number in (("reverses", self.reverses), ("subject", self.subject)):
            if number is not None:
                check_number(name, number)
        for posting in self.postings:
            _check_word("account", posting.account, longest=KEY_LENGTH)
            _check_word("resource", posting.resource, longest=NAME_LENGTH)
            _check_word("unit", posting.unit, longest=NAME_LENGTH)
        for name, content in self.texts.items():
            _check_word("the name of a text", name, longest=NAME_LENGTH)
            _check_text(name, content)
        _check_fact("facts", self.facts)


@dataclass(frozen=True, slots=True, kw_only=True)
class Receipt:
    """What the one who appended takes home: the entry's leaf and the head that covers it.

    ``size`` and ``root`` are the head right after the call. ``replayed`` says that the entry stood
    in the journal before, under the same key.
    """

    commons_id: int
    number: int
    leaf_hash: bytes
    size: int
    root: bytes
    recorded_at: datetime
    replayed: bool


@dataclass(frozen=True, slots=True, kw_only=True)
class EntryRecord:
    """One entry as it stands in the journal, with the number of its reversal if it has one."""

    number: int
    kind: str
    occurred_at: datetime
    recorded_at: datetime
    day: date
    by: int
    device: str
    key: str | None
    reverses: int | None
    reversed_by: int | None
    subject: int | None
    facts: dict[str, Any]
    postings: tuple[Posting, ...]
    texts: dict[str, str]


class Row(NamedTuple):
    """What rules and reports read of a standing entry: all but postings and texts."""

    number: int
    kind: str
    subject: int | None
    day: date
    occurred_at: datetime
    recorded_at: datetime
    facts: dict[str, Any]


@dataclass(frozen=True, slots=True, kw_only=True)
class HeadRecord:
    """The head of a journal: how many entries, the root over them, when the last was recorded."""

    size: int
    root: bytes
    recorded_at: datetime


def canonical(value: Any) -> bytes:
    """Return the canonical JSON of a value without floats (RFC 8785)."""
    written = _encode(value)
    # Among ASCII texts the order of code points is the order of UTF-16 units, and the standard
    # encoder, ten times as fast, gives the very bytes of the reference.
    return written.encode() if written.isascii() else rfc8785.dumps(value)


def facts_text(facts: Mapping[str, Fact]) -> str:
    """Return facts as the text that their column holds: sorted JSON, whole numbers as numbers."""
    return _encode(facts)


def commitment(*, salt: bytes, text: str) -> str:
    """Return what a leaf says of a free text: SHA-256 of its salt and its UTF-8, in hex."""
    return sha256(salt + text.encode()).hexdigest()


def leaf_bytes(
    *,
    draft: Draft,
    commitments: Mapping[str, str],
    journal_id: bytes,
    number: int,
    recorded_at: datetime,
    by: int,
    salt: bytes,
) -> bytes:
    """Return the canonical bytes of an entry's leaf.

    :param commitments: for each text of the draft, by name, its commitment.
    """
    return canonical(
        {
            "by": by,
            "day": draft.day.isoformat(),
            "device": draft.device,
            "facts": _in_leaf(draft.facts),
            "journal": journal_id.hex(),
            "key": draft.key,
            "kind": draft.kind,
            "number": number,
            "occurred_at": instant(draft.occurred_at),
            "postings": [
                {
                    "account": posting.account,
                    "amount": str(posting.amount),
                    "resource": posting.resource,
                    "unit": posting.unit,
                }
                for posting in draft.postings
            ],
            "recorded_at": instant(recorded_at),
            "reverses": draft.reverses,
            "salt": salt.hex(),
            "subject": draft.subject,
            "texts": dict(commitments),
        }
    )


def instant(at: datetime) -> str:
    """Return an aware instant in UTC with six decimals (RFC 3339)."""
    return at.astimezone(UTC).replace(tzinfo=None).isoformat(timespec="microseconds") + "Z"


def check_number(name: str, number: int) -> None:
    """Refuse what is not a whole number from 0 to 2^53 - 1.

    :raises MalformedDraft: if it is not.
    """
    if type(number) is not int or not 0 <= number <= NUMBER_MAX:
        raise MalformedDraft(field=name, why=f"{number!r} is not a whole number of 0 to 2^53 - 1")


def _in_leaf(fact: Fact) -> Any:
    if fact is None or isinstance(fact, bool):
        return fact
    if isinstance(fact, int):
        return str(fact)
    if isinstance(fact, str):
        return f"'{fact}" if _NUMBER_LIKE.fullmatch(fact) else fact
    if isinstance(fact, dict | Mapping):
        return {name: _in_leaf(inner) for name, inner in fact.items()}
    return [_in_leaf(inner) for inner in fact]


def _check_fact(name: str, fact: object) -> None:
    if isinstance(fact, str):
        _check_text(name, fact)
    elif fact is None or isinstance(fact, bool):
        return
    elif isinstance(fact, int):
        if not AMOUNT_MIN <= fact <= AMOUNT_MAX:
            raise MalformedDraft(field=name, why="the number is longer than 64 bits")
    elif isinstance(fact, dict | Mapping):
        for key, inner in fact.items():
            _check_text(name, key)
            _check_fact(f"{name}.{key}", inner)
    elif isinstance(fact, list | tuple):
        for inner in fact:
            _check_fact(name, inner)
    else:
        raise MalformedDraft(field=name, why=f"a {type(fact).__name__} cannot stand in a leaf")


def _check_word(name: str, word: str, *, longest: int) -> None:
    _check_text(name, word)
    if not word or len(word) > longest:
        raise MalformedDraft(field=name, why=f"it has {len(word)} signs; 1 to {longest} fit")


def _check_text(name: str, text: object) -> None:
    if not isinstance(text, str):
        raise MalformedDraft(field=name, why=f"{text!r} is not a text")
    # No database text holds NUL, and half of a surrogate pair has no UTF-8.
    if "\x00" in text or (
        not text.isascii() and any("\ud800" <= sign <= "\udfff" for sign in text)
    ):
        raise MalformedDraft(field=name, why="it holds a sign that cannot be stored")
