"""report.html: one self-contained file that needs no network, no server and, but for its zoom, no script."""

from __future__ import annotations

import base64
import hashlib
import math
from collections.abc import Mapping
from functools import cache
from importlib.resources import files
from typing import Any

from markupsafe import Markup

from ..records import Measurement
from .figures import drawings
from .inline_svg import inline_svg
from .numbers import Numbers
from .plot_data import plot_data
from .units import second_moment_unit, shown_in


def render_report(measurement: Measurement, *, result: Mapping[str, Any], still_png: bytes | None) -> str:
    """The report of one measurement as HTML text.

    Parameters
    ----------
    measurement : Measurement
        For the figures.
    result : mapping
        The result.json document of the same measurement: every number in the text is taken from it.
    still_png : bytes or None
        Picture of the clip with the dot and its path (PNG, or JPEG).

    Names and texts from outside are escaped; the page's own policy forbids it to fetch or run anything else.
    """
    swing, inertia = measurement.swing, result.get("inertia")
    return render_page(
        "report.html.j2",
        n=Numbers(result),
        figures={drawing.name: drawing for drawing in drawings(measurement)},
        still=None if still_png is None else data_url(still_png),
        plot=None if swing is None else plot_data(swing.trace),
        budget=ranked(inertia["budget"]) if inertia else [],
        second_unit=second_moment_unit(moment_of(inertia)),
        interval_digits=_interval_digits(inertia),
    )


def render_page(template: str, **context: Any) -> str:
    """A template with the page's style and script, and a policy that allows these and nothing else."""
    style, script = source("page.css"), source("plot.js")
    # Styles can't be allowed by hash alone: bars and figures carry theirs in attributes.
    policy = (
        "default-src 'none'; img-src data:; style-src 'unsafe-inline'; "
        f"script-src 'sha256-{_hash(script)}'; base-uri 'none'; form-action 'none'"
    )
    page = _environment().get_template(template)
    rendered: str = page.render(
        policy=policy,
        css=Markup(style),
        script=Markup(script),
        inline=inline_svg,
        degree=shown_in("rad", 1.0)[1],
        **context,
    )
    return rendered


@cache
def source(name: str) -> str:
    """Text of a file beside the templates."""
    return files(__package__).joinpath("templates", name).read_text(encoding="utf-8")


def data_url(picture: bytes) -> str:
    """A PNG or JPEG picture as an address that holds it."""
    kind = "jpeg" if picture.startswith(b"\xff\xd8") else "png"
    return f"data:image/{kind};base64,{base64.b64encode(picture).decode()}"


def ranked(lines: list[Mapping[str, Any]]) -> list[dict[str, Any]]:
    """Budget lines, the largest share first, each with its place in the document."""
    return sorted(
        ({**line, "index": index} for index, line in enumerate(lines)), key=lambda line: -line["share"]
    )


def moment_of(part: Mapping[str, Any] | None) -> float:
    """Size of the moment in a document's part, for the choice of a unit."""
    entry = None if part is None else part.get("moment_kg_m2")
    return 1.0 if entry is None else float(entry["value"])


def _interval_digits(inertia: Mapping[str, Any] | None) -> int:
    """Significant digits at which an interval's ends are as fine as the uncertainty's second digit."""
    drawn = None if inertia is None else inertia.get("monte_carlo")
    if drawn is None or not drawn["u"]:
        return 6
    return max(2, 2 + math.floor(math.log10(abs(drawn["value"]))) - math.floor(math.log10(drawn["u"])))


def _hash(script: str) -> str:
    return base64.b64encode(hashlib.sha256(script.encode()).digest()).decode()


@cache
def _environment() -> Any:
    import jinja2

    return jinja2.Environment(
        loader=jinja2.PackageLoader("swingtrack.report", "templates"),
        autoescape=True,
        trim_blocks=True,
        lstrip_blocks=True,
        undefined=jinja2.StrictUndefined,
    )
