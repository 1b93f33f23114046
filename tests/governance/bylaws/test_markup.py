"""What YAML allows and a book does not, and what is meant to do harm."""

import hashlib
import re
import time

import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from governance.bylaws import markup
from governance.bylaws.problems import MOST_PROBLEMS, UnreadableBook
from tests.governance.bylaws.small_book import BOOK, problems_of, read

REFUSED_MARKUP = {
    "alias": ("a: &a x\nb: *a\n", (1, 4), "an anchor or alias 'a'"),
    "aliases of aliases": (
        "a: &a [x, x]\nb: &b [*a, *a]\nc: &c [*b, *b]\n",
        (1, 4),
        "an anchor or alias 'a'",
    ),
    "alias of itself": ("a: &a [*a]\n", (1, 4), "an anchor or alias 'a'"),
    "merge key": ("a: &a {b: c}\nd: {<<: *a}\n", (1, 4), "an anchor or alias 'a'"),
    "python tag": (
        "a: !!python/object/apply:os.system [ls]\n",
        (1, 4),
        "a tag 'tag:yaml.org,2002:python/object/apply:os.system'",
    ),
    "local tag": ("a: !withdraw 3\n", (1, 4), "a tag '!withdraw'"),
    "key twice": ("a: 1\nb: 2\na: 3\n", (3, 1), "the key 'a' a second time"),
    "key twice within": ("a: {b: 1, b: 2}\n", (1, 11), "the key 'b' a second time"),
    "list as key": ("a: 1\n? [b]\n: c\n", (2, 3), "a list or mapping as a key"),
    "two documents": ("a: 1\n---\nb: 2\n", (2, 1), "a second document"),
    "colon within": ("a: b: c\n", (1, 5), "a mistake in the YAML"),
    "tab for indent": ("a:\n\tb: c\n", (2, 1), "a mistake in the YAML"),
    "open quote": ('a: "b\n', (2, 1), "a mistake in the YAML"),
    "open bracket": ("a: [b\n", (2, 1), "a mistake in the YAML"),
    "NUL": ("a: b\nc: \0\n", (2, 4), "the character U+0000"),
    "escaped NUL": ('a: "b\\0"\n', (1, 4), "an escape for the character U+0000"),
    "control character": ("a: \x1b[31m\n", (1, 4), "the character U+001B"),
    "next line": ("a: b\x85c: d\n", (1, 5), "the character U+0085"),
    "line separator": ("a: b\u2028c: d\n", (1, 5), "the character U+2028"),
    "lone surrogate": ("a: \ud800\n", (1, 4), "the character U+D800"),
    "escaped surrogate": ('a: "\\ud800"\n', (1, 4), "an escape for the character U+D800"),
    "no such character": (
        'a: "\\UFFFFFFFF"\n',
        (1, 7),
        "an escape or a number that YAML does not have",
    ),
    "endless version": (
        "%YAML " + "9" * 5_000 + ".1\n---\na: b\n",
        (1, 7),
        "an escape or a number that YAML does not have",
    ),
    "brackets within brackets": ("a: " + "[" * 100_000, (1, 23), "more than 20 levels"),
    "braces within braces": ("{a: " * 50_000, (1, 81), "more than 20 levels"),
    "dashes within dashes": ("- " * 100_000, (1, 41), "more than 20 levels"),
    "deep indents": (
        "\n".join(" " * depth + "a:" for depth in range(400)),
        (21, 21),
        "more than 20 levels",
    ),
    "many values": (
        "a: [" + "b," * 100_000 + "]",
        (1, 5 + 2 * (markup.MOST_VALUES - 3)),
        "more than 10,000 keys and values",
    ),
    "too long": ("# " + "é" * 131_072, (1, 1), "262,146 bytes"),
    "nothing": ("", (1, 1), "an empty text"),
    "only a remark": ("# nothing\n", (1, 1), "an empty text"),
}


@pytest.mark.parametrize("case", REFUSED_MARKUP)
def test_what_yaml_allows_and_a_book_does_not_is_refused_in_place_and_soon(case: str) -> None:
    text, place, said = REFUSED_MARKUP[case]
    begun = time.perf_counter()
    found = problems_of(text)
    assert time.perf_counter() - begun < 2
    # The shape of a book is wrong in most of these texts too, and is named beside the markup.
    (problem,) = [each for each in found if each.found.startswith(said)][:1]
    assert (problem.line, problem.column) == place


@pytest.mark.parametrize(
    "text",
    [
        "\n".join(f"k{number}: 1" for number in range(4_000)),
        "k: 1\n" * 20_000,
        "clauses:\n" + "- {}\n" * 4_000,
        BOOK.replace("ladders:", "ladders:\n" + "".join(f"  o{n}: {{}}\n" for n in range(3_000))),
    ],
    ids=["unknown keys", "one key", "empty clauses", "empty ladders"],
)
def test_problems_without_end_are_cut_off(text: str) -> None:
    begun = time.perf_counter()
    assert len(problems_of(text)) == MOST_PROBLEMS
    assert time.perf_counter() - begun < 5


def test_a_long_list_of_names_is_read_in_time() -> None:
    zones = ", ".join(f"z{number}" for number in range(9_000))
    begun = time.perf_counter()
    read(BOOK.replace("zones: [north_bar]", f"zones: [{zones}]"))
    assert time.perf_counter() - begun < 5


_PIECES = st.sampled_from(
    [
        *("[", "]", "{", "}", ":", ",", "&a", "*a", "!t", "|", ">", "'", '"', "%", "@", "`", "#"),
        *("?", "-", "\n", " ", "\t", "~", "\\", "\0", "---\n", "...\n", "<<: ", "\n  - "),
        *('"\\x', "%TAG ! x\n", "\ud800", "null", "\u2028", "0", "kind: ", "\r", "é", "|2\n"),
    ]
)


@settings(max_examples=150, deadline=None)
@given(
    at=st.integers(min_value=0, max_value=len(BOOK)),
    drop=st.integers(min_value=0, max_value=30),
    pieces=st.lists(_PIECES, max_size=4).map("".join),
)
def test_any_text_is_read_or_refused_with_a_place(at: int, drop: int, pieces: str) -> None:
    text = BOOK[:at] + pieces + BOOK[at + drop :]
    try:
        book = read(text)
    except UnreadableBook as refused:
        lines = text.count("\n") + text.count("\r") + 2
        assert refused.problems
        assert all(1 <= each.line <= lines and each.column >= 1 for each in refused.problems)
    else:
        assert book.digest == hashlib.sha256(text.encode()).hexdigest()


_VALUES = tuple(re.finditer(r"(?<=: )[^\n,{}\[\]]+|\{[^{}\n]*\}|\[[^\n]*?\]", BOOK))


@pytest.mark.parametrize("instead", ["[]", "{}", "x", "[[x]]", "{a: b}", "{kind: {a: b}}", "~"])
def test_any_value_may_be_of_any_shape_and_is_refused_where_it_stands(instead: str) -> None:
    for value in _VALUES:
        text = BOOK[: value.start()] + instead + BOOK[value.end() :]
        line = BOOK.count("\n", 0, value.start()) + 1
        try:
            read(text)
        except UnreadableBook as refused:
            assert line in [each.line for each in refused.problems], (value[0], instead)
