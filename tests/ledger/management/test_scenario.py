"""The reader of a scenario, and what the invented season of Tarrin Bay must be like."""

import csv
import shutil
import subprocess
import sys
from collections import Counter
from collections.abc import Iterable, Mapping
from datetime import UTC, date, datetime, timedelta
from decimal import Decimal
from fractions import Fraction
from pathlib import Path

import pytest

from ledger.management import scenario
from ledger.management import scenario_cells as cells
from ledger.management import scenario_records as records

FOLDER = Path(__file__).parents[3] / "fixtures" / "tarrin_bay"


@pytest.fixture(scope="module")
def bay() -> records.Scenario:
    return scenario.read(folder=FOLDER)


@pytest.fixture(scope="module")
def planted() -> tuple[Mapping[str, str], ...]:
    with (FOLDER / "planted.csv").open(encoding="utf-8", newline="") as sheet:
        return tuple(csv.DictReader(sheet))


class TestInvent:
    def test_another_run_writes_the_same_bytes(self, tmp_path: Path) -> None:
        script = FOLDER / "invent.py"
        done = subprocess.run(
            [sys.executable, "-B", script, tmp_path], capture_output=True, check=True, text=True
        )
        assert "slips by 43 members" in done.stdout
        written = sorted(path.name for path in tmp_path.iterdir())
        kept = {path.name for path in FOLDER.iterdir() if path.suffix in (".csv", ".yaml")}
        assert set(written) == kept - {"bylaws.yaml"}
        for name in written:
            assert (tmp_path / name).read_bytes() == (FOLDER / name).read_bytes(), name


class TestRead:
    def test_the_commons_has_its_people_grounds_and_seasons(self, bay: records.Scenario) -> None:
        commons = bay.commons
        assert [member.number for member in commons.members] == list(range(1, 46))
        assert len({member.household for member in commons.members}) == 42
        assert len({member.name for member in commons.members}) == 45
        retired = {m.number for m in commons.members if m.membership_class == "retired"}
        assert retired == {m.number for m in commons.members if not m.shares} == {41, 42}
        assert sum(zone.resource == "mullet" for zone in commons.zones) == 4
        assert sum(zone.resource == "clams" for zone in commons.zones) == 6
        assert {(office.role, office.member) for office in commons.offices} == {
            *(("secretary", 3), ("monitor", 8), ("monitor", 21), ("auditor", 41)),
            *(("board", number) for number in (5, 12, 27, 30, 36)),
        }
        allowables = {season.code: season.allowable for season in commons.seasons}
        assert allowables == {
            "mullet-2026": Decimal(68000),
            "clams-2026": Decimal(22000),
            "mullet-2027": None,
            "clams-2027": None,
        }
        assert {season.during.length_days for season in commons.seasons} == {120}

    def test_a_slip_is_read_exactly(self, bay: records.Scenario) -> None:
        with (FOLDER / "landings.csv").open(encoding="utf-8", newline="") as sheet:
            rows = list(csv.DictReader(sheet))
        assert [landing.slip for landing in bay.landings] == [int(row["slip"]) for row in rows]
        number = next(at for at, row in enumerate(rows) if row["mullet_kg"] and row["clams_kg"])
        row, landing = rows[number], bay.landings[number]
        assert landing.takes == (
            records.Weighed(
                resource="mullet",
                ground=row["ground_mullet"],
                amount=Decimal(row["mullet_kg"]),
            ),
            records.Weighed(
                resource="clams", ground=row["ground_clams"], amount=Decimal(row["clams_kg"])
            ),
        )
        assert f"{landing.landed_at:%Y-%m-%d %H:%M}" == f"{row['landed']} {row['time']}"
        assert f"{landing.handed_in_at:%Y-%m-%d %H:%M}" == row["handed_in"]

    def test_clocks_go_forward_within_the_season(self, bay: records.Scenario) -> None:
        offsets = {
            landing.landed_at.date() >= date(2026, 3, 29): landing.landed_at.utcoffset()
            for landing in bay.landings
        }
        assert offsets == {False: timedelta(0), True: timedelta(hours=1)}

    def test_a_correction_carries_the_slip_as_it_should_have_been(
        self, bay: records.Scenario
    ) -> None:
        (correction,) = (act for act in bay.acts if isinstance(act, records.Correction))
        wrong = next(each for each in bay.landings if each.slip == correction.landing.slip)
        assert [take.ground for take in wrong.takes] == ["inner_flats"]
        assert [take.ground for take in correction.landing.takes] == ["north_bar"]
        assert correction.landing.handed_in_at == wrong.handed_in_at
        assert correction.landing.takes[0].amount == wrong.takes[0].amount

    def test_every_case_that_people_speak_of_was_planted(
        self, bay: records.Scenario, planted: tuple[Mapping[str, str], ...]
    ) -> None:
        known = {
            (row["clause"], int(row["subject"]), date.fromisoformat(row["window_first"]))
            for row in planted
        }
        named = [act.case for act in bay.acts if not isinstance(act, records.Correction)]
        named += [*bay.routine.tell.fails_for, *bay.routine.pay.unpaid]
        assert len(named) > 12
        assert {(case.clause, case.subject, case.window_first) for case in named} <= known


# File, a text in it, what it is changed to, and the row and column that the error must name.
WRONG = (
    ("landings.csv", "\n2,2026-03-01", "\n2,2026-3-01", 3, "landed"),
    ("landings.csv", "\n2,2026-03-01", "\n1,2026-03-01", 3, "slip"),
    ("landings.csv", "outer_bay", "outer_sea", 3, "ground_mullet"),
    ("landings.csv", "outer_bay", "", 3, "ground_mullet"),
    ("landings.csv", "TB-39", "TB-99", 3, "boat"),
    ("work.csv", ",6,", ",six,", 2, "hours"),
    ("mullet_history.csv", "\n2003,", "\n2004,", 5, "year"),
    ("clam_survey.csv", "cockle_row", "cockle_rows", 3, "ground"),
    ("water_status.csv", ",closed,", ",shut,", 3, "status"),
    ("inspections.csv", ",21,31,", ",99,31,", 2, "monitor"),
    ("commons.yaml", "zone: Europe/Dublin", "zone: Europe/Tarrin", 2, "zone"),
    ("commons.yaml", "base: g", "base: [g]", 9, "base"),
    ("acts.yaml", "act: answer", "act: shout", 4, "act"),
    ("acts.yaml", "subject: 17", "subject: many", 10, "subject"),
)


class TestErrors:
    @pytest.fixture
    def folder(self, tmp_path: Path) -> Path:
        for path in FOLDER.iterdir():
            if path.suffix in (".csv", ".yaml"):
                shutil.copy(path, tmp_path)
        return tmp_path

    @pytest.mark.parametrize(("file", "text", "other", "row", "column"), WRONG)
    def test_a_wrong_cell_is_named(
        self, folder: Path, file: str, text: str, other: str, row: int, column: str
    ) -> None:
        _change(folder / file, text, other)
        with pytest.raises(cells.UnreadableCell) as caught:
            scenario.read(folder=folder)
        assert (caught.value.facts["file"], caught.value.facts["column"]) == (file, column)
        assert caught.value.facts["row"] == row
        assert f"{file}, row {row}, column {column}" in str(caught.value)

    def test_a_time_that_the_clocks_skipped_is_refused(self, folder: Path) -> None:
        row = (FOLDER / "landings.csv").read_text(encoding="utf-8").splitlines()[1]
        skipped = ",".join(["1", "2026-03-29", "01:30", *row.split(",")[3:]])
        _change(folder / "landings.csv", row, skipped)
        with pytest.raises(cells.UnreadableCell, match="the clocks did not skip"):
            scenario.read(folder=folder)

    def test_a_slip_handed_in_before_the_one_above_is_refused(self, folder: Path) -> None:
        path = folder / "landings.csv"
        lines = path.read_text(encoding="utf-8").splitlines()
        lines[1], lines[50] = lines[50], lines[1]
        path.write_text("\n".join(lines), encoding="utf-8")
        with pytest.raises(cells.UnreadableCell) as caught:
            scenario.read(folder=folder)
        assert (caught.value.facts["row"], caught.value.facts["column"]) == (3, "handed_in")

    def test_a_missing_file_is_named(self, folder: Path) -> None:
        (folder / "work.csv").unlink()
        with pytest.raises(cells.FileMissing, match=r"work\.csv"):
            scenario.read(folder=folder)

    def test_other_columns_are_refused(self, folder: Path) -> None:
        _change(folder / "landings.csv", "slip,landed", "landed,slip")
        with pytest.raises(cells.WrongColumns, match="row 1"):
            scenario.read(folder=folder)

    def test_an_unknown_key_is_refused(self, folder: Path) -> None:
        _change(folder / "acts.yaml", "  words:", "  wrods:")
        with pytest.raises(cells.WrongColumns, match=r"acts\.yaml, row 2"):
            scenario.read(folder=folder)

    @pytest.mark.parametrize("text", [b"name: [", b"- a list", b"name: \xff"])
    def test_what_is_no_page_is_refused(self, folder: Path, text: bytes) -> None:
        (folder / "commons.yaml").write_bytes(text)
        with pytest.raises(cells.UnreadableFile, match=r"commons\.yaml"):
            scenario.read(folder=folder)


def _change(path: Path, text: str, other: str) -> None:
    found = path.read_text(encoding="utf-8")
    assert text in found
    path.write_text(found.replace(text, other, 1), encoding="utf-8")


Row = tuple[object, ...]


def _grams(text: str) -> int:
    return int(Decimal(text) * 1000)


def _takes(bay: records.Scenario) -> Iterable[tuple[records.Landing, records.Weighed, int]]:
    for landing in bay.landings:
        for take in landing.takes:
            yield landing, take, int(take.amount * 1000)


def _minutes_between(first: datetime, second: datetime) -> int:
    return int((second.astimezone(UTC) - first.astimezone(UTC)).total_seconds()) // 60


class TestPlanted:
    """Each clause counted again from the records, in other words than those that planted it."""

    def test_day_limits(
        self, bay: records.Scenario, planted: tuple[Mapping[str, str], ...]
    ) -> None:
        households = {member.number: member.household for member in bay.commons.members}
        totals: Counter[tuple[str, int, date]] = Counter()
        for landing, take, grams in _takes(bay):
            holder = households[landing.member]
            totals[take.resource, holder, landing.landed_at.date()] += grams
        ceilings = {"mullet": ("3.1", 94_500), "clams": ("3.2", 42_000)}
        over = {
            (ceilings[resource][0], holder, day.isoformat(), total, total - ceilings[resource][1])
            for (resource, holder, day), total in totals.items()
            if total > ceilings[resource][1]
        }
        assert over == _weights(planted, "3.1", "3.2")
        assert len(over) == 22
        # The border is lived on: some stop at the limit, some at the end of the tolerance.
        for resource, limit in (("mullet", 90_000), ("clams", 40_000)):
            of_one = [total for (each, _, _), total in totals.items() if each == resource]
            assert sum(total == limit for total in of_one) >= 10
            assert sum(total == ceilings[resource][1] for total in of_one) >= 2

    def test_season_allotments(
        self, bay: records.Scenario, planted: tuple[Mapping[str, str], ...]
    ) -> None:
        totals: Counter[tuple[str, int]] = Counter()
        for landing, take, grams in _takes(bay):
            totals[take.resource, landing.member] += grams
        shares = {
            (share.resource, member.number): share.measure
            for member in bay.commons.members
            for share in member.shares
        }
        assert sum(part for (kind, _), part in shares.items() if kind == "mullet") == 98
        # 68,000 kg less 2 % is 66,640 kg: 680 kg for each of the 98 shares, with nothing left over.
        over = {
            ("2.3", member, "2026-03-01", total, total - int(680_000 * share * 103 / 100))
            for (resource, member), share in shares.items()
            if resource == "mullet"
            and (total := totals[resource, member]) > 680_000 * share * 103 / 100
        }
        clam_shares = sum(part for (kind, _), part in shares.items() if kind == "clams")
        for (resource, member), share in shares.items():
            exact = Fraction(22_000_000) * share / clam_shares
            if resource == "clams" and totals[resource, member] > exact + 1:
                excess = totals[resource, member] - exact
                (row,) = (row for row in planted if row["clause"] == "2.4")
                assert (row["subject"], abs(_grams(row["breach_kg"]) - excess) < 1) == ("24", True)
                over.add(("2.4", member, "2026-03-01", 251_000, _grams(row["breach_kg"])))
        assert over == _weights(planted, "2.3", "2.4")
        within = totals["mullet", 37] - 680_000 * shares["mullet", 37]
        assert 0 < within <= 680_000 * shares["mullet", 37] * 3 / 100

    def test_closed_grounds(
        self, bay: records.Scenario, planted: tuple[Mapping[str, str], ...]
    ) -> None:
        (notice,) = (order for order in bay.orders if order.closed)
        assert (notice.first, notice.until) == (date(2026, 5, 4), date(2026, 5, 19))
        found = set()
        for landing, take, grams in _takes(bay):
            day = landing.landed_at.date()
            spawning = date(2026, 4, 10) <= day <= date(2026, 4, 30)
            if spawning and take.ground in ("inner_flats", "heron_channel"):
                found.add(("4.1", landing.member, day.isoformat(), grams, grams))
            if date(2026, 5, 4) <= day < date(2026, 5, 19) and take.ground in notice.grounds:
                found.add(("4.2", landing.member, day.isoformat(), grams, grams))
        assert found == _weights(planted, "4.1", "4.2")
        assert len(found) == 5

    def test_late_slips(
        self, bay: records.Scenario, planted: tuple[Mapping[str, str], ...]
    ) -> None:
        took = {
            landing.slip: _minutes_between(landing.landed_at, landing.handed_in_at)
            for landing in bay.landings
        }
        late = [
            ("5.1", each.member, each.landed_at.date().isoformat(), took[each.slip])
            for each in bay.landings
            if took[each.slip] > 48 * 60
        ]
        assert sorted(late) == sorted(
            (row["clause"], int(row["subject"]), row["window_first"], int(row["total_min"]))
            for row in planted
            if row["clause"] == "5.1"
        )
        assert len(late) == 30
        assert sum(minutes == 48 * 60 for minutes in took.values()) == 2
        # 29 March has 23 hours: late by the clock on the wall, and in time.
        by_the_wall = [
            each
            for each in bay.landings
            if took[each.slip] <= 48 * 60
            and each.handed_in_at.replace(tzinfo=None) - each.landed_at.replace(tzinfo=None)
            > timedelta(hours=48)
        ]
        assert [each.member for each in by_the_wall] == [18]

    def test_work_owed(self, bay: records.Scenario, planted: tuple[Mapping[str, str], ...]) -> None:
        given: Counter[int] = Counter()
        for stint in bay.work:
            given[stint.member] += stint.minutes or int((stint.paid or 0) * 6)
        short = {
            (member.number, given[member.number])
            for member in bay.commons.members
            if member.membership_class == "licensed" and given[member.number] < 12 * 60
        }
        assert short == {
            (int(row["subject"]), int(row["total_min"]))
            for row in planted
            if row["clause"] == "6.1"
        }
        assert len(short) == 4

    def test_nobody_who_retired_lands_and_nothing_falls_outside_the_season(
        self, bay: records.Scenario
    ) -> None:
        assert {landing.member for landing in bay.landings} == {*range(1, 41), 43, 44, 45}
        days = {landing.landed_at.date() for landing in bay.landings}
        assert (min(days), max(days)) == (date(2026, 3, 1), date(2026, 6, 28))


def _weights(planted: Iterable[Mapping[str, str]], *clauses: str) -> set[Row]:
    return {
        (
            row["clause"],
            int(row["subject"]),
            row["window_first"],
            _grams(row["total_kg"]),
            _grams(row["breach_kg"]),
        )
        for row in planted
        if row["clause"] in clauses
    }


class TestPlausible:
    def test_totals_leave_some_of_the_allowable(self, bay: records.Scenario) -> None:
        assert 4_300 <= len(bay.landings) <= 4_700
        totals: Counter[str] = Counter()
        for _, take, grams in _takes(bay):
            totals[take.resource] += grams
        assert 60_000_000 <= totals["mullet"] <= 64_000_000
        assert 19_000_000 <= totals["clams"] <= 20_500_000

    def test_the_readings_bear_an_allowable_like_last_years(self, bay: records.Scenario) -> None:
        assert [year.year for year in bay.history] == list(range(2000, 2027))
        assert [year.year for year in bay.history if year.catch_t is None] == [2026]
        index = [year.index for year in bay.history]
        assert max(index) / min(index) > 3
        assert min(index) < index[-1] < index[0]
        rate = Decimal("0.15") * sum(ground.biomass_kg for ground in bay.survey)
        assert len(bay.survey) == 6
        assert 21_000 <= rate <= 23_000

    def test_checks_are_a_sample_by_monitors_of_others(self, bay: records.Scenario) -> None:
        assert 0.035 <= len(bay.inspections) / len(bay.landings) <= 0.045
        assert {check.monitor for check in bay.inspections} == {8, 21}
        assert all(check.monitor != check.member for check in bay.inspections)
