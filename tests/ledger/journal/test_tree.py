"""The Merkle tree against published hashes and proofs, and against its own definition.

The hashes and proofs of a tree of eight leaves are those of the repository
transparency-dev/merkle (testonly/constants.go, proof/verify_test.go); the definition is RFC 9162,
section 2.1.
"""

from hashlib import sha256
from typing import Any

import pytest
from hypothesis import given
from hypothesis import strategies as st

from ledger.journal import tree

LEAVES = tuple(
    tree.leaf_hash(bytes.fromhex(data))
    for data in (
        "",
        "00",
        "10",
        "2021",
        "3031",
        "40414243",
        "5051525354555657",
        "606162636465666768696a6b6c6d6e6f",
    )
)

ROOTS = {
    "MT-00": (0, "e3b0c44298fc1c149afbf4c8996fb92427ae41e4649b934ca495991b7852b855"),
    "MT-01": (1, "6e340b9cffb37a989ca544e6bb780a2c78901d3fb33738768511a30617afa01d"),
    "MT-02": (2, "fac54203e7cc696cf0dfcb42c92a1d9dbaf70ad9e621f4bd8d98662f00e3c125"),
    "MT-03": (3, "aeb6bcfe274b70a14fb067a5e5578264db0fa9b51af5e0ba159158f329e06e77"),
    "MT-04": (4, "d37ee418976dd95753c1c73862b9398fa2a2cf9b4ff0fdfe8b30cd95209614b7"),
    "MT-05": (5, "4e3bbb1f7b478dcfe71fb631631519a3bca12c9aefca1612bfce4c13a86264d4"),
    "MT-06": (6, "76e67dadbcdf1e10e1b74ddc608abd2f98dfb16fbce75277b5232a127f2087ef"),
    "MT-07": (7, "ddb89be403809e325750d3d263cd78929c2942b7942a34b77e122c9594a74c8c"),
    "MT-08": (8, "5dc9da79a70659a9ad559cb701ded9a2ab9d823aad2f4960cfe370eff4604328"),
}

_A = "96a296d224f285c67bee93c30f8a309157f0daa35dc5b87e410b78630a09cfc7"
_B = "5f083f0a1a33ca076a95279832580db3e0ef4584bdff1f54c8a360f50de3031e"
_C = "6b47aaf29ee3c2af9af889bc1fb9254dabd31177f16232dd6aab035ca39bf6e4"
_D = "bc1a0643b12e4d2d7c77918f44e0f4f79a838b6cf9ec5b5c283e1f4d88599e6b"
_E = "ca854ea128ed050b41b35ffc1b87b8eb2bde461e9e3b5596ece6b9d5975a0ae0"
_F = "d37ee418976dd95753c1c73862b9398fa2a2cf9b4ff0fdfe8b30cd95209614b7"
_G = "0ebc5d3437fbe2db158b9f126a1d118e308181031d0a949f8dededebc558ef6a"

INCLUSIONS = {
    "MT-11": (0, 8, (_A, _B, _C)),
    "MT-12": (5, 8, (_D, _E, _F)),
    "MT-13": (2, 3, (ROOTS["MT-02"][1],)),
    "MT-14": (1, 5, (ROOTS["MT-01"][1], _B, _D)),
}
CONSISTENCIES = {
    "MT-21": (1, 8, (_A, _B, _C)),
    "MT-22": (6, 8, (_G, _E, _F)),
    "MT-23": (2, 5, (_B, _D)),
    "MT-24": (
        6,
        7,
        (_G, "b08693ec2e721597130641e8211e7eedccb4c26413963eee6c1e2ed16ffb1a5f", _F),
    ),
}


def _recursive_root(leaves: tuple[bytes, ...]) -> bytes:
    """The definition of RFC 9162, 2.1.1, word for word: the tests' own second way."""
    if not leaves:
        return sha256(b"").digest()
    if len(leaves) == 1:
        return leaves[0]
    split = 1
    while split * 2 < len(leaves):
        split *= 2
    left, right = _recursive_root(leaves[:split]), _recursive_root(leaves[split:])
    return sha256(b"\x01" + left + right).digest()


def _reader(leaves: tuple[bytes, ...]) -> tree.Read:
    return lambda level, index: _recursive_root(leaves[index << level : (index + 1) << level])


def _flip(value: bytes, bit: int) -> bytes:
    return bytes(byte ^ (1 << bit % 8 if at == bit // 8 else 0) for at, byte in enumerate(value))


MANY = tuple(tree.leaf_hash(bytes([at])) for at in range(64))
ROOT_OF = tuple(_recursive_root(MANY[:size]) for size in range(65))


@pytest.mark.parametrize(("size", "root"), ROOTS.values(), ids=ROOTS)
def test_published_roots(size: int, root: str) -> None:
    assert tree.root_of_leaves(LEAVES[:size]).hex() == root


@pytest.mark.parametrize(("index", "size", "path"), INCLUSIONS.values(), ids=INCLUSIONS)
def test_published_inclusion_proofs(index: int, size: int, path: tuple[str, ...]) -> None:
    proof = tree.inclusion_proof(index=index, size=size, read=_reader(LEAVES))
    assert tuple(step.hex() for step in proof) == path
    assert tree.verify_inclusion(
        leaf=LEAVES[index],
        index=index,
        size=size,
        proof=proof,
        root=bytes.fromhex(ROOTS[f"MT-0{size}"][1]),
    )


@pytest.mark.parametrize(("old", "size", "path"), CONSISTENCIES.values(), ids=CONSISTENCIES)
def test_published_consistency_proofs(old: int, size: int, path: tuple[str, ...]) -> None:
    proof = tree.consistency_proof(old_size=old, size=size, read=_reader(LEAVES))
    assert tuple(step.hex() for step in proof) == path
    assert tree.verify_consistency(
        old_size=old,
        size=size,
        old_root=bytes.fromhex(ROOTS[f"MT-0{old}"][1]),
        root=bytes.fromhex(ROOTS[f"MT-0{size}"][1]),
        proof=proof,
    )


@given(parts=st.lists(st.lists(st.binary(max_size=4), max_size=9), max_size=9))
def test_edge_grown_in_parts_gives_the_recursive_root(parts: list[list[bytes]]) -> None:
    edge: tree.Edge = ()
    leaves: tuple[bytes, ...] = ()
    for part in parts:
        hashes = tuple(map(tree.leaf_hash, part))
        edge = tree.extend(edge=edge, size=len(leaves), leaves=hashes)
        leaves += hashes
    assert tree.root_of_edge(edge) == _recursive_root(leaves)
    assert edge == tree.edge_of_size(size=len(leaves), read=_reader(leaves))


@pytest.mark.parametrize("size", range(1, 65))
def test_every_inclusion_proof_holds_and_only_for_its_place(size: int) -> None:
    for index in range(size):
        proof = tree.inclusion_proof(index=index, size=size, read=_reader(MANY))
        for claimed in range(-1, size + 1):
            holds = tree.verify_inclusion(
                leaf=MANY[index], index=claimed, size=size, proof=proof, root=ROOT_OF[size]
            )
            assert holds == (claimed == index)


@pytest.mark.parametrize("size", range(65))
def test_every_consistency_proof_holds_and_only_for_its_size(size: int) -> None:
    for old in range(size + 1):
        proof = tree.consistency_proof(old_size=old, size=size, read=_reader(MANY))
        for claimed in range(65):
            holds = tree.verify_consistency(
                old_size=claimed,
                size=size,
                old_root=ROOT_OF[old],
                root=ROOT_OF[size],
                proof=proof,
            )
            assert holds == (claimed == old)


@given(data=st.data())
def test_spoilt_inclusion_proofs_are_refused(data: st.DataObject) -> None:
    size = data.draw(st.integers(2, 64))
    index = data.draw(st.integers(0, size - 1))
    proof = tree.inclusion_proof(index=index, size=size, read=_reader(MANY))
    leaf, root = MANY[index], ROOT_OF[size]
    at = data.draw(st.integers(0, len(proof) - 1))
    bit = data.draw(st.integers(0, 255))
    flipped = _flip(proof[at], bit)

    def holds(
        *,
        leaf: bytes = leaf,
        size: int = size,
        proof: tuple[bytes, ...] = proof,
        root: bytes = root,
    ) -> bool:
        return tree.verify_inclusion(leaf=leaf, index=index, size=size, proof=proof, root=root)

    assert holds()
    assert not holds(proof=(*proof[:at], flipped, *proof[at + 1 :]))
    assert not holds(proof=(*proof[:at], *proof[at + 1 :]))
    assert not holds(proof=(flipped, *proof))
    assert not holds(proof=(*proof, flipped))
    assert not holds(proof=())
    assert not holds(proof=(proof[0][:-1], *proof[1:]))
    assert not holds(leaf=_flip(leaf, bit))
    assert not holds(root=_flip(root, bit))
    assert not holds(size=2 * size)
    assert not holds(size=size // 2)


@given(data=st.data())
def test_spoilt_consistency_proofs_are_refused(data: st.DataObject) -> None:
    size = data.draw(st.integers(2, 64))
    old = data.draw(st.integers(1, size - 1))
    proof = tree.consistency_proof(old_size=old, size=size, read=_reader(MANY))
    roots = ROOT_OF[old], ROOT_OF[size]
    at = data.draw(st.integers(0, len(proof) - 1))
    flipped = _flip(proof[at], data.draw(st.integers(0, 255)))

    def holds(
        *,
        proof: tuple[bytes, ...] = proof,
        roots: tuple[bytes, bytes] = roots,
        size: int = size,
        old: int = old,
    ) -> bool:
        return tree.verify_consistency(
            old_size=old, size=size, old_root=roots[0], root=roots[1], proof=proof
        )

    assert holds()
    assert not holds(proof=(*proof[:at], flipped, *proof[at + 1 :]))
    assert not holds(proof=(*proof[:at], *proof[at + 1 :]))
    assert not holds(proof=(flipped, *proof))
    assert not holds(proof=(*proof, flipped))
    assert not holds(proof=())
    assert not holds(roots=(roots[1], roots[0]))
    assert not holds(size=2 * size)
    assert not holds(old=size, size=old)


def test_equal_sizes_need_an_empty_proof_and_equal_roots() -> None:
    same: dict[str, Any] = {"old_size": 5, "size": 5, "old_root": ROOT_OF[5]}
    assert tree.verify_consistency(**same, root=ROOT_OF[5], proof=())
    assert not tree.verify_consistency(**same, root=ROOT_OF[5], proof=(MANY[0],))
    assert not tree.verify_consistency(**same, root=ROOT_OF[6], proof=())


def test_the_empty_tree_is_a_prefix_of_every_tree() -> None:
    empty: dict[str, Any] = {"old_size": 0, "size": 5, "root": ROOT_OF[5]}
    assert tree.verify_consistency(**empty, old_root=ROOT_OF[0], proof=())
    assert not tree.verify_consistency(**empty, old_root=ROOT_OF[1], proof=())
    assert not tree.verify_consistency(**empty, old_root=ROOT_OF[0], proof=(MANY[0],))
