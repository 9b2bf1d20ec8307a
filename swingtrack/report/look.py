"""The look that all figures share: colours, plain axes with a quantity and a unit, files that are the same every time.

Colours start from the idea of Okabe and Ito (2008, "Color universal design"): blue, vermilion and yellow differ in
hue and in lightness, so that readers with any one kind of colour blindness tell them apart. They are darker
than theirs to stand on paper; tests/report/test_look.py holds their distances. Marks differ in shape as well.
"""

from __future__ import annotations

import io
from collections.abc import Iterator
from contextlib import contextmanager
from threading import RLock
from typing import Any

INK = "#22282e"
FAINT = "#848b92"
PAPER = "#fcfbf7"
SHADE = "#ece7dc"
DATA = "#1b6a8c"  # what was measured
FIT = "#b5391a"  # what was fitted or predicted
THIRD = "#a98d10"  # whatever else stands beside them

# The same five on a dark page; the report swaps them, files keep the light ones.
DARK = {
    INK: "#ece7dd",
    FAINT: "#87919a",
    PAPER: "#171c20",
    SHADE: "#2a3137",
    DATA: "#6fb7d6",
    FIT: "#ef7f52",
    THIRD: "#e3cf57",
}

NOT_OURS = ("backend", "interactive", "toolbar")  # of the process; setting them may ask for a screen
WIDE, HALF = (7.2, 4.8), (5.4, 3.3)  # inches: a page's width, and half of a wide screen
DOTS_PER_INCH = 180  # of PNG files: sharp in print at half a page's width

_ONE_AT_A_TIME = RLock()


@contextmanager
def our_settings() -> Iterator[None]:
    """Draw and save with the same settings whatever the machine's own are, one thread at a time.

    Matplotlib's settings belong to the process: two threads that set and unset them would trip each other.
    """
    import matplotlib

    wanted: Any = {
        **{name: value for name, value in matplotlib.rcParamsDefault.items() if name not in NOT_OURS},
        "font.size": 9.5,
        "axes.labelsize": 9.5,
        "xtick.labelsize": 8.5,
        "ytick.labelsize": 8.5,
        "text.parse_math": False,  # names are other people's: a "$" in one is no formula
        "svg.fonttype": "none",  # letters stay letters: searchable, and in the page's own type
        "svg.hashsalt": "swingtrack",  # without it the ids in an SVG differ at every run
    }
    with _ONE_AT_A_TIME, matplotlib.rc_context(wanted):
        yield


def new_figure(size: tuple[float, float] = HALF) -> Any:
    """An empty figure, inches; no pyplot, so that nothing needs a screen."""
    from matplotlib.figure import Figure

    return Figure(figsize=size, layout="constrained")


def plain(ax: Any, x: str, y: str) -> Any:
    """Label both axes with quantity and unit and take the box away."""
    ax.set_xlabel(x, color=INK)
    ax.set_ylabel(y, color=INK)
    ax.tick_params(colors=INK, length=3, width=0.8)
    for side in ("top", "right"):
        ax.spines[side].set_visible(False)
    for side in ("left", "bottom"):
        ax.spines[side].set_color(FAINT)
    for axis in (ax.xaxis, ax.yaxis):
        if hasattr(axis.get_major_formatter(), "set_useOffset"):
            axis.get_major_formatter().set_useOffset(False)  # a period of "+3.1" and thousandths helps nobody
    ax.patch.set_alpha(0.0)
    return ax


def key(ax: Any, *, enlarged: float = 1.0, **place: Any) -> None:
    """The legend, without a box, where there is something to tell apart; marks drawn as dust are `enlarged` in it."""
    handles, _ = ax.get_legend_handles_labels()
    if handles:
        ax.legend(
            frameon=False, fontsize=8.5, labelcolor=INK, handlelength=1.6, markerscale=enlarged, **place
        )


def say(ax: Any, text: str) -> None:
    """A word in the middle of axes that have nothing to show."""
    ax.text(0.5, 0.5, text, ha="center", va="center", transform=ax.transAxes, color=INK)


def save(figure: Any, kind: str, *, clear: bool = False) -> bytes:
    """The figure as "png" or "svg" bytes, the same for the same input; `clear` leaves the paper out."""
    stream = io.BytesIO()
    with our_settings():
        figure.savefig(
            stream,
            format=kind,
            dpi=DOTS_PER_INCH,
            metadata={"Date": None, "Creator": None} if kind == "svg" else {"Software": None},
            facecolor="none" if clear else PAPER,
            edgecolor="none",
        )
    return stream.getvalue()
