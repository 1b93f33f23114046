"""Cells that more than one table needs."""

from fractions import Fraction

from ledger.reports import numbers, outline
from ledger.reports.figures import ResourceFigures
from ledger.reports.outline import Cell

RESOURCES_ACROSS = 2
"""A table of members with more resources side by side does not fit across a sheet of A4."""


def in_unit(resource: ResourceFigures) -> str:
    """Return the heading of a resource's amounts: its name and unit."""
    return f"{numbers.sentence_case(resource.name)}, {numbers.unit_word(resource.unit)}"


def amount(resource: ResourceFigures, value: int) -> Cell:
    """Return a cell of an amount of a resource."""
    return outline.amount(value, base=resource.base, unit=resource.unit)


def part(value: int, whole: int) -> Fraction | None:
    """Return what share one number is of another, or None of nothing."""
    return Fraction(value, whole) if whole else None
