"""What a book declares, made out of its tree before any shape is checked.

A clause may name a resource, a class or a ladder that stands further down, and one of them may
itself be wrong; so names are gathered first, and loosely.
"""

from governance import quantities
from governance.bylaws import context, tree
from governance.bylaws.problems import Problems


def gathered(*, root: tree.Node, problems: Problems) -> context.Reading:
    """Return what a book declares; None stands for a part that could not be made out."""
    if not isinstance(root, tree.Mapping):
        return context.Reading(
            problems=problems, resources=None, classes=None, ladders=None, money=None
        )
    return context.Reading(
        problems=problems,
        resources=_resources(root.value("resources")),
        classes=_classes(root.value("clauses")),
        ladders=_ladders(root.value("ladders")),
        money=_money(root.value("money")),
    )


def _resources(node: tree.Node | None) -> dict[str, str | None] | None:
    if not isinstance(node, tree.Mapping):
        return None
    return {str(name): _base(units) for name, units in node.items()}


def _base(units: tree.Node) -> str | None:
    if not isinstance(units, tree.Mapping):
        return None
    known = [
        quantities.UNITS[code]
        for code in (units.value("unit"), units.value("base"))
        if isinstance(code, tree.Scalar) and code in quantities.UNITS
    ]
    agreed = len(known) == 2 and known[0].measures == known[1].measures
    return known[1].code if agreed else None


def _classes(node: tree.Node | None) -> frozenset[str] | None:
    if not isinstance(node, tree.Sequence):
        return None
    found: set[str] = set()
    for clause in node:
        if not isinstance(clause, tree.Mapping) or clause.value("kind") != "membership":
            continue
        classes = _classes_of(clause.value("what"))
        if classes is None:
            return None
        found |= classes
    return frozenset(found)


def _classes_of(what: tree.Node | None) -> set[str] | None:
    listed = what.value("classes") if isinstance(what, tree.Mapping) else None
    if not isinstance(listed, tree.Sequence):
        return None
    return {str(each) for each in listed if isinstance(each, tree.Scalar)}


def _ladders(node: tree.Node | None) -> frozenset[str] | None:
    if node is None:
        return frozenset()
    return frozenset(map(str, node)) if isinstance(node, tree.Mapping) else None


def _money(node: tree.Node | None) -> str | None:
    known = isinstance(node, tree.Scalar) and node in quantities.CURRENCY_PLACES
    return str(node) if known else None
