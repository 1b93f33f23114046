"""Drafts refuse what cannot be held; leaf bytes are canonical JSON (RFC 8785)."""

import json
import struct
from collections.abc import Mapping
from datetime import UTC, date, datetime, timedelta, timezone
from hashlib import sha256
from types import MappingProxyType
from typing import Any

import pytest
import rfc8785
from hypothesis import given
from hypothesis import strategies as st

from ledger.journal import leaves
from tests.ledger.journal.drafts import DAY, NOON, draft

# RFC 8785; repository cyberphone/json-canonicalization, testdata (values.json).
VALUES_INPUT = r"""{
  "numbers": [1E30, 4.50, 333333333.33333329, 2e-3, 0.000000000000000000000000001],
  "escaping": "\u20ac$\u000F\u000aA'\u0042\u0022\u005c\\\"\/",
  "literals": [null, true, false]
}"""
VALUES_OUTPUT = (
    r'{"escaping":"€$\u000f\nA' + r"""'B\"\\\\\"/","literals":[null,true,false],"""
    '"numbers":[1e+30,4.5,333333333.3333333,0.002,1e-27]}'
)
# RFC 8785, appendix B.
NUMBERS = {
    "0000000000000000": "0",
    "8000000000000000": "0",
    "0000000000000001": "5e-324",
    "7fefffffffffffff": "1.7976931348623157e+308",
    "4340000000000000": "9007199254740992",
    "4430000000000000": "295147905179352830000",
    "44b52d02c7e14af6": "1e+23",
    "444b1ae4d6e2ef50": "1e+21",
    "3eb0c6f7a0b5ed8d": "0.000001",
    "41b3de4355555555": "333333333.3333333",
    "43143ff3c1cb0959": "1424953923781206.2",
}

_numbers = st.integers(leaves.AMOUNT_MIN, leaves.AMOUNT_MAX)
# Signs that canonical JSON treats apart: escapes, and signs past U+FFFF that sort before U+E000.
_texts = st.text("aZ09'-/\"\\\n\t\x01\x1f\x7fé€\ue000\uffff\U0001f41f", max_size=6)
_facts = st.recursive(
    st.none()
    | st.booleans()
    | _numbers
    | _texts
    | st.from_regex(r"'{0,2}-?[0-9]{1,3}", fullmatch=True),
    lambda inner: st.lists(inner, max_size=3) | st.dictionaries(_texts, inner, max_size=3),
    max_leaves=6,
)


def _leaf(given: leaves.Draft) -> bytes:
    return leaves.leaf_bytes(
        draft=given,
        commitments={"note": "ab" * 32},
        journal_id=bytes(range(16)),
        number=7,
        recorded_at=NOON,
        by=3,
        salt=bytes(16),
    )


def test_the_published_sample_jc_01() -> None:
    written = rfc8785.dumps(json.loads(VALUES_INPUT))
    assert written == VALUES_OUTPUT.encode()
    assert (len(written.decode()), len(written)) == (118, 120)
    assert (
        sha256(written).hexdigest()
        == "0af3685dce30daa753153aadb1956b0f3133642fbe5d4a5e3a4267f94814ba87"
    )


def test_texts_and_literals_of_the_sample_through_our_own_door_jc_01() -> None:
    sample = json.loads(VALUES_INPUT)
    del sample["numbers"]
    assert leaves.canonical(sample) == (VALUES_OUTPUT.split(',"numbers"')[0] + "}").encode()


@pytest.mark.parametrize(("bits", "text"), NUMBERS.items(), ids=NUMBERS)
def test_published_numbers_jc_02(bits: str, text: str) -> None:
    (number,) = struct.unpack(">d", bytes.fromhex(bits))
    assert rfc8785.dumps(number).decode() == text


@pytest.mark.parametrize("number", [float("nan"), float("inf"), float("-inf")])
def test_what_is_no_number_is_refused_jc_03(number: float) -> None:
    with pytest.raises(rfc8785.FloatDomainError):
        rfc8785.dumps(number)
    with pytest.raises(ValueError, match="not JSON compliant"):
        leaves.canonical({"n": number})
    with pytest.raises(leaves.MalformedDraft, match="a float cannot stand in a leaf"):
        draft(facts={"n": number})


@given(facts=st.dictionaries(_texts, _facts, max_size=4))
def test_leaf_bytes_are_those_of_the_reference(facts: dict[str, Any]) -> None:
    written = _leaf(draft(facts=facts))
    assert written == rfc8785.dumps(json.loads(written))


@given(value=st.dictionaries(_texts, st.integers(-(2**53) + 1, 2**53 - 1) | _texts, max_size=5))
def test_canonical_is_the_reference(value: dict[str, Any]) -> None:
    assert leaves.canonical(value) == rfc8785.dumps(value)


@given(one=_facts, other=_facts)
def test_different_facts_give_different_leaves(one: Any, other: Any) -> None:
    # JSON texts tell True from 1, which Python does not.
    same = json.dumps(one, sort_keys=True) == json.dumps(other, sort_keys=True)
    assert (_leaf(draft(facts={"f": one})) == _leaf(draft(facts={"f": other}))) == same


@given(facts=st.dictionaries(_texts, _facts, max_size=4))
def test_facts_come_back_as_they_went_in(facts: dict[str, Any]) -> None:
    assert json.loads(leaves.facts_text(facts)) == facts


def test_any_mapping_will_do() -> None:
    inner: Mapping[str, Any] = MappingProxyType({"b": (1, 2), "a": MappingProxyType({})})
    assert leaves.facts_text(inner) == '{"a":{},"b":[1,2]}'
    assert _leaf(draft(facts=inner)) == _leaf(draft(facts={"a": {}, "b": [1, 2]}))


def test_every_column_stands_in_the_leaf() -> None:
    given = draft(
        facts={"count": 2**53, "code": "17", "yes": True, "none": None, "list": [1, "a"]},
        key="k-1",
        device="phone",
        subject=12,
        reverses=4,
        occurred_at=datetime(2026, 3, 1, 12, 0, tzinfo=timezone(timedelta(hours=2))),
    )
    assert json.loads(_leaf(given)) == {
        "by": 3,
        "day": "2026-03-01",
        "device": "phone",
        "facts": {
            "count": "9007199254740992",
            "code": "'17",
            "yes": True,
            "none": None,
            "list": ["1", "a"],
        },
        "journal": "000102030405060708090a0b0c0d0e0f",
        "key": "k-1",
        "kind": "withdrawal",
        "number": 7,
        "occurred_at": "2026-03-01T10:00:00.000000Z",
        "postings": [
            {"account": "taken:mullet:17", "amount": "500", "resource": "mullet", "unit": "g"},
            {"account": "pool:mullet", "amount": "-500", "resource": "mullet", "unit": "g"},
        ],
        "recorded_at": "2026-03-01T12:00:00.000000Z",
        "reverses": 4,
        "salt": "00" * 16,
        "subject": 12,
        "texts": {"note": "ab" * 32},
    }


def test_a_commitment_is_the_digest_of_salt_and_text() -> None:
    # SHA-256 of "abc" (FIPS 180-2, appendix B.1), split into salt and text.
    assert leaves.commitment(salt=b"a", text="bc") == (
        "ba7816bf8f01cfea414140de5dae2223b00361a396177a9cb410ff61f20015ad"
    )


@pytest.mark.parametrize(
    ("changes", "field"),
    [
        ({"occurred_at": datetime(2026, 3, 1, 9)}, "occurred_at"),  # noqa: DTZ001
        ({"day": datetime(2026, 3, 1, tzinfo=UTC)}, "day"),
        ({"kind": ""}, "kind"),
        ({"kind": 5}, "kind"),
        ({"kind": "k" * 65}, "kind"),
        ({"key": ""}, "key"),
        ({"key": "k" * 256}, "key"),
        ({"device": "a\x00b"}, "device"),
        ({"subject": -1}, "subject"),
        ({"subject": True}, "subject"),
        ({"reverses": 2**53}, "reverses"),
        ({"facts": {"n": 1.5}}, "facts.n"),
        ({"facts": {"n": 2**63}}, "facts.n"),
        ({"facts": {"deep": [{"n": b"x"}]}}, "facts.deep.n"),
        ({"facts": {1: 2}}, "facts"),
        ({"facts": {"n": "\ud800"}}, "facts.n"),
        ({"facts": {"n": "a\x00"}}, "facts.n"),
        ({"texts": {"note": "a\x00"}}, "note"),
        ({"texts": {"": "a"}}, "the name of a text"),
        ({"postings": (leaves.Posting(account="", resource="r", unit="g", amount=0),)}, "account"),
    ],
)
def test_what_no_entry_can_hold_is_refused(changes: dict[str, Any], field: str) -> None:
    with pytest.raises(leaves.MalformedDraft) as refused:
        draft(**changes)
    assert refused.value.facts["field"] == field


def test_the_longest_that_fits_is_taken() -> None:
    taken = draft(kind="k" * 64, key="k" * 255, facts={"n": 2**63 - 1}, subject=2**53 - 1)
    assert taken.day == DAY == date(2026, 3, 1)
