"""A finding: a breach as computed from recorded facts, accusing nobody."""

import enum
from dataclasses import dataclass

from governance.periods import DateRange


class SubjectKind(enum.StrEnum):
    """Whom a finding is about."""

    MEMBER = "member"
    HOUSEHOLD = "household"


@dataclass(frozen=True, slots=True, kw_only=True, order=True)
class Key:
    """What makes two computations versions of one finding; ``resource`` is empty for a duty."""

    clause: str
    subject_kind: SubjectKind
    subject: int
    resource: str
    window: DateRange


@dataclass(frozen=True, slots=True, kw_only=True)
class Finding:
    """A clause, a subject and a window in which the clause was not kept.

    ``total``, ``limit``, ``breach`` and ``overuse`` are in ``base`` units. ``overuse`` is what lies
    beyond the limit, the base of what is given back; ``breach`` what lies beyond the limit and its
    tolerance, the base of a fine. ``entries`` are the journal numbers it rests on, ``working`` the
    arithmetic in sentences, ``inputs`` the SHA-256 (hex) of the edition and the facts used.
    """

    key: Key
    edition: int
    or_else: str | None
    base: str
    total: int
    limit: int
    breach: int
    overuse: int
    entries: tuple[int, ...]
    working: tuple[str, ...]
    inputs: str
