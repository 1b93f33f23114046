"""Whom a new fact can touch."""

from governance import facts


def touched(*, roster: facts.Roster, members: frozenset[int]) -> frozenset[int]:
    """Return the members whom a new fact about these can touch: they and their households.

    Numbers that the roster does not hold touch nobody.
    """
    households = {each.household for each in roster.members if each.number in members}
    return frozenset(each.number for each in roster.members if each.household in households)
