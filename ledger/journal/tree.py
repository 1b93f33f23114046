"""The Merkle tree of RFC 9162, section 2.1, as pure functions of hashes.

A *perfect subtree* is named by its level and index: level 0 are the leaves, and the subtree
(level, index) covers the leaves from ``index << level`` on, ``1 << level`` of them. The *edge* of a
tree are the hashes of the perfect subtrees that its size is made of, the largest first.
"""

from collections.abc import Callable, Iterable, Sequence
from hashlib import sha256

HASH_BYTES = 32
EMPTY_ROOT = sha256(b"").digest()

Edge = tuple[bytes, ...]
Read = Callable[[int, int], bytes]
"""Gives the hash of the perfect subtree (level, index)."""


def leaf_hash(data: bytes) -> bytes:
    """Return the hash of a leaf (RFC 9162, 2.1.1)."""
    return sha256(b"\x00" + data).digest()


def node_hash(left: bytes, right: bytes) -> bytes:
    """Return the hash of a node above two others (RFC 9162, 2.1.1)."""
    return sha256(b"\x01" + left + right).digest()


def extend(*, edge: Edge, size: int, leaves: Iterable[bytes]) -> Edge:
    """Return the edge of a tree of so many leaves after more leaf hashes were appended."""
    stack = list(edge)
    for node in leaves:
        carry = size
        while carry & 1:
            node = node_hash(stack.pop(), node)
            carry >>= 1
        stack.append(node)
        size += 1
    return tuple(stack)


def root_of_edge(edge: Edge) -> bytes:
    """Return the root of the tree that an edge stands for."""
    if not edge:
        return EMPTY_ROOT
    root = edge[-1]
    for left in reversed(edge[:-1]):
        root = node_hash(left, root)
    return root


def root_of_leaves(leaves: Iterable[bytes]) -> bytes:
    """Return the root over leaf hashes."""
    return root_of_edge(extend(edge=(), size=0, leaves=leaves))


def edge_of_size(*, size: int, read: Read) -> Edge:
    """Return the edge of the tree over the first leaves, reading perfect subtrees."""
    return _edge_of_span(read, 0, size)


def inclusion_proof(*, index: int, size: int, read: Read) -> tuple[bytes, ...]:
    """Return the audit path of a leaf (RFC 9162, 2.1.3.1), the sibling of the leaf first.

    :param index: counted from zero.
    """
    assert 0 <= index < size, "the leaf stands in the tree"
    start, stop = 0, size
    spans = []
    while stop - start > 1:
        middle = start + _split(stop - start)
        if index < middle:
            spans.append((middle, stop))
            stop = middle
        else:
            spans.append((start, middle))
            start = middle
    return tuple(_root_of_span(read, *span) for span in reversed(spans))


def consistency_proof(*, old_size: int, size: int, read: Read) -> tuple[bytes, ...]:
    """Return the proof that an older tree is a prefix of a tree (RFC 9162, 2.1.4.1).

    The proof is empty when the sizes are equal or the older tree has no leaf.
    """
    assert 0 <= old_size <= size, "the older tree is not the larger one"
    if old_size in (0, size):
        return ()
    start, stop = 0, size
    spans = []
    while stop > old_size:
        middle = start + _split(stop - start)
        if old_size <= middle:
            spans.append((middle, stop))
            stop = middle
        else:
            spans.append((start, middle))
            start = middle
    if start:
        spans.append((start, stop))
    return tuple(_root_of_span(read, *span) for span in reversed(spans))


def verify_inclusion(
    *, leaf: bytes, index: int, size: int, proof: Sequence[bytes], root: bytes
) -> bool:
    """Return whether a proof shows a leaf hash at an index of the tree (RFC 9162, 2.1.3.2)."""
    if not 0 <= index < size or not _are_hashes((leaf, root, *proof)):
        return False
    here, last = index, size - 1
    found = leaf
    for step in proof:
        if last == 0:
            return False
        if here & 1 or here == last:
            found = node_hash(step, found)
            here, last = _climb(here, last)
        else:
            found = node_hash(found, step)
        here, last = here >> 1, last >> 1
    return last == 0 and found == root


def verify_consistency(
    *, old_size: int, size: int, old_root: bytes, root: bytes, proof: Sequence[bytes]
) -> bool:
    """Return whether a proof shows the older tree to be a prefix (RFC 9162, 2.1.4.2)."""
    if not 0 <= old_size <= size or not _are_hashes((old_root, root, *proof)):
        return False
    if old_size == size:
        return not proof and old_root == root
    if old_size == 0:
        return not proof and old_root == EMPTY_ROOT
    if not proof:
        return False
    is_perfect = old_size & (old_size - 1) == 0
    first, *steps = (old_root, *proof) if is_perfect else proof
    here, last = old_size - 1, size - 1
    while here & 1:
        here, last = here >> 1, last >> 1
    old_found = found = first
    for step in steps:
        if last == 0:
            return False
        if here & 1 or here == last:
            old_found, found = node_hash(step, old_found), node_hash(step, found)
            here, last = _climb(here, last)
        else:
            found = node_hash(found, step)
        here, last = here >> 1, last >> 1
    return last == 0 and old_found == old_root and found == root


def _climb(here: int, last: int) -> tuple[int, int]:
    """Pass the levels on which the node stands alone at the right edge."""
    while here and not here & 1:
        here, last = here >> 1, last >> 1
    return here, last


def _are_hashes(values: Iterable[bytes]) -> bool:
    return all(len(value) == HASH_BYTES for value in values)


def _split(width: int) -> int:
    """Return the largest power of two below a width of two or more."""
    return 1 << ((width - 1).bit_length() - 1)


def _root_of_span(read: Read, start: int, stop: int) -> bytes:
    return root_of_edge(_edge_of_span(read, start, stop))


def _edge_of_span(read: Read, start: int, stop: int) -> Edge:
    edge = []
    width = stop - start
    for level in reversed(range(width.bit_length())):
        if width >> level & 1:
            edge.append(read(level, start >> level))
            start += 1 << level
    return tuple(edge)
