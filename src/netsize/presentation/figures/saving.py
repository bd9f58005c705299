"""Figures as files and as SVG for a page: the same bytes for the same numbers, every time."""

from __future__ import annotations

import io
import re
from html import escape
from typing import TYPE_CHECKING, Any

from netsize.presentation.figures.canvas import clean, quiet_glyphs

if TYPE_CHECKING:
    from matplotlib.figure import Figure

__all__ = ["FORMATS", "inline_svg", "rendered"]

FORMATS = ("svg", "png", "pdf")
_METADATA: dict[str, dict[str, None]] = {
    "svg": {"Date": None},
    "pdf": {"CreationDate": None},
    "png": {"Software": None},
}
_FALLBACK = "'DejaVu Sans', Verdana, sans-serif"  # alike in width, for machines without the first


def rendered(figure: Figure, form: str) -> bytes:
    """The figure as the bytes of an svg, png (300 dots an inch) or pdf file."""
    import matplotlib

    buffer = io.BytesIO()
    # text stays text; ids come from the drawing and not from chance
    fixed: dict[Any, Any] = {"svg.fonttype": "none", "svg.hashsalt": "netsize", "pdf.fonttype": 42}
    fixed |= {"savefig.bbox": None}
    with matplotlib.rc_context(fixed), quiet_glyphs():
        figure.savefig(buffer, format=form, dpi=300, metadata=_METADATA[form])
    if form != "svg":
        return buffer.getvalue()
    return _own_fonts(buffer.getvalue().decode("utf-8")).encode("utf-8")


def inline_svg(figure: Figure, *, name: str, title: str, description: str) -> str:
    """The figure as an <svg> element: ids begin with `name`, it scales, and it speaks for itself.

    Its one style rule becomes attributes, since inside a page it would reach all of it.
    """
    text = rendered(figure, "svg").decode("utf-8")
    width, height = _size(text)
    body = text[text.index(">", text.index("<svg")) + 1 :]
    body = re.sub(r"<metadata>.*?</metadata>", "", body, flags=re.DOTALL)
    body = re.sub(r"<defs>\s*<style.*?</style>\s*</defs>", "", body, flags=re.DOTALL)
    body = re.sub(r'\bid="', f'id="{name}-', body)
    body = body.replace("url(#", f"url(#{name}-").replace('href="#', f'href="#{name}-')
    opening = (
        f'<svg xmlns="http://www.w3.org/2000/svg" xmlns:xlink="http://www.w3.org/1999/xlink" '
        f'role="img" aria-labelledby="{name}-title {name}-desc" viewBox="0 0 {width} {height}" '
        f'width="{width}pt" height="{height}pt" stroke-linejoin="round" stroke-linecap="butt">'
    )
    title, description = escape(clean(title)), escape(clean(description))
    spoken = f'<title id="{name}-title">{title}</title><desc id="{name}-desc">{description}</desc>'
    return opening + spoken + body.strip()


def _size(svg: str) -> tuple[str, str]:
    found = re.search(r'viewBox="0 0 ([\d.]+) ([\d.]+)"', svg)
    assert found is not None
    return found[1], found[2]


def _own_fonts(svg: str) -> str:
    return re.sub(r"(font(?:-family)?: [^\";']*)'DejaVu Sans'", rf"\g<1>{_FALLBACK}", svg)
