"""Walking every address of the program, so that a new page is held to the door too.

Nothing has to be done for a new page. Ids in its address are looked for by the name of
the parameter: `mark` among the marks, `setup`, `visit`, ... among the matters of the
record. Where that is not enough, a module `tests/pages/furnish_*.py` may

    @furnish                      put more things into both jobs
    def plan(world): ...

    @example("stakes:sheet-file")   give the ids of one address in one record
    def sheet_file(world, record): return {"sheet": ..., "name": "a.pdf"}
"""

from __future__ import annotations

import importlib
import pkgutil
import uuid
from collections.abc import Callable, Iterator
from dataclasses import dataclass
from typing import Any

from django.urls import URLPattern, URLResolver, get_resolver, reverse
from django.urls.converters import IntConverter, UUIDConverter
from rest_framework.views import APIView

from jobs.models import Company, Crew, Job, Token, User
from jobs.queries.seats import seat_now
from jobs.queries.terms import terms_at, today
from stakes.can import Can
from stakes.models import EntryMark, EntryMatter, Record
from tests.jobs.cast import Cast, make_cast, make_job, seat_everybody

Kwargs = dict[str, Any]


@dataclass
class World:
    """Two jobs with everybody on the first; the second has one entry more."""

    cast: Cast
    here: Job
    elsewhere: Job

    def rights(self, person: User | None) -> frozenset[Can] | None:
        seat = seat_now(self.here.record, person) if person else None
        return seat.rights if seat else None


@dataclass(frozen=True)
class Address:
    """One address with the view behind it."""

    name: str
    view: Any
    parameters: tuple[tuple[str, Any], ...]

    @property
    def under_a_job(self) -> bool:
        return "job" in dict(self.parameters)

    @property
    def ids(self) -> tuple[str, ...]:
        return tuple(name for name, _ in self.parameters if name != "job")

    @property
    def is_api(self) -> bool:
        kind = getattr(self.view, "cls", None)
        return isinstance(kind, type) and issubclass(kind, APIView)

    def methods(self) -> list[str]:
        kind = getattr(self.view, "cls", None) or getattr(self.view, "view_class", None)
        if kind is None:
            return ["GET", "POST"]
        verbs = getattr(self.view, "actions", None) or {
            verb: verb for verb in ("get", "post", "put", "patch", "delete")
        }
        return [verb.upper() for verb, name in verbs.items() if hasattr(kind, name)]

    def path(self, world: World, record: Record | None = None) -> str:
        """The address in the first job, with ids that exist in `record`."""
        kwargs = kwargs_for(self, world, record or world.here.record)
        if self.under_a_job:
            kwargs["job"] = world.here.number
        return reverse(self.name, kwargs=kwargs)


FURNISH: list[Callable[[World], None]] = []
EXAMPLES: dict[str, Callable[[World, Record], Kwargs]] = {}


def furnish(add: Callable[[World], None]) -> Callable[[World], None]:
    """Register a function that puts more things into both jobs of the world."""
    FURNISH.append(add)
    return add


def example(
    name: str,
) -> Callable[[Callable[[World, Record], Kwargs]], Callable[[World, Record], Kwargs]]:
    """Register the ids of one address."""

    def add(
        ids: Callable[[World, Record], Kwargs],
    ) -> Callable[[World, Record], Kwargs]:
        EXAMPLES[name] = ids
        return ids

    return add


def addresses() -> list[Address]:
    """Every address of the program that has a name; one without a name is a fault."""
    return list(_under(get_resolver().url_patterns, "", ()))


def make_world() -> World:
    """The cast seated on one of two jobs, both furnished by everybody's pages."""
    load_furniture()
    cast = make_cast()
    here, elsewhere = make_job("2614", by=cast.by), make_job("2615", by=cast.by)
    seat_everybody(here, cast)
    seat_everybody(elsewhere, cast)
    Token.objects.create(person=cast.manager, name="program", sha256="0" * 64)
    world = World(cast, here, elsewhere)
    for add in FURNISH:
        add(world)
    _one_entry_more(world)
    return world


def load_furniture() -> None:
    """Import every module of this folder that furnishes the world."""
    import tests.pages as folder

    for module in pkgutil.iter_modules(folder.__path__):
        if module.name.startswith("furnish_"):
            importlib.import_module(f"tests.pages.{module.name}")


def kwargs_for(address: Address, world: World, record: Record) -> Kwargs:
    if address.name in EXAMPLES:
        return dict(EXAMPLES[address.name](world, record))
    return {
        name: _id_called(name, converter, world, record)
        for name, converter in address.parameters
        if name != "job"
    }


def _under(
    patterns: list[Any], space: str, above: tuple[tuple[str, Any], ...]
) -> Iterator[Address]:
    for pattern in patterns:
        parameters = (*above, *pattern.pattern.converters.items())
        if isinstance(pattern, URLResolver):
            inner = f"{space}{pattern.namespace}:" if pattern.namespace else space
            yield from _under(pattern.url_patterns, inner, parameters)
        elif isinstance(pattern, URLPattern):
            assert pattern.name, f"{pattern} has no name"
            yield Address(f"{space}{pattern.name}", pattern.callback, parameters)


_TABLES = {"person": User, "company": Company, "crew": Crew, "token": Token}


def _id_called(name: str, converter: Any, world: World, record: Record) -> Any:
    if name in _TABLES:
        row = _TABLES[name].objects.first()
        return row.pk if row else uuid.uuid4()
    if name == "tolerance":
        return terms_at(record, today(record)).classes[0].key
    if name == "mark":
        link = EntryMark.objects.filter(record=record).first()
        return link.mark if link else uuid.uuid4()
    if isinstance(converter, IntConverter):
        return Record.objects.get(pk=record.pk).head
    if isinstance(converter, UUIDConverter):
        matter = EntryMatter.objects.filter(record=record, thing=name).first()
        return matter.key if matter else uuid.uuid4()
    return "1"


def _one_entry_more(world: World) -> None:
    """So that the last number of the second job is no number of the first."""
    from jobs.actions.open_job import describe_job

    heads = dict(Record.objects.values_list("pk", "head"))
    missing = heads[world.here.record.pk] - heads[world.elsewhere.record.pk] + 1
    for turn in range(max(missing, 0)):
        describe_job(
            record=world.elsewhere.record,
            name=f"Clinic 2615, {turn}",
            place="",
            by=world.cast.by,
        )
