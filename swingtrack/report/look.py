"""The look that all figures share: colours that colour-blind readers tell apart, plain axes, units on each."""

from __future__ import annotations

from typing import Any

INK = "#23303b"
FAINT = "#9aa5ad"
DATA = "#2b6c8f"  # deep water blue
FIT = "#c8553d"  # clay
SHADE = "#ece7de"
THIRD = "#7a8f3c"

MOST_POINTS = 4000  # drawn of a long series: beyond it the picture looks the same and the file does not


def new_figure(width: float = 7.2, height: float = 4.2) -> Any:
    """An empty figure, inches; no pyplot, so that nothing needs a screen."""
    from matplotlib.figure import Figure

    return Figure(figsize=(width, height), layout="constrained")


def plain(ax: Any, x: str, y: str) -> Any:
    """Label both axes with quantity and unit and take the box away."""
    ax.set_xlabel(x, color=INK)
    ax.set_ylabel(y, color=INK)
    ax.tick_params(colors=INK, labelsize=8)
    for side in ("top", "right"):
        ax.spines[side].set_visible(False)
    for side in ("left", "bottom"):
        ax.spines[side].set_color(FAINT)
    ax.grid(visible=True, color=FAINT, alpha=0.25, linewidth=0.6)
    return ax


def save(figure: Any, kind: str) -> bytes:
    """The figure as "png" or "svg" bytes, the same for the same input."""
    import io

    from matplotlib import rc_context

    stream = io.BytesIO()
    # Without a salt and a date the ids and the metadata of an SVG differ at every run.
    with rc_context({"svg.hashsalt": "swingtrack", "svg.fonttype": "none"}):
        metadata = {"Date": None} if kind == "svg" else {"Software": None}
        figure.savefig(stream, format=kind, dpi=150, metadata=metadata)
    return stream.getvalue()
