"""Tables as lines of plain text: what fits across, and what a table does that does not."""

from fractions import Fraction

from ledger.reports import outline, text
from ledger.reports.outline import Cell, Sheet, Table


def _table(
    columns: tuple[str, ...],
    *rows: tuple[Cell, ...],
    groups: tuple[tuple[str, int], ...] = (),
    note: str = "",
    looks: str = "",
) -> Table:
    return Table(
        sheet=Sheet.SUMMARY,
        caption="A table",
        columns=columns,
        rows=rows,
        empty="Nothing.",
        groups=groups,
        note=note,
        looks=looks,
    )


def _wide(*, idle: int) -> Table:
    """Ten columns of long titles beside a name; those at two places hold the same number."""
    names = [f"A rather long title {place}" for place in range(10)]
    cells = [outline.count(idle if place in (3, 7) else place + 1) for place in range(10)]
    return _table(
        ("Name", *names),
        (outline.text("somebody"), *cells),
        groups=(("", 1), ("The first half", 5), ("The second half", 5)),
        note="A note.",
    )


class TestTableLines:
    def test_words_stand_to_the_left_and_numbers_to_the_right(self) -> None:
        table = _table(
            ("Zone", "Slips"),
            (outline.text("Outer Bay"), outline.count(7)),
            (outline.text("Bar"), outline.count(1_204)),
        )
        assert list(text.table_lines(table)) == [
            "  Zone       Slips",
            "  ---------  -----",
            "  Outer Bay      7",
            "  Bar        1,204",
        ]

    def test_a_table_that_fits_keeps_its_noughts(self) -> None:
        table = _table(("Clause", "Withdrawn"), (outline.text("3.1"), outline.count(0)))
        assert list(text.table_lines(table))[-1] == "  3.1             0"

    def test_one_that_is_too_wide_leaves_noughts_out_and_says_so(self) -> None:
        lines = list(text.table_lines(_wide(idle=0)))
        assert max(map(len, lines)) <= text.WIDTH
        said = " ".join(" ".join(lines).split())
        assert "A note. Left out, as 0 in every row: A rather long title 3, A rather" in said
        body = next(line for line in lines if "somebody" in line)
        assert body.split() == ["somebody", "1", "2", "3", "5", "6", "7", "9", "10"]

    def test_titles_over_runs_follow_what_is_left_out(self) -> None:
        lines = list(text.table_lines(_wide(idle=0)))
        titles, rule = lines[0], next(line for line in lines if set(line) <= {" ", "-"})
        # The name and four of the first five columns come before the second half begins.
        runs = [at for at, sign in enumerate(rule) if sign == "-" and rule[at - 1] == " "]
        assert titles.index("The first half") >= runs[1]
        assert titles.index("The second half") >= runs[5]

    def test_a_column_that_holds_something_is_never_left_out(self) -> None:
        lines = list(text.table_lines(_wide(idle=4)))
        body = next(line for line in lines if "somebody" in line)
        assert body.split() == ["somebody", "1", "2", "3", "4", "5", "6", "7", "4", "9", "10"]
        assert not any("Left out" in line for line in lines)

    def test_shades_and_frames_are_not_spoken_of(self) -> None:
        table = _table(
            ("Chance",), (outline.exact(Fraction(1, 2)),), note="Said.", looks="A darker cell."
        )
        assert list(text.table_lines(table))[-1] == "  Said."
