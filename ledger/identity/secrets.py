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
