"""How records show themselves in a notebook: a small table, rounded by the one rule, warnings below it.

`notebook_html` takes any record of `records.py`; the records call it from their `_repr_html_`.
"""

from __future__ import annotations

import dataclasses
from collections.abc import Mapping
from typing import Any

from markupsafe import Markup

from ..records import Doubt, Inertia, Measurement, Path, Quantity, Stopwatch, Swing
from .layout import Rows
from .rounding import bare, show
from .text import inertia_rows, path_rows, stopwatch_rows, swing_rows
from .units import shown_in

MOST_ROWS = 30


def notebook_html(record: Any) -> str:
    """A record as a table in HTML; everything in it is escaped.

    Examples
    --------
    >>> notebook_html(Quantity(1.128403, 0.0001234, "s"))
    '<span>1.12840 ± 0.00012 s</span>'
    """
    if isinstance(record, Quantity):
        return str(Markup("<span>{}</span>").format(_quantity(record)))
    rows = _rows(record)
    body = Markup("").join(
        Markup(
            '<tr><th scope="row" style="text-align:left;font-weight:normal">{}</th><td style="text-align:left">{}</td></tr>'
        ).format(name, text)
        for name, text in rows[:MOST_ROWS]
    )
    table = Markup("<table><caption>{}</caption><tbody>{}</tbody></table>").format(_title(record), body)
    return str(table + _warnings(getattr(record, "doubts", ())))


def _rows(record: Any) -> Rows:
    if isinstance(record, Measurement):
        parts = (record.inertia, record.swing, record.path, record.stopwatch)
        return [row for part in parts if part is not None for row in _rows(part)]
    if isinstance(record, Inertia):
        return inertia_rows(record)
    if isinstance(record, Swing):
        return swing_rows(record)
    if isinstance(record, Stopwatch):
        return stopwatch_rows(record)
    if isinstance(record, Path):
        return [("frames", str(len(record.t_s))), *path_rows(record)]
    return [
        (field.name.replace("_", " "), _any(getattr(record, field.name)))
        for field in dataclasses.fields(record)
    ]


def _any(value: Any) -> str:
    """What a field holds, in a few words."""
    if isinstance(value, Quantity):
        return _quantity(value)
    if isinstance(value, float):
        return bare(value, 6)
    if isinstance(value, Mapping):
        return "; ".join(f"{key}: {_any(entry)}" for key, entry in value.items())
    if hasattr(value, "shape"):
        return f"array {value.shape}"
    if dataclasses.is_dataclass(value):
        return type(value).__name__
    if isinstance(value, tuple):
        return ", ".join(_any(entry) for entry in value) if len(value) <= 6 else f"{len(value)} entries"
    return str(value)


def _quantity(quantity: Quantity) -> str:
    unit, scale = shown_in(quantity.unit, quantity.value)
    return show(quantity, unit, scale=scale)


def _title(record: Any) -> str:
    if isinstance(record, Measurement) and record.rig is not None:
        return record.rig.article.name
    return type(record).__name__


def _warnings(doubts: tuple[Doubt, ...]) -> Markup:
    if not doubts:
        return Markup("")
    lines = (Markup("<li><b>{}</b> {} <i>({})</i></li>").format(d.message, d.advice, d.code) for d in doubts)
    return Markup("<ul>{}</ul>").format(Markup("").join(lines))
