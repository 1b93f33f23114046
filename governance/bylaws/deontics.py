"""The *must*, *must not* or *may* of a clause: each kind carries its own, or none.

The deontic and the aim of the institutional grammar (Crawford & Ostrom 1995) stand as one key and
one verb, such as ``must_not: withdraw``, so that a clause cannot forbid what its kind demands.
"""

from governance.bylaws import context, shapes, spelling, tree

_DEONTICS = ("must", "must_not", "may")


def checked(
    *, node: tree.Mapping, shape: type[shapes.ClauseShape], reading: context.Reading
) -> tree.Mapping:
    """Note a wrong or missing *must*, *must not* or *may*; return the clause without it."""
    kind = str(node.value("kind"))
    said = [key for key in node if key in _DEONTICS or _is_deontic_misspelt(key, shape)]
    if shape.deontic is None:
        for key in said:
            reading.problems.add(
                at=key,
                found=f"the key {spelling.quoted(key)}",
                accepted=f"none of {spelling.choice(_DEONTICS)} in a clause of kind {kind!r}",
            )
    else:
        _check_deontic(node, said, shape.deontic, kind, reading)
    return node.only(tuple(key for key in node if key not in said))


def _is_deontic_misspelt(key: str, shape: type[shapes.ClauseShape]) -> bool:
    known = (*_DEONTICS, *shape.keys())
    return key not in shape.keys() and spelling.nearest(key, known) in _DEONTICS


def _check_deontic(
    node: tree.Mapping,
    said: list[tree.Scalar],
    deontic: tuple[str, str],
    kind: str,
    reading: context.Reading,
) -> None:
    expected, verb = deontic
    accepted = f"'{expected}: {verb}' in a clause of kind {kind!r}"
    if not said:
        reading.problems.add(at=node, found=f"no {expected!r}", accepted=accepted)
    for key in said:
        value = node[key]
        if key == expected and value == verb:
            continue
        written = f"{key}: {value}" if isinstance(value, tree.Scalar) else f"{key}: …"
        near = (
            spelling.nearest(str(value), [verb])
            if key == expected
            else spelling.nearest(key, [expected])
        )
        reading.problems.add(
            at=value if key == expected else key,
            found=spelling.quoted(written),
            accepted=accepted,
            nearest=near,
        )
