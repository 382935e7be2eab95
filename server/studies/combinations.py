"""Running combinations: the distinct on/off masks of the slots that may run together.

Identical slots (same pump, curve and leg) are counted once: n of them are the first n in slot
order. A jockey never runs with a main unit. The order is by number of units, then jockeys
before main units, then slot order: the order in which "fewest units" looks at them.
"""

from collections.abc import Iterable, Sequence
from itertools import product

import numpy as np

from server.studies.lowering.lowered import Flags, Slot

Mask = tuple[int, ...]  # slots that run, rising


def masks_of(slots: Sequence[Slot], may_run: Sequence[int]) -> tuple[Mask, ...]:
    """Return the distinct masks of some slots that may run together."""
    kinds: dict[int, list[int]] = {}
    for i in may_run:
        kinds.setdefault(slots[i].unit, []).append(i)
    groups = list(kinds.values())
    counts = product(*(range(len(group) + 1) for group in groups))
    masks = {
        tuple(sorted(i for group, n in zip(groups, count, strict=True) for i in group[:n]))
        for count in counts
    }
    return tuple(masks - {()})


def combinations_of(
    slots: Sequence[Slot], mains: Iterable[Sequence[int]], jockeys: Iterable[Sequence[int]]
) -> tuple[tuple[Mask, ...], Flags]:
    """Return all masks that some case allows, in order, and which case allows which.

    Parameters
    ----------
    slots : sequence of Slot, length N
        The set.
    mains, jockeys : iterable of sequence of int, length C
        Slots that may run in each case.

    Returns
    -------
    tuple
        K masks, and the allowance as (C, K).
    """
    cache: dict[tuple[int, ...], frozenset[Mask]] = {}

    def allowed(some: Sequence[int]) -> frozenset[Mask]:
        key = tuple(some)
        if key not in cache:
            cache[key] = frozenset(masks_of(slots, key))
        return cache[key]

    per_case = [allowed(m) | allowed(j) for m, j in zip(mains, jockeys, strict=True)]

    def rank(mask: Mask) -> tuple[int, bool, Mask]:
        return len(mask), slots[mask[0]].facts.role != "jockey", mask

    masks = tuple(sorted(frozenset().union(*per_case), key=rank))
    available = np.array(
        [[mask in some for mask in masks] for some in per_case], dtype=np.bool_
    )
    return masks, available.reshape(len(per_case), len(masks))


def as_flags(masks: Sequence[Mask], slot_count: int) -> Flags:
    """Return masks as an array (K, N)."""
    flags = np.zeros((len(masks), slot_count), dtype=np.bool_)
    for k, mask in enumerate(masks):
        flags[k, list(mask)] = True
    return flags


def unit_counts(slots: Sequence[Slot], mask: Sequence[int]) -> tuple[tuple[int, int], ...]:
    """Return (unit, how many) for a mask, in slot order of the units."""
    counts: dict[int, int] = {}
    for i in mask:
        counts[slots[i].unit] = counts.get(slots[i].unit, 0) + 1
    return tuple(counts.items())
