"""Whole base units out of exact weights, so that the parts sum to the total."""

import heapq
import math
from collections.abc import Iterable, Sequence
from dataclasses import dataclass
from fractions import Fraction
from typing import ClassVar, assert_never

from governance.bylaws import clauses
from governance.errors import StintbookError

# Every split names this: where two holders have the same claim to a unit, who gets it.
TIE_BREAK = "equal claims go to the lower holder number"


class NegativeTotal(StintbookError):
    """A total below nothing cannot be split."""

    code: ClassVar[str] = "apportionment.negative_total"
    message: ClassVar[str] = "Found a total of {total}; accepted is 0 or more."


class NegativeWeight(StintbookError):
    """A holder's weight lies below nothing."""

    code: ClassVar[str] = "apportionment.negative_weight"
    message: ClassVar[str] = "Holder {holder} has the weight {weight}; accepted is 0 or more."


class NobodyToHold(StintbookError):
    """There is something to split and nobody with a weight."""

    code: ClassVar[str] = "apportionment.nobody_to_hold"
    message: ClassVar[str] = "No holder has a weight above 0, so {total} cannot be split."


class DuplicateHolder(StintbookError):
    """A holder stands more than once among the weights."""

    code: ClassVar[str] = "apportionment.duplicate_holder"
    message: ClassVar[str] = "Holder {holder} stands more than once; accepted is one weight each."


@dataclass(frozen=True, slots=True, kw_only=True)
class _Claim:
    """A holder's weight, scaled with all the others to a whole number."""

    holder: int
    weight: int


def apportion(
    *, total: int, weights: Sequence[tuple[int, Fraction]], how: clauses.Apportionment
) -> dict[int, int]:
    """Return each holder's part in whole base units, in order of holder number.

    The parts sum to ``total`` exactly, whatever the order of ``weights``; a holder with no weight
    gets nothing; equal claims go to the lower holder number. The time taken grows with the number
    of holders, not with the total. The methods: Balinski & Young, *Fair Representation* (1982).

    :param weights: pairs of holder number and weight.
    :raises NegativeTotal: if the total lies below 0.
    :raises DuplicateHolder: if a holder has two weights.
    :raises NegativeWeight: if a weight lies below 0.
    :raises NobodyToHold: if the total is positive and no weight is.
    """
    _check(total=total, weights=weights)
    parts = dict.fromkeys(sorted(holder for holder, _ in weights), 0)
    if total == 0:
        return parts
    claims = _whole(weights)
    match how:
        case clauses.Apportionment.LARGEST_REMAINDER:
            parts.update(_by_largest_remainder(total, claims))
        case clauses.Apportionment.WEBSTER:
            parts.update(_by_divisors(total, claims, first_divisor=1))
        case clauses.Apportionment.JEFFERSON:
            parts.update(_by_divisors(total, claims, first_divisor=2))
        case _:
            assert_never(how)
    return parts


def _check(*, total: int, weights: Iterable[tuple[int, Fraction]]) -> None:
    if total < 0:
        raise NegativeTotal(total=total)
    seen: set[int] = set()
    anybody = False
    for holder, weight in weights:
        if holder in seen:
            raise DuplicateHolder(holder=holder)
        if weight < 0:
            raise NegativeWeight(holder=holder, weight=weight)
        seen.add(holder)
        anybody = anybody or weight > 0
    if total > 0 and not anybody:
        raise NobodyToHold(total=total)


def _whole(weights: Sequence[tuple[int, Fraction]]) -> tuple[_Claim, ...]:
    """Return the positive weights as whole numbers in the same proportions, by holder number."""
    common = math.lcm(*(weight.denominator for _, weight in weights))
    return tuple(
        _Claim(holder=holder, weight=weight.numerator * (common // weight.denominator))
        for holder, weight in sorted(weights)
        if weight > 0
    )


def _by_largest_remainder(total: int, claims: Sequence[_Claim]) -> dict[int, int]:
    weight_sum = sum(claim.weight for claim in claims)
    parts: dict[int, int] = {}
    remainders: list[tuple[int, int]] = []
    for claim in claims:
        parts[claim.holder], remainder = divmod(total * claim.weight, weight_sum)
        remainders.append((-remainder, claim.holder))
    left = total - sum(parts.values())
    for _, holder in sorted(remainders)[:left]:
        parts[holder] += 1
    return parts


def _by_divisors(total: int, claims: Sequence[_Claim], *, first_divisor: int) -> dict[int, int]:
    """Return the parts by the method whose divisors rise by 2 from ``first_divisor``.

    Divisors 1, 3, 5 ... are Webster's; 2, 4, 6 ... order the claims as Jefferson's 1, 2, 3 ... do.
    Unit by unit, the next one goes to the largest weight / divisor. The units whose quotient
    reaches a bound come before all the others, so they can be counted at once: with the bound
    2 × (sum of weights) / ``sure`` they never pass the total, as rounding adds at most half a unit
    (Webster) or nothing (Jefferson) to a holder. Fewer units than holders then remain, and those
    are given one at a time.
    """
    rounding = 2 - first_divisor
    weight_sum = sum(claim.weight for claim in claims)
    sure = max(0, 2 * total - rounding * len(claims))
    parts = {
        claim.holder: (claim.weight * sure + rounding * weight_sum) // (2 * weight_sum)
        for claim in claims
    }
    weight_of = {claim.holder: claim.weight for claim in claims}

    def claim_to_next(holder: int) -> tuple[Fraction, int]:
        return Fraction(-weight_of[holder], 2 * parts[holder] + first_divisor), holder

    queue = [claim_to_next(holder) for holder in parts]
    heapq.heapify(queue)
    for _ in range(total - sum(parts.values())):
        _, holder = queue[0]
        parts[holder] += 1
        heapq.heapreplace(queue, claim_to_next(holder))
    return parts
