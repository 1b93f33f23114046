"""YAML text to a tree of texts, lists and mappings that know their line and column.

Every value stays the text it was written as: what ``no``, ``010`` or ``12:30:00`` means is for the
shape that asks for it to say, as in the YAML 1.2 failsafe schema, and never guessed here. There are
no anchors, aliases or tags, no key stands twice in a mapping, and size and depth are bounded.
"""

import re
from collections.abc import Iterator
from typing import Protocol

import yaml

from governance.bylaws import spelling, tree
from governance.bylaws.problems import Place, Problems

LARGEST_BYTES = 256 * 1024
DEEPEST = 20
MOST_VALUES = 10_000

_LINE_BREAK = re.compile(r"\r\n|\r|\n")
# Printable in YAML, less what PyYAML takes for a line break and no editor counts as one.
_REFUSED_CHARACTER = re.compile(
    "[^\\t\\x20-\\x7e\\xa0-\\u2027\\u202a-\\ud7ff\\ue000-\\ufefe\\uff00-\\ufffd"
    "\\U00010000-\\U0010ffff]"
)
_NULLS = ("", "~", "null", "Null", "NULL")
# The one key that may stand with nothing after it.
_BARE_KEYS = ("warning",)
_ACCEPTED_MARKUP = "'key: value' lines indented by spaces, with quotes around any odd text"


class _Mark(Protocol):
    @property
    def line(self) -> int: ...

    @property
    def column(self) -> int: ...


class _Stop(Exception):
    """The text cannot be read any further; why has been noted."""


def parse(*, text: str, problems: Problems) -> tree.Node | None:
    """Return the tree of a text, or None where nothing can be made of it.

    Whatever is wrong is noted in ``problems``.
    """
    text = text.removeprefix("\ufeff")
    if not _is_bounded(text, problems) or not _is_plain(text, problems):
        return None
    composer = _Composer(problems)
    try:
        for event in _events(text, problems):
            composer.take(event)
    except _Stop:
        return None
    if composer.root is None:
        problems.add(at=Place(1, 1), found="an empty text", accepted="a bylaw book")
    return composer.root


def _is_bounded(text: str, problems: Problems) -> bool:
    size = len(text.encode("utf-8", "surrogatepass"))
    if size > LARGEST_BYTES:
        problems.add(
            at=Place(1, 1), found=f"{size:,} bytes", accepted=f"at most {LARGEST_BYTES:,} bytes"
        )
    return size <= LARGEST_BYTES


def _is_plain(text: str, problems: Problems) -> bool:
    plain = True
    for number, line in enumerate(_LINE_BREAK.split(text), start=1):
        for found in _REFUSED_CHARACTER.finditer(line):
            plain = False
            problems.add(
                at=Place(number, found.start() + 1),
                found=f"the character U+{ord(found[0]):04X}",
                accepted="printable text",
            )
    return plain


def _events(text: str, problems: Problems) -> Iterator[yaml.Event]:
    """Yield the parser's events; note a mistake in the markup and stop there."""
    loader = yaml.SafeLoader(text)
    try:
        while loader.check_event():
            yield loader.get_event()  # type: ignore[no-untyped-call]
    except yaml.MarkedYAMLError as error:
        begun = error.context_mark
        where = f", {error.context} that begins on line {begun.line + 1}" if begun else ""
        found = f"a mistake in the YAML ({error.problem}{where})"
        _note_markup(problems, error.problem_mark or loader.get_mark(), found)
        raise _Stop from None
    except (ValueError, OverflowError):
        # The scanner makes numbers of escapes and directives without looking at their size.
        _note_markup(problems, loader.get_mark(), "an escape or a number that YAML does not have")
        raise _Stop from None
    finally:
        loader.dispose()


def _note_markup(problems: Problems, mark: _Mark | None, found: str) -> None:
    problems.add(at=_place(mark), found=found, accepted=_ACCEPTED_MARKUP)


def _place(mark: _Mark | None) -> Place:
    assert mark is not None, "whatever is read from a text has a mark"
    return Place(mark.line + 1, mark.column + 1)


class _Composer:
    """Builds the tree from events with a stack of its own, so that depth is ours to bound."""

    def __init__(self, problems: Problems) -> None:
        self.root: tree.Node | None = None
        self._problems = problems
        self._open: list[tree.Sequence | tree.Mapping] = []
        self._keys: list[tree.Scalar | None] = []
        self._documents = 0
        self._values = 0

    def take(self, event: yaml.Event) -> None:
        """Add what an event says to the tree."""
        place = _place(event.start_mark)
        if isinstance(event, yaml.DocumentStartEvent):
            self._begin_document(place)
        elif isinstance(event, yaml.NodeEvent):
            self._count(place)
            self._refuse_anchor_and_tag(event, place)
            self._begin(event, place)
        elif isinstance(event, yaml.CollectionEndEvent):
            self._put(self._close())

    def _begin_document(self, place: Place) -> None:
        self._documents += 1
        if self._documents > 1:
            self._problems.add(at=place, found="a second document", accepted="one book in a text")
            raise _Stop

    def _refuse_anchor_and_tag(self, event: yaml.NodeEvent, place: Place) -> None:
        if event.anchor is not None:
            self._problems.add(
                at=place,
                found=f"an anchor or alias {spelling.quoted(event.anchor)}",
                accepted="the text itself, written out",
            )
        tag = getattr(event, "tag", None)
        if tag is not None:
            self._problems.add(
                at=place, found=f"a tag {spelling.quoted(tag)}", accepted="a value, untagged"
            )

    def _count(self, place: Place) -> None:
        self._values += 1
        if self._values > MOST_VALUES:
            self._problems.add(
                at=place,
                found=f"more than {MOST_VALUES:,} keys and values",
                accepted=f"at most {MOST_VALUES:,}",
            )
            raise _Stop

    def _begin(self, event: yaml.NodeEvent, place: Place) -> None:
        if isinstance(event, yaml.ScalarEvent):
            self._put(self._scalar(event, place))
        elif isinstance(event, yaml.AliasEvent):
            self._put(tree.Scalar("", line=place.line, column=place.column, refused=True))
        else:
            self._begin_collection(event, place)

    def _scalar(self, event: yaml.ScalarEvent, place: Place) -> tree.Scalar:
        # A double-quoted text may bring in by an escape what the text itself may not hold.
        hidden = _REFUSED_CHARACTER.search(_LINE_BREAK.sub(" ", event.value))
        if hidden is not None:
            self._problems.add(
                at=place,
                found=f"an escape for the character U+{ord(hidden[0]):04X}",
                accepted="printable text",
            )
        return tree.Scalar(
            event.value,
            line=place.line,
            column=place.column,
            null=event.style is None and event.value in _NULLS,
            refused=hidden is not None,
        )

    def _begin_collection(self, event: yaml.NodeEvent, place: Place) -> None:
        if len(self._open) >= DEEPEST:
            self._problems.add(
                at=place,
                found=f"more than {DEEPEST} levels, one inside another",
                accepted=f"at most {DEEPEST}",
            )
            raise _Stop
        kind = tree.Sequence if isinstance(event, yaml.SequenceStartEvent) else tree.Mapping
        self._open.append(kind(line=place.line, column=place.column))
        self._keys.append(None)

    def _close(self) -> tree.Node:
        self._keys.pop()
        return self._open.pop()

    def _put(self, node: tree.Node) -> None:
        if not self._open:
            self.root = node
            return
        parent, key = self._open[-1], self._keys[-1]
        if isinstance(parent, tree.Sequence):
            parent.append(node)
        elif key is None:
            self._keys[-1] = self._key(parent, node)
        else:
            self._keys[-1] = None
            self._put_pair(parent, key, node)

    def _key(self, parent: tree.Mapping, node: tree.Node) -> tree.Scalar:
        if not isinstance(node, tree.Scalar):
            self._problems.add(at=node, found="a list or mapping as a key", accepted="a word")
            return tree.Scalar("", line=node.line, column=node.column, refused=True)
        if node in parent:
            self._problems.add(
                at=node,
                found=f"the key {spelling.quoted(node)} a second time in one mapping",
                accepted="each key once",
            )
            return tree.Scalar(node, line=node.line, column=node.column, refused=True)
        return node

    def _put_pair(self, parent: tree.Mapping, key: tree.Scalar, node: tree.Node) -> None:
        if isinstance(node, tree.Scalar) and node.null and key not in _BARE_KEYS:
            self._problems.add(
                at=node,
                found=f"nothing after the key {spelling.quoted(key)}",
                accepted="a value, or no such key",
            )
            node.refused = True
        # The first of two equal keys stands, and an impossible key is left out.
        if not key.refused:
            parent[key] = node
