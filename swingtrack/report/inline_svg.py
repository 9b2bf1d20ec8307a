"""A figure's SVG made part of a page: named for those who can't see it, in the page's type and colours, day and night."""

from __future__ import annotations

import re

from markupsafe import Markup

from .figures import Drawing
from .look import DATA, FAINT, FIT, INK, PAPER, SHADE, THIRD, save

VARIABLES = {
    INK: "--ink",
    FAINT: "--faint",
    PAPER: "--paper",
    SHADE: "--shade",
    DATA: "--data",
    FIT: "--fit",
    THIRD: "--third",
}


def inline_svg(drawing: Drawing) -> Markup:
    """The drawing as an `<svg role="img">` element with title and description."""
    svg = save(drawing.figure, "svg", clear=True).decode()
    svg = svg[svg.index("<svg") :]
    svg = re.sub(r"<metadata>.*?</metadata>", "", svg, flags=re.DOTALL)
    svg = re.sub(r"<defs>\s*<style.*?</style>\s*</defs>", "", svg, flags=re.DOTALL)
    # Several figures share a page: their ids must not.
    svg = re.sub(r'\bid="([^"]+)"', rf'id="{drawing.name}-\1"', svg)
    svg = re.sub(r'href="#([^"]+)"', rf'href="#{drawing.name}-\1"', svg)
    svg = re.sub(r"url\(#([^)]+)\)", rf"url(#{drawing.name}-\1)", svg)
    svg = re.sub(r'style="([^"]*)"', lambda match: f'style="{_in_page_dress(match[1])}"', svg)
    head, body = svg.split(">", 1)
    head = re.sub(r'\s(width|height)="[^"]*"', "", head)
    named = Markup(
        ' role="img" aria-labelledby="{0}-title {0}-desc"><title id="{0}-title">{1}</title><desc id="{0}-desc">{2}</desc>'
    ).format(drawing.name, drawing.title, drawing.description)
    return Markup(head) + named + Markup(body)


def _in_page_dress(style: str) -> str:
    for colour, name in VARIABLES.items():
        style = style.replace(colour, f"var({name})")
    style = re.sub(r"font-family:[^;]*", "font-family: var(--figure-type)", style)
    return re.sub(r"(font:\s*[\d.]+px\s*)[^;]*", r"\1var(--figure-type)", style)  # matplotlib before 3.9
