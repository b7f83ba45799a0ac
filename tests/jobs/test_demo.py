"""The demo is told by the real actions and shows what it promises."""

from __future__ import annotations

import json

from django.test import TestCase

from jobs.demo.people import ROLES
from jobs.demo.prepare import prepare
from jobs.demo.telling import PASSWORD
from jobs.models import Handover, Hold, Request, User, Visit
from stakes.models import Direction, Entry, Mark, Question, Record, Sheet, Stake
from stakes.queries import ways
from stakes.queries.state import job_state
from stakes.record.folds import replay
from stakes.record.proving import faults


def of(record: Record, kind: str) -> list[Entry]:
    return list(Entry.objects.filter(record=record, kind=kind).order_by("number"))


class TestDemo(TestCase):
    """Told once for all the tests of this class."""

    told: Record

    @classmethod
    def setUpTestData(cls) -> None:
        chapters: list[str] = []
        cls.told = prepare(chapters.append).record
        assert len(chapters) >= 6

    def test_its_records_prove_and_replay(self) -> None:
        for record in Record.objects.all():
            assert faults(record) == []
            assert replay(record) == []

    def test_everybody_can_sign_in(self) -> None:
        for role, *_ in ROLES:
            user = User.objects.get(email=f"{role}@example.com")
            assert user.check_password(PASSWORD)

    def test_two_benchmarks_first_disagree_by_a_tenth(self) -> None:
        [measured] = of(self.told, "control measured")
        facts = json.loads(measured.body)["facts"]
        rises = [c for c in facts["compared"] if "rise" in c["quantity"]]
        assert rises[0]["verdict"] == "fail"
        values = of(self.told, "value adopted")
        assert sum("levelled twice" in v.body for v in values) == 1

    def test_a_failed_check_was_only_a_rod_height(self) -> None:
        [withdrawn] = [e for e in of(self.told, "withdrawn") if "rod height" in e.body]
        target = Entry.objects.get(record=self.told, number=withdrawn.corrects)
        assert json.loads(target.body)["facts"]["judgement"]["verdict"] == "fail"

    def test_ten_visits_with_a_wasted_trip(self) -> None:
        visits = list(Visit.objects.filter(record=self.told))
        assert len(visits) >= 10
        outcomes = [t.get("outcome") for v in visits for t in v.tasks]
        assert "sent away" in outcomes
        assert "control failed" in outcomes
        assert any(v.standby_minutes for v in visits)

    def test_eleven_stakes_were_lost_at_once_and_the_cause_is_disputed(self) -> None:
        facts = [json.loads(e.body)["facts"] for e in of(self.told, "destroyed")]
        [lost] = [f for f in facts if len(f["listed"]) == 11]
        assert lost["disputed"]

    def test_three_of_them_were_put_back_and_the_request_is_closed(self) -> None:
        closed = Request.objects.get(record=self.told, state="closed")
        assert closed.cost == "disputed"
        state = job_state(self.told)
        for label in ("H1", "H2", "H3"):
            assert state.by_label[label].stake.ordinal == 2

    def test_handovers_were_signed_declined_and_absent(self) -> None:
        given = Handover.objects.filter(record=self.told)
        assert {h.signature for h in given} == {"signed", "declined", "absent"}
        assert any(h.answer == "acknowledged" for h in given)

    def test_lath_down_with_a_good_hub_is_no_loss(self) -> None:
        assert Stake.objects.filter(
            record=self.told, lath_down=True, standing="standing"
        ).exists()

    def test_a_footing_was_built_from_a_stake_others_put_back(self) -> None:
        built = Stake.objects.filter(record=self.told, built_from=True)
        assert any(s.how == "put back by others" for s in built)

    def test_a_revision_moved_a_gridline_and_left_an_old_hub(self) -> None:
        assert Sheet.objects.get(record=self.told, revision="3").replaces is not None
        assert Mark.objects.get(record=self.told, label="G2N").doubled

    def test_question_direction_paper_and_match_are_there(self) -> None:
        assert Question.objects.get(record=self.told).in_writing
        assert Direction.objects.filter(record=self.told, settled_at=None).exists()
        assert Entry.objects.filter(
            record=self.told, known="copied from paper"
        ).exists()
        assert any("match the footing" in e.body for e in of(self.told, "set"))
        assert Mark.objects.filter(record=self.told, purpose="foreign").exists()

    def test_control_that_was_hit_casts_its_doubt_on_what_was_poured(self) -> None:
        state = job_state(self.told)
        assert str(state.by_label["CP3"].position.trust) == "in question"
        assert str(state.by_label["S2"].standing) == "retired"
        assert str(state.by_label["S2"].position.trust) == "in question"
        assert Hold.objects.filter(record=self.told, lifted_at=None).exists()

    def test_something_is_left_to_do(self) -> None:
        assert Request.objects.filter(record=self.told, state="received").exists()
        state = job_state(self.told)
        gone = [v for v in state.marks.values() if v.standing == "gone"]
        offered = [w for w in ways.ways_for(state, gone[0].key).ways if w.offered]
        assert offered
        assert any(s.closed_at is None for s in state.setups.values())

    def test_the_road_has_an_equation_and_a_retired_stage(self) -> None:
        road = Record.objects.get(number="2620")
        assert road.unit == "m"
        marks = Mark.objects.filter(record=road)
        assert marks.filter(line__contains="ahead").exists()
        assert set(
            marks.filter(stage="clearing").values_list("standing", flat=True)
        ) == {"retired"}
