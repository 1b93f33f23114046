"""What the reading of one book knows, and how a part of it is refused.

Names are checked against what the same book declares; where that could not be made out, any name
passes, so that one mistake is not reported twice.
"""

from collections.abc import Mapping
from dataclasses import dataclass

from pydantic import ValidationInfo
from pydantic_core import PydanticCustomError

from governance import quantities
from governance.bylaws import spelling
from governance.bylaws.problems import Problems


@dataclass(frozen=True, slots=True, kw_only=True)
class Reading:
    """What the reading of one book knows so far; None where a part could not be made out.

    ``resources`` maps a resource to its base unit, where that is known.
    """

    problems: Problems
    resources: Mapping[str, str | None] | None
    classes: frozenset[str] | None
    ladders: frozenset[str] | None
    money: str | None

    def base_of(self, resource: str | None) -> str | None:
        """Return the base unit of a resource, where both could be made out."""
        return None if self.resources is None else self.resources.get(resource or "")


def reading_of(info: ValidationInfo) -> Reading:
    """Return the reading that a validation belongs to."""
    assert isinstance(info.context, Reading), "every shape is validated within a reading"
    return info.context


def refusal(
    *,
    accepted: str,
    found: str | None = None,
    near: str | None = None,
    at: str | None = None,
) -> PydanticCustomError:
    """Return the error for a value that is not accepted.

    :param found: what was found, where it is not the text of the value itself.
    :param at: the key whose value is refused, where the error is raised for a whole mapping.
    """
    facts = {"accepted": accepted, "found": found, "nearest": near, "at": at}
    return PydanticCustomError("refused", "{accepted} is accepted", facts)


def check_converts(unit: str, base: str) -> None:
    """Refuse a unit that does not convert to a base unit.

    :raises PydanticCustomError: if the two measure different things.
    """
    measured = quantities.unit(base).measures
    if quantities.unit(unit).measures != measured:
        alike = [each.code for each in quantities.UNITS.values() if each.measures == measured]
        raise refusal(accepted=f"a unit that converts to {base!r}, one of {spelling.choice(alike)}")
