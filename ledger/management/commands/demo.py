"""Play the invented season of the Tarrin Bay Fishing Cooperative, and write its report."""

from django.core.management.base import BaseCommand


class Command(BaseCommand):
    """Play a scenario."""

    def handle(self, *args: object, **options: object) -> None:
        """Run."""
        from pathlib import Path
        from ledger.management import playing, scenario
        from ledger.foundation.clocks import seeded_chance
        folder = Path("fixtures/tarrin_bay")
        import time
        t=time.time()
        play = playing.begin(scenario=scenario.read(folder=folder), book=(folder/"bylaws.yaml").read_text(), slug=f"tarrin-bay-{int(t)}", chance=seeded_chance(1))
        print("begun", time.time()-t)
        for day in playing.play_on(play=play):
            if day.day in (1, 15): print(day, round(time.time()-t,1))
        from ledger.journal import queries
        print(queries.proof_line(queries.head(commons_id=play.commons_id)))
