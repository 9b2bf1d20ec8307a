"""Records to text, figures and HTML; nothing is computed here."""

from __future__ import annotations

from importlib import import_module
from typing import TYPE_CHECKING, Any

if TYPE_CHECKING:
    from .combined import combined_text, solids_text, tensor_text
    from .figures import all_figures, figure_files
    from .plan import plan_figures, plan_text
    from .html import render_report
    from .rounding import rounded, show
    from .text import audit_text, inertia_text, stopwatch_text, summary_text

_HOMES = {
    "combined_text": "combined",
    "solids_text": "combined",
    "tensor_text": "combined",
    "all_figures": "figures",
    "figure_files": "figures",
    "render_report": "html",
    "plan_figures": "plan",
    "plan_text": "plan",
    "rounded": "rounding",
    "show": "rounding",
    "audit_text": "text",
    "inertia_text": "text",
    "stopwatch_text": "text",
    "summary_text": "text",
}

__all__ = [
    "all_figures",
    "audit_text",
    "combined_text",
    "figure_files",
    "inertia_text",
    "plan_figures",
    "plan_text",
    "render_report",
    "rounded",
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
