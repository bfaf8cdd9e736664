"""Why the totals of a line changed: the share of each group of inputs, averaged over the orders of changing them.

The share of a group is the mean, over every order in which the groups can be changed one after the other, of what the
total moves by when it is that group's turn (Shapley's value). The shares add up to the whole change.
"""

from __future__ import annotations

import random
from collections.abc import Sequence
from dataclasses import dataclass
from itertools import combinations, pairwise
from math import comb

import numpy as np

from pipeflow.arrays import Array
from pipeflow.record.mixes import Group, Line, Transition, totals

EXACT_UP_TO = 8
"""Groups up to which every order is taken, by 2**8 mixed lines."""
ORDERS = 128
"""Orders taken of more groups, and as many again from their ends."""
SEED = 20
PROGRAM = "program"


@dataclass(frozen=True)
class Explanation:
    """The change of the totals of one line, parted.

    Attributes
    ----------
    groups : tuple of str
        The groups of inputs that changed, and last ``program``: what the same inputs give now against what was stored.
    parts : Array
        Shape (groups, totals), m and Pa, totals as in :data:`pipeflow.record.comparison.TOTALS`; columns add up to the
        change.
    orders : int or None
        Orders averaged over where there were too many to take each; None for all of them.
    """

    groups: tuple[str, ...]
    parts: Array
    orders: int | None = None


def explain(before: Line, after: Line, change: Array) -> Explanation | None:
    """Part the change of the totals among the groups of inputs.

    Parameters
    ----------
    before, after : Line
        The inputs.
    change : Array
        What each total moved by, from the stored figure to the new one, m and Pa.

    Returns
    -------
    Explanation or None
        None where a mixture of old and new inputs has no answer.
    """
    groups = Transition(before, after).groups()
    exact = len(groups) <= EXACT_UP_TO
    parts = _over_all_orders(before, after, groups) if exact else _over_some_orders(before, after, groups)
    if not np.all(np.isfinite(parts)):
        return None
    left = change - parts.sum(axis=0)
    names = tuple(" and ".join(sorted(group)) for group in groups)
    return Explanation((*names, PROGRAM), np.vstack([parts, left]), None if exact else 2 * ORDERS)


def _figures(before: Line, after: Line, sets: Sequence[frozenset[Group]]) -> dict[frozenset[Group], Array]:
    transition = Transition(before, after)
    solved = totals([transition.mixed(frozenset().union(*chosen)) for chosen in sets])
    return dict(zip(sets, solved, strict=True))


def _over_all_orders(before: Line, after: Line, groups: tuple[Group, ...]) -> Array:
    """``sum over S without i of |S|! (n-|S|-1)!/n! [v(S + i) - v(S)]`` for each group i."""
    count = len(groups)
    sets = [frozenset(chosen) for size in range(count + 1) for chosen in combinations(groups, size)]
    value = _figures(before, after, sets)
    parts = np.zeros((count, next(iter(value.values())).size))
    for place, group in enumerate(groups):
        for chosen in sets:
            if group not in chosen:
                weight = 1.0 / (count * comb(count - 1, len(chosen)))
                parts[place] += weight * (value[chosen | {group}] - value[chosen])
    return parts


def _over_some_orders(before: Line, after: Line, groups: tuple[Group, ...]) -> Array:
    """Mean over orders drawn from a fixed seed, each with its reverse; every order adds up to the whole."""
    draw = random.Random(SEED)
    orders = [draw.sample(range(len(groups)), len(groups)) for _ in range(ORDERS)]
    orders += [order[::-1] for order in orders]
    steps = [[frozenset(groups[i] for i in order[:size]) for size in range(len(order) + 1)] for order in orders]
    value = _figures(before, after, list(dict.fromkeys(chosen for along in steps for chosen in along)))
    parts = np.zeros((len(groups), next(iter(value.values())).size))
    for order, along in zip(orders, steps, strict=True):
        for place, (chosen, larger) in zip(order, pairwise(along), strict=True):
            parts[place] += (value[larger] - value[chosen]) / len(orders)
    return parts
