"""Where the errors of marks come from, so that marks set together stay correlated.

Every mark or setup keeps its parents with the Jacobians that carry their errors over,
and the noise its own measuring added. Covariances are computed from that whenever they
are asked for, never copied: two stakes set from one setup share its errors, and a stake
put back from stakes shares those of its parents.
"""

from __future__ import annotations

from collections.abc import Iterable, Sequence
from dataclasses import dataclass

import numpy as np

from geometry import checked
from geometry.checked import Array
from geometry.errors import GeometryError, OutOfRange, WrongShape


@dataclass(frozen=True, slots=True, eq=False)
class Origin:
    """What the error of `name` is made of: sum of Jacobian x parent's error, and noise.

    `parents`: (name, Jacobian (d, d_parent)); `noise` (d, d) in m² (and radians for the
    third component of a setup). d is 2 for a mark, 3 for a setup (E, N, orientation).
    A mark without parents is a root. `control` marks start a lineage even when they
    have a parent (the datum they were adjusted on).
    """

    name: str
    parents: tuple[tuple[str, Array], ...]
    noise: Array
    control: bool = False

    @property
    def size(self) -> int:
        """Number of components."""
        return len(self.noise)


class Lineage:
    """All origins of a job. Build once, ask often.

    >>> root = Origin("CP1", (), 1e-6 * np.eye(2))
    >>> a = Origin("A", (("CP1", np.eye(2)),), 3e-6 * np.eye(2))
    >>> b = Origin("B", (("CP1", np.eye(2)),), 3e-6 * np.eye(2))
    >>> c = Lineage([root, a, b]).covariance(["A", "B"])
    >>> [round(1e6 * float(x), 6) for x in (c[0, 0], c[0, 2])]
    [4.0, 1.0]
    """

    def __init__(self, origins: Iterable[Origin]) -> None:
        """Raises OutOfRange for a name given twice, a parent not given, or a loop."""
        self._origins: dict[str, Origin] = {}
        for origin in origins:
            if origin.name in self._origins:
                raise OutOfRange("An origin was given twice.", where=origin.name)
            self._origins[origin.name] = origin
        self._order = self._sorted()
        self._generations: dict[str, int] = {}
        for name in self._order:
            self._generations[name] = self._age(self._origins[name])
        self._spread: dict[str, dict[str, Array]] = {}

    def __contains__(self, name: str) -> bool:
        return name in self._origins

    def generation(self, name: str) -> int:
        """0 for control, 1 for what was set from it, one more for each putting back.

        A setup is as old as its youngest mark; it adds nothing itself.
        """
        self._known(name)
        return self._generations[name]

    def covariance(self, names: Sequence[str]) -> Array:
        """Joint covariance of `names`, in their order; (2n, 2n) in m² for marks.

        Raises OutOfRange for a name that is not known.
        """
        spreads = [self._sources(name) for name in names]
        sizes = [self._known(name).size for name in names]
        starts = np.concatenate([[0], np.cumsum(sizes)]).astype(int)
        columns: dict[str, int] = {}
        width = 0
        for spread in spreads:
            for source, part in spread.items():
                if source not in columns:
                    columns[source] = width
                    width += part.shape[1]
        root = np.zeros((starts[-1], width))
        for i, spread in enumerate(spreads):
            for source, part in spread.items():
                at = columns[source]
                root[starts[i] : starts[i + 1], at : at + part.shape[1]] = part
        return np.asarray(root @ root.T)

    def _age(self, origin: Origin) -> int:
        if origin.control or not origin.parents:
            return 0
        age = max(self._generations[parent] for parent, _ in origin.parents)
        return age if origin.size == 3 else age + 1

    def _sources(self, name: str) -> dict[str, Array]:
        """Error of `name` as (source of noise: factor); factors times their transpose
        give covariances."""
        self._known(name)
        if name not in self._spread:
            for one in self._needed(name):
                origin = self._origins[one]
                spread = {one: self._factor(origin)}
                for parent, jacobian in origin.parents:
                    for source, part in self._spread[parent].items():
                        term = jacobian @ part
                        old = spread.get(source)
                        spread[source] = term if old is None else old + term
                self._spread[one] = spread
        return self._spread[name]

    def _needed(self, name: str) -> list[str]:
        """Ancestors of `name` not yet worked out, oldest first, and itself."""
        wanted: set[str] = set()
        stack = [name]
        while stack:
            one = stack.pop()
            if one not in wanted and one not in self._spread:
                wanted.add(one)
                stack += [parent for parent, _ in self._origins[one].parents]
        return sorted(wanted, key=self._order.__getitem__)

    def _factor(self, origin: Origin) -> Array:
        values, axes = np.linalg.eigh(origin.noise)
        return np.asarray(axes * np.sqrt(np.clip(values, 0.0, None)))

    def _known(self, name: str) -> Origin:
        if name not in self._origins:
            raise OutOfRange("A mark has no recorded origin.", where=name)
        return self._origins[name]

    def _sorted(self) -> dict[str, int]:
        """Place of every name in an order in which parents come first."""
        children: dict[str, list[str]] = {name: [] for name in self._origins}
        waiting = {}
        for name, origin in self._origins.items():
            _shapes(origin)
            waiting[name] = len(origin.parents)
            for parent, jacobian in origin.parents:
                size = self._known(parent).size
                if jacobian.shape != (origin.size, size):
                    raise WrongShape(
                        "A Jacobian does not fit its mark and parent.",
                        where=f"{name} from {parent}: {jacobian.shape}.",
                    )
                children[parent].append(name)
        ready = [name for name, count in waiting.items() if count == 0]
        order: dict[str, int] = {}
        while ready:
            name = ready.pop()
            order[name] = len(order)
            for child in children[name]:
                waiting[child] -= 1
                if waiting[child] == 0:
                    ready.append(child)
        if len(order) < len(self._origins):
            loop = sorted(set(self._origins) - set(order))
            raise OutOfRange(
                "Marks rest on each other in a circle.", where=", ".join(loop[:5])
            )
        return order


def _shapes(origin: Origin) -> None:
    if origin.noise.shape not in ((2, 2), (3, 3)):
        raise WrongShape("An origin has 2 or 3 components.", where=origin.name)
    try:
        checked.covariance("noise", origin.noise, size=origin.size)
    except GeometryError as error:
        raise type(error)(error.what, where=f"{origin.name}. {error.where}") from error
