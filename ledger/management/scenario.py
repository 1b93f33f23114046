"""Read a scenario's folder into records; the bylaw book in it has its own reader."""

from pathlib import Path

from ledger.management import scenario_acts, scenario_commons, scenario_sheets
from ledger.management.scenario_records import Scenario


def read(*, folder: Path) -> Scenario:
    """Return the scenario in a folder.

    :raises ledger.management.scenario_cells.ScenarioError: if a file is missing, or a cell does
        not say what it should; it names the file, the row and the column.
    """
    commons = scenario_commons.read(folder=folder)
    sheets = scenario_sheets.Sheets(folder=folder, commons=commons)
    rows = sheets.landing_rows()
    landings = {slip: sheets.landing(row) for slip, row in rows.items()}
    acts, routine = scenario_acts.Acts(
        folder=folder, commons=commons, rows=rows, landing=sheets.landing
    ).read()
    return Scenario(
        commons=commons,
        landings=tuple(landings.values()),
        work=sheets.work(),
        inspections=sheets.inspections(landings),
        history=sheets.history(),
        survey=sheets.survey(),
        orders=sheets.orders(),
        acts=acts,
        routine=routine,
    )
