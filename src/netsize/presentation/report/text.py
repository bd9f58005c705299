"""Labels are data: text that comes from papers, made harmless for where it is shown."""

from __future__ import annotations

import re
from html import escape

__all__ = ["anchor", "html_text", "markdown_text", "visible"]

# embedding, override and isolate marks turn the order of what follows them; nothing here needs them
_DIRECTION = dict.fromkeys([*range(0x202A, 0x202F), *range(0x2066, 0x206A), 0x200E, 0x200F, 0x061C])
_CONTROL = dict.fromkeys([*range(32), *range(127, 160)], "�")
_KEPT = {ord("\n"): "\n", ord("\t"): " ", ord("\r"): " "}
_TABLE = {**_CONTROL, **_DIRECTION, **_KEPT}
_MARKUP = re.compile(r"([\\`*_\[\]|~$!#^])")
_ITEM = re.compile(r"^([-+=](?=[\s=]))|^(\d+)(?=[.)]\s)")


def visible(text: str) -> str:
    """Without control characters, direction marks and halves of characters."""
    return text.translate(_TABLE).encode("utf-8", "replace").decode("utf-8")


def html_text(text: str) -> str:
    """For HTML, also inside attributes."""
    return escape(visible(text), quote=True)


def markdown_text(text: str) -> str:
    """For Markdown, also inside table cells: no markup, no tag, no list, no line break."""
    text = " ".join(visible(text).split())
    text = (
        _MARKUP.sub(r"\\\1", text).replace("&", "&amp;").replace("<", "&lt;").replace(">", "&gt;")
    )
    return _ITEM.sub(lambda m: f"\\{m[1]}" if m[1] else f"{m[2]}\\", text)


def anchor(text: str) -> str:
    """An id from a key: small letters, digits and hyphens."""
    return re.sub(r"[^a-z0-9]+", "-", text.lower()).strip("-") or "part"
