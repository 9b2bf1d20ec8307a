"""Which inputs were measured together, and how strongly they go together."""

from __future__ import annotations

from collections.abc import Mapping

from ..records import Quantity

Correlations = Mapping[tuple[str, str], float]


def correlation(related: Correlations, first: str, second: str) -> float:
    """Correlation coefficient of two inputs, named in either order; 1 of an input with itself, 0 where none is given."""
    if first == second:
        return 1.0
    return related.get((first, second), related.get((second, first), 0.0))


def groups_of(inputs: Mapping[str, Quantity], related: Correlations) -> tuple[tuple[str, ...], ...]:
    """Inputs that hang together by correlations, each group in the order of the inputs.

    Raises
    ------
    ValueError
        A correlation names an unknown or an exact input or lies outside −1 to 1; inputs of a group have different
        degrees of freedom.

    Examples
    --------
    >>> three = {name: Quantity(1.0, 0.1, "1") for name in "abc"}
    >>> groups_of(three, {("c", "a"): 0.3})
    (('a', 'c'),)
    """
    home: dict[str, set[str]] = {}
    for (first, second), r in related.items():
        if not -1.0 <= r <= 1.0:
            raise ValueError(f"correlation of {first} and {second} is {r:g}; it lies between -1 and 1")
        for name in (first, second):
            if name not in inputs or not inputs[name].u > 0.0:
                raise ValueError(f"{name} is correlated, but is no input with an uncertainty")
        joined = home.get(first, {first}) | home.get(second, {second})
        for name in joined:
            home[name] = joined
    found: list[tuple[str, ...]] = []
    for name in inputs:
        if name in home and not any(name in group for group in found):
            group = tuple(other for other in inputs if other in home[name])
            if len({inputs[other].dof for other in group}) > 1:
                raise ValueError(f"{', '.join(group)} are correlated, but differ in degrees of freedom")
            found.append(group)
    return tuple(found)
