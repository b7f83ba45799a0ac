"""The Merkle tree over a record's entries, as RFC 9162 (2.1) defines it.

A tree of n leaves is kept by its peaks: the roots of the full subtrees that the binary
form of n names, largest first. Appending touches two hashes on average.
"""

from __future__ import annotations

import hashlib
from collections.abc import Callable, Sequence

Hash = bytes
LEAVES_PER_NODE = 256
"""Every full run of this many leaves has its node stored, so proofs need no full read."""

EMPTY_ROOT = hashlib.sha256(b"").digest()


def leaf_hash(body: bytes) -> Hash:
    return hashlib.sha256(b"\x00" + body).digest()


def node_hash(left: Hash, right: Hash) -> Hash:
    return hashlib.sha256(b"\x01" + left + right).digest()


def grow(peaks: Sequence[Hash], size: int, leaf: Hash) -> list[Hash]:
    """The peaks of a tree of `size + 1` leaves, from those of `size` leaves."""
    grown = [*peaks, leaf]
    while size & 1:
        right, left = grown.pop(), grown.pop()
        grown.append(node_hash(left, right))
        size >>= 1
    return grown


def root_of(peaks: Sequence[Hash]) -> Hash:
    """The root a tree with these peaks has."""
    if not peaks:
        return EMPTY_ROOT
    root = peaks[-1]
    for peak in reversed(peaks[:-1]):
        root = node_hash(peak, root)
    return root


def root(leaves: Sequence[Hash]) -> Hash:
    """The root over leaf hashes, computed from nothing."""
    peaks: list[Hash] = []
    for size, leaf in enumerate(leaves):
        peaks = grow(peaks, size, leaf)
    return root_of(peaks)


Subtree = Callable[[int, int], Hash]
"""Root of the leaves from `start` (inclusive) to `end` (exclusive)."""


def inclusion(index: int, size: int, subtree: Subtree) -> list[Hash]:
    """The audit path of leaf `index` in a tree of `size` leaves (RFC 9162, 2.1.3.1)."""
    if not 0 <= index < size:
        raise ValueError(f"Leaf {index} is not in a tree of {size}.")
    path, start, end = [], 0, size
    while end - start > 1:
        middle = start + _split(end - start)
        if index < middle:
            path.append(subtree(middle, end))
            end = middle
        else:
            path.append(subtree(start, middle))
            start = middle
    return path[::-1]


def consistency(old: int, size: int, subtree: Subtree) -> list[Hash]:
    """Proof that a tree of `size` leaves extends its first `old` (RFC 9162, 2.1.4.1)."""
    if not 0 < old <= size:
        raise ValueError(f"A tree of {size} cannot extend one of {old}.")
    proof: list[Hash] = []
    start, end, whole, wanted = 0, size, True, old
    while wanted != end - start:
        middle = _split(end - start)
        if wanted <= middle:
            proof.append(subtree(start + middle, end))
            end = start + middle
        else:
            proof.append(subtree(start, start + middle))
            start, wanted, whole = start + middle, wanted - middle, False
    if not whole:
        proof.append(subtree(start, end))
    return proof[::-1]


def proves_inclusion(
    leaf: Hash, index: int, size: int, path: Sequence[Hash], tree_root: Hash
) -> bool:
    """Whether `path` leads from `leaf` to `tree_root` (RFC 9162, 2.1.3.2)."""
    if not 0 <= index < size:
        return False
    first, last, found = index, size - 1, leaf
    for step in path:
        if last == 0:
            return False
        if first & 1 or first == last:
            found = node_hash(step, found)
            while not first & 1 and first:
                first, last = first >> 1, last >> 1
        else:
            found = node_hash(found, step)
        first, last = first >> 1, last >> 1
    return last == 0 and found == tree_root


def proves_consistency(
    old: int, size: int, old_root: Hash, new_root: Hash, proof: Sequence[Hash]
) -> bool:
    """Whether `proof` shows that the new tree extends the old (RFC 9162, 2.1.4.2)."""
    if old == size:
        return not proof and old_root == new_root
    if not 0 < old < size or not proof:
        return False
    steps = [old_root, *proof] if old & (old - 1) == 0 else list(proof)
    first, last = old - 1, size - 1
    while first & 1:
        first, last = first >> 1, last >> 1
    from_old = from_new = steps[0]
    for step in steps[1:]:
        if last == 0:
            return False
        if first & 1 or first == last:
            from_old, from_new = node_hash(step, from_old), node_hash(step, from_new)
            while not first & 1 and first:
                first, last = first >> 1, last >> 1
        else:
            from_new = node_hash(from_new, step)
        first, last = first >> 1, last >> 1
    return last == 0 and from_old == old_root and from_new == new_root


def _split(count: int) -> int:
    """The largest power of two smaller than `count`."""
    return 1 << (count - 1).bit_length() - 1
