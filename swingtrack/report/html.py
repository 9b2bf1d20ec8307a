"""report.html: one self-contained file (first version)."""

from __future__ import annotations

import base64
from collections.abc import Mapping
from typing import Any

from ..records import Measurement
from .figures import all_figures
from .look import save
from .rounding import show


def render_report(measurement: Measurement, *, result: Mapping[str, Any], still_png: bytes | None) -> str:
    """The report as HTML text; file names and rig texts are escaped, nothing is fetched."""
    import jinja2

    environment = jinja2.Environment(
        loader=jinja2.PackageLoader("swingtrack.report", "templates"),
        autoescape=True,
        trim_blocks=True,
        lstrip_blocks=True,
    )
    environment.globals["show"] = show
    figures = {name: save(figure, "svg").decode() for name, figure in all_figures(measurement).items()}
    figures = {name: svg[svg.index("<svg") :] for name, svg in figures.items()}
    still = None if still_png is None else base64.b64encode(still_png).decode()
    return environment.get_template("report.html.j2").render(
        m=measurement, result=result, figures=figures, still=still
    )
