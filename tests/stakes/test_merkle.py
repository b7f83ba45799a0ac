"""The tree of a record is the one RFC 9162 describes.

Vectors: the eight leaves and roots used by the reference tests of Certificate
Transparency (RFC 6962), and the library `pymerkle` as an independent oracle.
"""

from __future__ import annotations

from hypothesis import given
from hypothesis import strategies as st
from pymerkle import InmemoryTree

from stakes.record import merkle

LEAVES = [
    bytes.fromhex(text)
    for text in (
        "",
        "00",
        "10",
        "2021",
        "3031",
        "40414243",
        "5051525354555657",
        "606162636465666768696a6b6c6d6e6f",
    )
]
ROOTS = [
    "e3b0c44298fc1c149afbf4c8996fb92427ae41e4649b934ca495991b7852b855",
    "6e340b9cffb37a989ca544e6bb780a2c78901d3fb33738768511a30617afa01d",
    "fac54203e7cc696cf0dfcb42c92a1d9dbaf70ad9e621f4bd8d98662f00e3c125",
    "aeb6bcfe274b70a14fb067a5e5578264db0fa9b51af5e0ba159158f329e06e77",
    "d37ee418976dd95753c1c73862b9398fa2a2cf9b4ff0fdfe8b30cd95209614b7",
    "4e3bbb1f7b478dcfe71fb631631519a3bca12c9aefca1612bfce4c13a86264d4",
    "76e67dadbcdf1e10e1b74ddc608abd2f98dfb16fbce75277b5232a127f2087ef",
    "ddb89be403809e325750d3d263cd78929c2942b7942a34b77e122c9594a74c8c",
    "5dc9da79a70659a9ad559cb701ded9a2ab9d823aad2f4960cfe370eff4604328",
]
INCLUSION_5_OF_8 = [
    "bc1a0643b12e4d2d7c77918f44e0f4f79a838b6cf9ec5b5c283e1f4d88599e6b",
    "ca854ea128ed050b41b35ffc1b87b8eb2bde461e9e3b5596ece6b9d5975a0ae0",
    "d37ee418976dd95753c1c73862b9398fa2a2cf9b4ff0fdfe8b30cd95209614b7",
]
CONSISTENCY_6_TO_8 = [
    "0ebc5d3437fbe2db158b9f126a1d118e308181031d0a949f8dededebc558ef6a",
    "ca854ea128ed050b41b35ffc1b87b8eb2bde461e9e3b5596ece6b9d5975a0ae0",
    "d37ee418976dd95753c1c73862b9398fa2a2cf9b4ff0fdfe8b30cd95209614b7",
]

hashes = st.lists(st.binary(max_size=8), min_size=1, max_size=70).map(
    lambda rows: [merkle.leaf_hash(row) for row in rows]
)


def over(leaves: list[bytes]) -> merkle.Subtree:
    return lambda start, end: merkle.root(leaves[start:end])


def test_the_roots_are_those_of_the_published_vectors() -> None:
    leaves = [merkle.leaf_hash(leaf) for leaf in LEAVES]
    assert [merkle.root(leaves[:n]).hex() for n in range(9)] == ROOTS


def test_the_proofs_are_those_of_the_published_vectors() -> None:
    leaves = [merkle.leaf_hash(leaf) for leaf in LEAVES]
    path = merkle.inclusion(5, 8, over(leaves))
    assert [step.hex() for step in path] == INCLUSION_5_OF_8
    proof = merkle.consistency(6, 8, over(leaves))
    assert [step.hex() for step in proof] == CONSISTENCY_6_TO_8


@given(st.lists(st.binary(max_size=8), min_size=1, max_size=70))
def test_growing_leaf_by_leaf_gives_the_root_another_library_computes(rows) -> None:
    oracle = InmemoryTree(algorithm="sha256")
    for row in rows:
        oracle.append_entry(row)
    assert merkle.root([merkle.leaf_hash(row) for row in rows]) == oracle.get_root()


@given(hashes, st.data())
def test_every_leaf_is_proved_and_no_other_passes_for_it(leaves, data) -> None:
    index = data.draw(st.integers(0, len(leaves) - 1))
    path = merkle.inclusion(index, len(leaves), over(leaves))
    root = merkle.root(leaves)
    assert merkle.proves_inclusion(leaves[index], index, len(leaves), path, root)
    other = merkle.leaf_hash(b"something else entirely")
    assert not merkle.proves_inclusion(other, index, len(leaves), path, root)


@given(hashes, st.data())
def test_a_tree_proves_that_it_extends_what_it_was(leaves, data) -> None:
    old = data.draw(st.integers(1, len(leaves)))
    proof = merkle.consistency(old, len(leaves), over(leaves))
    before, after = merkle.root(leaves[:old]), merkle.root(leaves)
    assert merkle.proves_consistency(old, len(leaves), before, after, proof)
    changed = [merkle.leaf_hash(b"rewritten"), *leaves[1:]]
    if changed != leaves:
        rewritten = merkle.root(changed[:old])
        assert not merkle.proves_consistency(old, len(leaves), rewritten, after, proof)


@given(hashes, st.lists(st.binary(max_size=8), max_size=9))
def test_the_peaks_carry_a_tree_on_without_its_leaves(leaves, more) -> None:
    peaks: list[bytes] = []
    for size, leaf in enumerate(leaves):
        peaks = merkle.grow(peaks, size, leaf)
    for size, row in enumerate(more, start=len(leaves)):
        peaks = merkle.grow(peaks, size, merkle.leaf_hash(row))
    whole = [*leaves, *(merkle.leaf_hash(row) for row in more)]
    assert merkle.root_of(peaks) == merkle.root(whole)
