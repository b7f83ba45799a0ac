"""What the crew's pages need to be walked: marks, a setup, a stake, a check, a ticket."""

from __future__ import annotations

from stakes.actions.cautions import flag_hazard
from stakes.actions.checking import Asked, check_stakes
from stakes.actions.condition import report_gone
from stakes.actions.passing import Passage
from stakes.actions.setting import set_stake
from stakes.models import Record
from tests.builders import CHIEF, after, measured
from tests.fieldwork import field_job, locate, station
from tests.pages.walk import Kwargs, World, example, furnish


@furnish
def fieldwork(world: World) -> None:
    for job in (world.here, world.elsewhere):
        record, marks = field_job(job.record)
        locate(record)
        flag_hazard(record=record, sort="traffic", words="gate", by=CHIEF, at=after(1))
        setup = station(record, marks, at=after(1))
        for label in ("101", "102"):
            set_stake(
                record=record,
                mark=marks[label],
                setup=setup,
                elevation=measured("499.57"),
                acknowledged=["traffic"],
                by=CHIEF,
                at=after(5),
            )
        set_stake(
            record=record,
            mark=marks["103"],
            acknowledged=["traffic"],
            passage=Passage(done=True),
            by=CHIEF,
            at=after(6),
        )
        check_stakes(
            record=record,
            sort="distance",
            marks=[marks["101"], marks["102"]],
            asked=Asked(measured=measured("40.00")),
            method="tape",
            by=CHIEF,
            at=after(9),
        )
        report_gone(record=record, marks=[marks["102"]], by=CHIEF, at=after(20))


def word(name: str, known: str) -> None:
    """A word in an address is no id: of another job stands one that nobody uses."""

    @example(name)
    def words(world: World, record: Record) -> Kwargs:
        here = record.pk == world.here.record.pk
        parameter = "what" if name == "field:found" else "sort"
        return {parameter: known if here else "elsewhere"}


word("field:setup-open", "station")
word("field:check-make", "distance")
word("field:found", "gone")
