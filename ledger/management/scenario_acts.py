"""Read acts.yaml: what people do on dates, and how every other case goes."""

from collections.abc import Callable, Mapping
from dataclasses import dataclass
from datetime import datetime
from pathlib import Path
from zoneinfo import ZoneInfo

from ledger.management import scenario_cells as cells
from ledger.management import scenario_records as records

_HEAD = ("on", "at", "act", "by", "words")
_WEEKDAYS = ("monday", "tuesday", "wednesday", "thursday", "friday", "saturday", "sunday")


@dataclass(frozen=True, slots=True, kw_only=True)
class Acts:
    """What the acts speak of: the commons, and the rows of slips by number.

    ``landing`` reads a row of a slip. Every method raises
    :class:`ledger.management.scenario_cells.ScenarioError`, naming file, row and column.
    """

    folder: Path
    commons: records.Commons
    rows: Mapping[int, cells.Row]
    landing: Callable[[cells.Row], records.Landing]

    def read(self) -> tuple[tuple[records.Act, ...], records.Routine]:
        """Return the acts in order of time, and the routine."""
        page = cells.page(folder=self.folder, file="acts.yaml").only("acts", "routine")
        acts: list[records.Act] = []
        for each in page.pages("acts"):
            act = self._act(each)
            if acts and act.at < acts[-1].at:
                raise each["on"].wrong("a time at or after that of the act before")
            acts.append(act)
        return tuple(acts), self._routine(page.page("routine"))

    def _act(self, page: cells.Page) -> records.Act:
        match page["act"].text:
            case "correct":
                return self._correction(page)
            case "answer":
                page.only(*_HEAD, "case")
                return records.Answer(
                    at=self._at(page),
                    by=self._by(page),
                    words=page["words"].words(),
                    case=_case(page.page("case")),
                )
            case "set_aside":
                page.only(*_HEAD, "case", "reason")
                return records.SetAside(
                    at=self._at(page),
                    by=self._by(page),
                    words=page["words"].words(),
                    case=_case(page.page("case")),
                    reason=page["reason"].words(),
                )
            case "appeal":
                page.only(*_HEAD, "case")
                return records.Appeal(
                    at=self._at(page),
                    by=self._by(page),
                    words=page["words"].words(),
                    case=_case(page.page("case")),
                )
            case "uphold" | "overturn" as said:
                page.only(*_HEAD, "case")
                return records.AppealDecision(
                    at=self._at(page),
                    by=self._by(page),
                    words=page["words"].words(),
                    case=_case(page.page("case")),
                    upheld=said == "uphold",
                )
            case "pay":
                page.only(*_HEAD, "case", "amount_eur")
                return records.Payment(
                    at=self._at(page),
                    by=self._by(page),
                    words=page["words"].words(),
                    case=_case(page.page("case")),
                    amount=page["amount_eur"].above_zero(),
                )
            case _:
                kinds = "correct, answer, set_aside, appeal, uphold, overturn, pay"
                raise page["act"].wrong(f"one of {kinds}")

    def _correction(self, page: cells.Page) -> records.Correction:
        page.only(*_HEAD, "slip", "why", "set")
        row = self.rows[page["slip"].known(self.rows, what="slip")]
        changes = page.page("set").only(*row.cells)
        corrected = row.replaced({column: changes[column].text for column in changes.keys()})
        return records.Correction(
            at=self._at(page),
            by=self._by(page),
            words=page["words"].words(),
            why=page["why"].words(),
            landing=self.landing(corrected),
        )

    def _at(self, page: cells.Page) -> datetime:
        return page["at"].instant_on(page["on"].day(), zone=ZoneInfo(self.commons.zone))

    def _by(self, page: cells.Page) -> records.Actor:
        by = page.page("by").only("role", "member")
        numbers = [member.number for member in self.commons.members]
        return records.Actor(
            role=by["role"].words(),
            member=by["member"].known(numbers, what="member") if "member" in by else None,
        )

    def _habit(self, page: cells.Page) -> records.Habit:
        return records.Habit(
            by=self._by(page), after_days=page["after_days"].whole(), clock=page["at"].clock()
        )

    def _routine(self, page: cells.Page) -> records.Routine:
        page.only("take_up", "officers", "tell", "decide", "complete", "pay")
        numbers = [member.number for member in self.commons.members]
        complete, pay = page.page("complete"), page.page("pay")
        return records.Routine(
            take_up=self._habit(page.page("take_up").only("by", "after_days", "at")),
            officers=tuple(cell.known(numbers, what="member") for cell in page.list_of("officers")),
            tell=self._telling(page.page("tell")),
            decide=self._deciding(page.page("decide")),
            complete=records.Completing(
                habit=self._habit(complete.only("by", "after_days", "at", "steps")),
                steps=tuple(cell.words() for cell in complete.list_of("steps")),
            ),
            pay=records.Paying(
                after_days=pay.only("after_days", "at", "unpaid")["after_days"].whole(),
                clock=pay["at"].clock(),
                unpaid=_cases(pay, "unpaid"),
            ),
        )

    def _telling(self, page: cells.Page) -> records.Telling:
        page.only("by", "after_days", "at", "means", "first_attempt_fails")
        fails = page.page("first_attempt_fails").only("means", "again_after_days", "cases")
        return records.Telling(
            habit=self._habit(page),
            means=page["means"].words(),
            failing_means=fails["means"].words(),
            again_after_days=fails["again_after_days"].whole(),
            fails_for=_cases(fails, "cases"),
        )

    def _deciding(self, page: cells.Page) -> records.Deciding:
        page.only("by", "weekday", "at", "reasons_after_days", "own_cases")
        own = page.page("own_cases").only("by", "on", "at")
        return records.Deciding(
            by=self._by(page),
            weekday=_WEEKDAYS.index(page["weekday"].one_of(_WEEKDAYS)),
            clock=page["at"].clock(),
            reasons_after_days=page["reasons_after_days"].whole(),
            own_by=self._by(own),
            own_at=self._at(own),
        )


def _cases(page: cells.Page, key: str) -> tuple[records.CaseRef, ...]:
    return tuple(_case(each) for each in page.pages(key))


def _case(page: cells.Page) -> records.CaseRef:
    page.only("clause", "subject", "window_first")
    return records.CaseRef(
        clause=page["clause"].words(),
        subject=page["subject"].whole(),
        window_first=page["window_first"].day(),
    )
