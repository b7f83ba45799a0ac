"""Facts of control: what was found, what was measured, which values were adopted."""

from __future__ import annotations

from collections.abc import Iterable
from uuid import UUID

import msgspec

from stakes.kinds.words import Carries, Verdict
from stakes.record.kinds import Fact, MarkLink, MatterLink, kind
from stakes.record.lengths import Measured
from stakes.standing import effects


class CovarianceBlock(msgspec.Struct, frozen=True, kw_only=True):
    """Covariance in mm² as decimal strings: position (nn, ne, ee) and elevation (zz).

    `common` holds the part shared with every value of the same adjustment, so that a
    common error of the datum is not mistaken for movement.
    """

    nn: str = "0"
    ne: str = "0"
    ee: str = "0"
    zz: str = "0"
    common: str = "0"


@kind("value adopted")
class ValueAdopted(Fact, kw_only=True):
    """The surveyor adopted coordinates or an elevation for a mark.

    Every value a mark ever had is kept; each setup names the one it used.
    """

    value: UUID
    mark: UUID
    carries: Carries
    northing: Measured | None = None
    easting: Measured | None = None
    elevation: Measured | None = None
    source: str
    dated: str = ""
    covariance: CovarianceBlock | None = None
    basis: tuple[UUID, ...] = ()
    reason: str = ""

    def marks(self) -> Iterable[MarkLink]:
        letters = {"both": "pe", "position": "p", "elevation": "e"}[self.carries]
        yield MarkLink(self.mark, "valued", effects.adopted(letters))

    def sentence(self) -> str:
        return f"Value adopted, source: {self.source}."


class Compared(msgspec.Struct, frozen=True, kw_only=True):
    """One measured quantity of control work beside what the record says."""

    quantity: str
    from_mark: UUID
    to_mark: UUID | None = None
    measured: Measured
    computed: Measured | None = None
    difference: Measured | None = None
    tolerance: Measured | None = None
    verdict: Verdict = "not tested"


@kind("control measured")
class ControlMeasured(Fact, kw_only=True):
    """Recovered control was measured: distances between what is found, levels between
    benchmarks, a traverse or a level loop with its closure. Nothing is averaged away:
    a disagreement stays a question until the surveyor adopts a value."""

    work: UUID
    sort: str
    compared: tuple[Compared, ...] = ()
    closure: str = ""
    method: str = ""
    results: tuple[str, ...] = ()
    occasion: UUID | None = None

    def marks(self) -> Iterable[MarkLink]:
        named: dict[UUID, str] = {}
        for row in self.compared:
            for mark in (row.from_mark, row.to_mark):
                if mark is not None:
                    named.setdefault(mark, "measured")
        return [MarkLink(mark, role) for mark, role in named.items()]

    def matters(self) -> Iterable[MatterLink]:
        yield MatterLink("control work", self.work)
        if self.occasion:
            yield MatterLink("visit", self.occasion)

    def sentence(self) -> str:
        return f"Control measured by {self.sort}. {self.closure}".strip()


@kind("trust answered")
class TrustAnswered(Fact, kw_only=True):
    """The surveyor answered a doubt in writing: why it may be relied on all the same."""

    listed: tuple[UUID, ...]
    setup: UUID | None = None
    components: str = "pe"
    reason: str

    def marks(self) -> Iterable[MarkLink]:
        effect = effects.answered(self.components)
        return [MarkLink(m, "answered", effect) for m in self.listed]

    def matters(self) -> Iterable[MatterLink]:
        return [MatterLink("setup", self.setup, "answer")] if self.setup else []

    def sentence(self) -> str:
        return f"Doubt answered by the surveyor: {self.reason}"
