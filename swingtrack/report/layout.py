"""How a terminal page is laid out: aligned rows, tables, warnings with advice, never more lines than fit."""

from __future__ import annotations

import textwrap
from collections.abc import Sequence

from ..records import Doubt

WIDTH = 96
MOST_LINES = 25  # of a summary: what a small terminal window shows at once

Rows = list[tuple[str, str]]


def clean(text: str) -> str:
    """Text without control signs: names of files and articles are other people's, and a terminal obeys such signs."""
    return "".join(sign if sign.isprintable() else "?" for sign in text)


def table(rows: Rows) -> str:
    """Two aligned columns; only what is too long for one line is folded."""
    wide = max((len(name) for name, _ in rows), default=0) + 2
    lines = []
    for name, text in rows:
        folded = textwrap.wrap(clean(text), WIDTH - wide) or [""]
        lines.append(f"{name:<{wide}}{folded[0]}".rstrip())
        lines += [" " * wide + more for more in folded[1:]]
    return "\n".join(lines)


def columns(head: Sequence[str], body: Sequence[Sequence[str]], *, left: Sequence[int] = (0,)) -> list[str]:
    """A table with a line of names; the columns in `left` begin flush, the others end flush."""
    cells = [[clean(cell) for cell in row] for row in (head, *body)]
    wide = [max(len(row[index]) for row in cells) for index in range(len(head))]
    lines = []
    for row in cells:
        parts = [
            f"{cell:<{width}}" if index in left else f"{cell:>{width}}"
            for index, (cell, width) in enumerate(zip(row, wide, strict=True))
        ]
        lines.append(("  " + "  ".join(parts)).rstrip())
    return lines


def short(text: str, most: int) -> str:
    """A name cut to so many signs, with a sign that it was."""
    return text if len(text) <= most else text[: most - 1] + "…"


def advice_lines(advice: Sequence[str]) -> list[str]:
    """What to measure better, a folded line each."""
    return [
        line
        for text in advice
        for line in textwrap.wrap(f"advice: {clean(text)}", WIDTH, subsequent_indent="  ")
    ]


def page(rows: Rows, doubts: Sequence[Doubt], *, most_lines: int = MOST_LINES) -> str:
    """Rows and as many warnings as `most_lines` leave room for; the others by their code."""
    upper = table(rows)
    return upper + "\n" + doubt_lines(doubts, room=max(2, most_lines - upper.count("\n") - 1))


def doubt_lines(doubts: Sequence[Doubt], *, most: int = 20, room: int = 60) -> str:
    """Warnings, each with its advice, in at most `room` lines; those that find no room by their code."""
    if not doubts:
        return "no warnings"
    lines: list[str] = []
    shown = 0
    for doubt in doubts[:most]:
        block = textwrap.wrap(f"! {clean(doubt.message)} ({doubt.code})", WIDTH, subsequent_indent="  ")
        block += textwrap.wrap(
            f"→ {clean(doubt.advice)}", WIDTH, initial_indent="  ", subsequent_indent="    "
        )
        others = shown + 1 < len(doubts)
        if len(lines) + len(block) + others > room:
            break
        lines += block
        shown += 1
    if shown < len(doubts):
        codes = ", ".join(doubt.code for doubt in doubts[shown:])
        more = f"and {len(doubts) - shown} more: " if shown else f"{len(doubts)} warnings: "
        lines.append(textwrap.shorten(f"! {more}{codes}", WIDTH, placeholder=" …"))
    return "\n".join(lines)
