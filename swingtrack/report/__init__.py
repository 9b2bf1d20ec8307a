"""Records to text, figures and HTML; nothing is computed here."""

from __future__ import annotations

from importlib import import_module
from typing import TYPE_CHECKING, Any

if TYPE_CHECKING:
    from .combined import combined_text, solids_text, tensor_text
    from .figures import all_figures, figure_files
    from .html import render_report
    from .notebook import notebook_html
    from .plan import plan_figures, plan_text
    from .rounding import rounded, show
    from .series import render_series, series_files
    from .text import audit_text, inertia_text, stopwatch_text, summary_text

_HOMES = {
    "all_figures": "figures",
    "audit_text": "text",
    "combined_text": "combined",
    "figure_files": "figures",
    "inertia_text": "text",
    "notebook_html": "notebook",
    "plan_figures": "plan",
    "plan_text": "plan",
    "render_report": "html",
    "render_series": "series",
    "rounded": "rounding",
    "series_files": "series",
    "show": "rounding",
    "solids_text": "combined",
    "stopwatch_text": "text",
    "summary_text": "text",
    "tensor_text": "combined",
}

__all__ = [
    "all_figures",
    "audit_text",
    "combined_text",
    "figure_files",
    "inertia_text",
    "notebook_html",
    "plan_figures",
    "plan_text",
    "render_report",
    "render_series",
    "rounded",
    "series_files",
    "show",
    "solids_text",
    "stopwatch_text",
    "summary_text",
    "tensor_text",
]


def __getattr__(name: str) -> Any:
    """Load each name's module on first use: matplotlib takes most of a second."""
    if name in _HOMES:
        return getattr(import_module(f".{_HOMES[name]}", __name__), name)
    raise AttributeError(f"module {__name__!r} has no attribute {name!r}")
