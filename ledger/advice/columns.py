"""An advice between the row that keeps it and the record that the rules make."""

import hashlib
import json
from typing import Any

from pydantic import TypeAdapter

from governance.advice.records import Advice

_ADVICE = TypeAdapter(Advice)


def plain(advice: Advice) -> dict[str, Any]:
    """Return an advice as JSON can keep it; it reads back the same."""
    kept: dict[str, Any] = _ADVICE.dump_python(advice, mode="json")
    return kept


def advice(kept: dict[str, Any]) -> Advice:
    """Return the advice that was kept."""
    return _ADVICE.validate_python(kept)


def digest(kept: dict[str, Any]) -> str:
    """Return the SHA-256, in hex, of an advice as kept."""
    text = json.dumps(kept, sort_keys=True, ensure_ascii=False, separators=(",", ":"))
    return hashlib.sha256(text.encode()).hexdigest()
