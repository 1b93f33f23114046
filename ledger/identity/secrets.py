"""Secrets that are shown once and kept as a digest: long enough that nobody can try them out."""

import base64
import hashlib

from ledger.foundation.clocks import Chance

# 160 bits: a plain digest suffices, for there is nothing to guess.
SECRET_BYTES = 20


def new(chance: Chance) -> str:
    """Return a new secret in letters and digits that are hard to confuse when typed from paper."""
    return base64.b32encode(chance(SECRET_BYTES)).decode("ascii").lower()


def digest(secret: str) -> bytes:
    """Return what is kept of a secret."""
    return hashlib.sha256(secret.encode("utf-8")).digest()


def as_typed(secret: str) -> str:
    """Return a secret as it was made, from how somebody typed it off paper."""
    return "".join(sign for sign in secret.lower() if sign.isalnum())


def in_groups(secret: str) -> str:
    """Return a secret as it is printed: in groups of four, which the eye can hold."""
    return " ".join(secret[place : place + 4] for place in range(0, len(secret), 4))
