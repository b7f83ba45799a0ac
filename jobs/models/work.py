"""Work to be done, as rows written in the transaction that made it necessary."""

from __future__ import annotations

from django.db import models


class Work(models.Model):
    """One thing to do after a commit. A row without `done_at` is never forgotten.

    `about` tells pieces of the same kind apart: a second wish for the same piece is
    the same row while the first still waits. A claim holds until `lease_until`; whoever
    died holding it lets it go by the passing of time alone.
    """

    kind = models.CharField(max_length=40)
    about = models.CharField(max_length=120, blank=True)
    args = models.JSONField(default=dict)
    wanted_at = models.DateTimeField()
    not_before = models.DateTimeField()
    lease_until = models.DateTimeField(null=True)
    claim = models.UUIDField(null=True)
    attempts = models.IntegerField(default=0)
    trouble = models.TextField(blank=True)
    done_at = models.DateTimeField(null=True)
    given_up_at = models.DateTimeField(null=True)

    class Meta:
        indexes = [
            # The sweep asks for what is due; done rows never stand in its way.
            models.Index(
                fields=["not_before"],
                condition=models.Q(done_at__isnull=True, given_up_at__isnull=True),
                name="work_due",
            )
        ]
        constraints = [
            # One waiting row for each piece: nobody is written to twice.
            models.UniqueConstraint(
                fields=["kind", "about"],
                condition=models.Q(
                    done_at__isnull=True, given_up_at__isnull=True, claim__isnull=True
                ),
                name="work_waits_once",
            )
        ]

    def __str__(self) -> str:
        return f"{self.kind} {self.about}".strip()


class Position(models.Model):
    """How far a consumer of the record has read one job, by entry number."""

    consumer = models.CharField(max_length=40)
    record = models.ForeignKey("stakes.Record", models.PROTECT)
    number = models.BigIntegerField(default=0)

    class Meta:
        constraints = [
            models.UniqueConstraint(
                fields=["consumer", "record"], name="position_consumer"
            )
        ]

    def __str__(self) -> str:
        return f"{self.consumer} {self.number}"
