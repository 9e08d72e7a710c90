"""Strongly connected components of a graph, in an order in which each comes after those that it reads."""

from __future__ import annotations

from collections.abc import Iterable, Iterator, Sequence


def strongly_connected(edges: Sequence[Iterable[int]]) -> Iterator[list[int]]:
    """Yield the strongly connected components, precedents first (Tarjan 1972, without recursion).

    Parameters
    ----------
    edges : sequence of iterables of int
        For each node the nodes that it reads.

    Examples
    --------
    >>> list(strongly_connected([[1], [2], [], [0, 3]]))
    [[2], [1], [0], [3]]
    """
    number = [-1] * len(edges)
    low = [0] * len(edges)
    on_stack = bytearray(len(edges))
    stack: list[int] = []
    count = 0
    for root in range(len(edges)):
        if number[root] >= 0:
            continue
        number[root] = low[root] = count
        count += 1
        stack.append(root)
        on_stack[root] = 1
        work = [(root, iter(edges[root]))]
        while work:
            node, targets = work[-1]
            for target in targets:
                if number[target] < 0:
                    number[target] = low[target] = count
                    count += 1
                    stack.append(target)
                    on_stack[target] = 1
                    work.append((target, iter(edges[target])))
                    break
                if on_stack[target]:
                    low[node] = min(low[node], number[target])
            else:
                work.pop()
                if work:
                    low[work[-1][0]] = min(low[work[-1][0]], low[node])
                if low[node] == number[node]:
                    component = []
                    while True:
                        member = stack.pop()
                        on_stack[member] = 0
                        component.append(member)
                        if member == node:
                            break
                    yield component
