"""The tree of a book's text: texts, lists and mappings that know their line and column.

They are builtin texts, lists and dicts with a place, so that whoever reads a value can still say
where it stands. ``refused`` marks a piece that has been reported on already.
"""

from typing import TypeAlias

from governance.bylaws import spelling


class Scalar(str):
    """A text as written, with its place; ``null`` if nothing was written."""

    line: int
    column: int
    null: bool
    refused: bool

    def __new__(
        cls, text: str, *, line: int, column: int, null: bool = False, refused: bool = False
    ) -> "Scalar":
        """Return a text with its place."""
        scalar = super().__new__(cls, text)
        scalar.line, scalar.column = line, column
        scalar.null, scalar.refused = null, refused
        return scalar


class Sequence(list["Node"]):
    """A list with its place."""

    def __init__(self, *, line: int, column: int) -> None:
        super().__init__()
        self.line, self.column, self.refused = line, column, False


class Mapping(dict[Scalar, "Node"]):
    """A mapping with its place; its keys know theirs."""

    def __init__(self, *, line: int, column: int) -> None:
        super().__init__()
        self.line, self.column, self.refused = line, column, False

    def value(self, key: str) -> "Node | None":
        """Return the value of a key, or None where the key is missing."""
        return self.get(key)  # type: ignore[call-overload, no-any-return]

    def only(self, keys: tuple[str, ...]) -> "Mapping":
        """Return the mapping, at its place, with no other keys than these."""
        kept = Mapping(line=self.line, column=self.column)
        kept.update({key: value for key, value in self.items() if key in keys})
        return kept

    def filled(self, key: str) -> "Mapping":
        """Return the mapping with an empty mapping where nothing was written after a key."""
        kept = Mapping(line=self.line, column=self.column)
        for each, value in self.items():
            bare = each == key and isinstance(value, Scalar) and value.null
            kept[each] = Mapping(line=value.line, column=value.column) if bare else value
        return kept


Node: TypeAlias = Scalar | Sequence | Mapping


def described(node: object) -> str:
    """Say what stands at a place, for a message."""
    if isinstance(node, Scalar):
        return "nothing" if node.null else spelling.quoted(node)
    return "a list" if isinstance(node, list) else "a mapping"
