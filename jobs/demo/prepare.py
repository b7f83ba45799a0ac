"""The chapters in order, with a line of progress for each."""

from __future__ import annotations

from collections.abc import Callable

from jobs.demo import clinic_ends, clinic_plan, clinic_story
from jobs.demo.people import make_cast
from jobs.demo.road import tell_road
from jobs.demo.telling import Story


def prepare(say: Callable[[str], None]) -> Story:
    """Tell the whole demo into an empty database; returns the clinic's story."""
    say("people and companies")
    cast = make_cast()
    say("the clinic: job, sheets, control")
    story = clinic_plan.open_clinic(cast)
    sheet = clinic_plan.receive_sheets(story)
    clinic_plan.accept_control(story, sheet)
    say("the clinic: zones, offset stakes, locate")
    footprint = clinic_plan.draw_site(story)
    clinic_plan.lay_out(story, footprint)
    clinic_ends.plan_more(story, sheet)
    clinic_plan.locate_lines(story)
    say("weeks 2 to 4: stakes set, checked, handed over")
    labels = clinic_story.first_stakes(story)
    clinic_story.rod_height(story, labels[4])
    clinic_story.lath_down(story, labels)
    clinic_ends.set_trench(story)
    say("weeks 4 and 5: eleven stakes lost, a re-stake")
    clinic_story.eleven_lost(story)
    clinic_story.re_stake(story)
    clinic_story.put_back_by_others(story, labels[7])
    clinic_story.wasted_trip(story)
    clinic_story.verbal_direction(story, labels[8])
    say("weeks 6 to 8: control hit, a revision, paper keyed late")
    clinic_story.control_hit(story, labels)
    clinic_ends.revise(story, sheet)
    clinic_ends.paper(story)
    clinic_ends.leave_open(story, labels)
    say("the road, in metres")
    tell_road(cast)
    return story
