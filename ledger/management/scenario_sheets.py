"""Read the sheets: landings, work, inspections, readings of the resources, notices."""

from dataclasses import dataclass
from datetime import datetime
from decimal import Decimal
from pathlib import Path
from zoneinfo import ZoneInfo

from ledger.management import scenario_cells as cells
from ledger.management import scenario_records as records


@dataclass(frozen=True, slots=True, kw_only=True)
class Sheets:
    """The folder, and the commons that the sheets speak of.

    Every method raises :class:`ledger.management.scenario_cells.ScenarioError`, which names the
    file, the row and the column.
    """

    folder: Path
    commons: records.Commons

    @property
    def zone(self) -> ZoneInfo:
        """Return the time zone of every clock in the sheets."""
        return ZoneInfo(self.commons.zone)

    def landing_rows(self) -> dict[int, cells.Row]:
        """Return the rows of landings.csv by slip number, as handed in."""
        by_slip: dict[int, cells.Row] = {}
        before: datetime | None = None
        for row in self._rows("landings", self._landing_columns()):
            slip = row["slip"].whole()
            if slip in by_slip:
                raise row["slip"].wrong("a number that stands once")
            handed_in = row["handed_in"].instant(zone=self.zone)
            if before is not None and handed_in < before:
                raise row["handed_in"].wrong("a time at or after that of the row above")
            by_slip[slip], before = row, handed_in
        return by_slip

    def landing(self, row: cells.Row) -> records.Landing:
        """Return the slip that a row tells of."""
        landed_at = row["time"].instant_on(row["landed"].day(), zone=self.zone)
        handed_in_at = row["handed_in"].instant(zone=self.zone)
        if handed_in_at < landed_at:
            raise row["handed_in"].wrong("a time at or after the landing")
        takes = tuple(
            take for each in self.commons.resources if (take := self._take(row, each)) is not None
        )
        if not takes:
            first = self.commons.resources[0]
            raise row[_amount_column(first)].wrong("an amount of at least one resource")
        return records.Landing(
            slip=row["slip"].whole(),
            landed_at=landed_at,
            handed_in_at=handed_in_at,
            member=self._member(row["member"]),
            boat=row["boat"].one_of([boat.code for boat in self.commons.boats]),
            takes=takes,
            note=row["note"].text,
        )

    def work(self) -> tuple[records.Work, ...]:
        """Return the rows of work.csv."""
        columns = ("date", "member", "hours", "paid_eur", "task", "recorded_on")
        return tuple(self._work(row) for row in self._rows("work", columns))

    def inspections(self, landings: dict[int, records.Landing]) -> tuple[records.Inspection, ...]:
        """Return the rows of inspections.csv, each about one of the landings."""
        amounts = tuple(_amount_column(each) for each in self.commons.resources)
        columns = ("date", "time", "monitor", "member", "ground", *amounts, "slip", "remark")
        return tuple(self._inspection(row, landings) for row in self._rows("inspections", columns))

    def history(self) -> tuple[records.HistoryYear, ...]:
        """Return the rows of mullet_history.csv, one a year without a gap."""
        columns = ("year", "catch_t", "index", "observed_on", "remark")
        years: list[records.HistoryYear] = []
        for row in self._rows("mullet_history", columns):
            year = row["year"].whole()
            if years and year != years[-1].year + 1:
                raise row["year"].wrong(f"the year {years[-1].year + 1}")
            caught = row.given("catch_t")
            years.append(
                records.HistoryYear(
                    resource="mullet",
                    year=year,
                    catch_t=caught.number() if caught else None,
                    index=row["index"].above_zero(),
                    observed_on=row["observed_on"].day(),
                )
            )
        return tuple(years)

    def survey(self) -> tuple[records.GroundSurvey, ...]:
        """Return the rows of clam_survey.csv."""
        columns = ("ground", "surveyed_on", "quadrats", "biomass_kg", "cv")
        return tuple(
            records.GroundSurvey(
                resource="clams",
                ground=row["ground"].one_of(self._grounds("clams")),
                surveyed_on=row["surveyed_on"].day(),
                biomass_kg=row["biomass_kg"].number(),
                cv=row["cv"].above_zero(),
            )
            for row in self._rows("clam_survey", columns)
        )

    def orders(self) -> tuple[records.WaterStatus, ...]:
        """Return the rows of water_status.csv, open and closed, as received."""
        columns = (
            *("received", "authority", "resource", "grounds"),
            *("status", "from", "until", "notice"),
        )
        return tuple(self._status(row) for row in self._rows("water_status", columns))

    def _rows(self, name: str, columns: tuple[str, ...]) -> tuple[cells.Row, ...]:
        return cells.sheet(folder=self.folder, file=f"{name}.csv", columns=columns)

    def _landing_columns(self) -> tuple[str, ...]:
        pairs = tuple(
            column
            for each in self.commons.resources
            for column in (f"ground_{each.code}", _amount_column(each))
        )
        return ("slip", "landed", "time", "handed_in", "member", "boat", *pairs, "note")

    def _take(self, row: cells.Row, resource: records.Resource) -> records.Weighed | None:
        ground, amount = row.given(f"ground_{resource.code}"), row.given(_amount_column(resource))
        if ground is None and amount is None:
            return None
        if ground is None or amount is None:
            blank = f"ground_{resource.code}" if ground is None else _amount_column(resource)
            raise row[blank].wrong("a ground and an amount, or neither")
        return records.Weighed(
            resource=resource.code,
            ground=ground.one_of(self._grounds(resource.code)),
            amount=amount.above_zero(),
        )

    def _work(self, row: cells.Row) -> records.Work:
        hours, paid = row.given("hours"), row.given("paid_eur")
        if (hours is None) == (paid is None):
            raise row["hours"].wrong("hours or money, and not both")
        done_on, recorded_on = row["date"].day(), row["recorded_on"].day()
        if recorded_on < done_on:
            raise row["recorded_on"].wrong("a day on or after the work")
        return records.Work(
            done_on=done_on,
            member=self._member(row["member"]),
            minutes=_minutes(hours) if hours else None,
            paid=paid.above_zero() if paid else None,
            task=row["task"].words(),
            recorded_on=recorded_on,
        )

    def _inspection(
        self, row: cells.Row, landings: dict[int, records.Landing]
    ) -> records.Inspection:
        slip = row["slip"].known(landings, what="slip")
        member = self._member(row["member"])
        if landings[slip].member != member:
            raise row["member"].wrong(f"the member of slip {slip}")
        amounts = [(each.code, row.given(_amount_column(each))) for each in self.commons.resources]
        return records.Inspection(
            seen_at=row["time"].instant_on(row["date"].day(), zone=self.zone),
            monitor=self._member(row["monitor"]),
            member=member,
            ground=row["ground"].one_of([zone.code for zone in self.commons.zones]),
            seen=tuple(
                records.Seen(resource=code, amount=cell.number()) for code, cell in amounts if cell
            ),
            slip=slip,
            remark=row["remark"].text,
        )

    def _status(self, row: cells.Row) -> records.WaterStatus:
        resource = row["resource"].one_of([each.code for each in self.commons.resources])
        first, until = row["from"].day(), row.given("until")
        if until is not None and until.day() <= first:
            raise until.wrong("a day after the first")
        grounds = tuple(row["grounds"].words().split())
        if not set(grounds) <= set(self._grounds(resource)):
            raise row["grounds"].wrong("some of " + ", ".join(self._grounds(resource)))
        return records.WaterStatus(
            received_at=row["received"].instant(zone=self.zone),
            authority=row["authority"].words(),
            resource=resource,
            grounds=grounds,
            closed=row["status"].one_of(("open", "closed")) == "closed",
            first=first,
            until=until.day() if until else None,
            notice=row["notice"].words(),
        )

    def _member(self, cell: cells.Cell) -> int:
        return cell.known([member.number for member in self.commons.members], what="member")

    def _grounds(self, resource: str) -> list[str]:
        return [zone.code for zone in self.commons.zones if zone.resource == resource]


def _amount_column(resource: records.Resource) -> str:
    return f"{resource.code}_{resource.unit}"


def _minutes(hours: cells.Cell) -> int:
    minutes: Decimal = hours.above_zero() * 60
    if minutes != int(minutes):
        raise hours.wrong("hours that make whole minutes")
    return int(minutes)
