"""A page as a browser would find it, without a browser."""

from __future__ import annotations

import base64
import re
import zlib
from html.parser import HTMLParser

from ifccheck.publish.sheet_html import SEPARATOR

VOID = {"meta", "br", "col", "input", "path", "rect", "circle", "img", "hr", "link"}
OPTIONAL_END = {"tr", "td", "th", "thead", "tbody", "option", "li"}


class Seen(HTMLParser):
    """What a browser would find: elements, attributes, texts, scripts."""

    def __init__(self, html: str) -> None:
        super().__init__(convert_charrefs=True)
        self.elements: list[tuple[str, dict[str, str | None]]] = []
        self.texts: list[str] = []
        self.scripts: list[tuple[str | None, str]] = []
        self.styles: list[str] = []
        self.open: list[str] = []
        self.unbalanced: list[str] = []
        self.feed(html)
        self.close()

    def handle_starttag(self, tag: str, attrs: list[tuple[str, str | None]]) -> None:
        self.elements.append((tag, dict(attrs)))
        if tag in {"script"}:
            self.scripts.append((dict(attrs).get("type"), ""))
        if tag not in VOID | OPTIONAL_END:
            self.open.append(tag)

    def handle_startendtag(self, tag: str, attrs: list[tuple[str, str | None]]) -> None:
        self.elements.append((tag, dict(attrs)))

    def handle_endtag(self, tag: str) -> None:
        if tag in OPTIONAL_END:
            return
        if not self.open or self.open.pop() != tag:
            self.unbalanced.append(tag)

    def handle_data(self, data: str) -> None:
        if self.open and self.open[-1] == "script":
            kind, text = self.scripts[-1]
            self.scripts[-1] = (kind, text + data)
        elif self.open and self.open[-1] == "style":
            self.styles.append(data)
        else:
            self.texts.append(data)

    @property
    def text(self) -> str:
        return re.sub(r"\s+", " ", " ".join(self.texts))


def sheets_in(seen: Seen) -> list[str]:
    """The sheets as the browser opens them."""
    found: list[str] = []
    for kind, data in seen.scripts:
        if kind == "application/octet-stream;base64":
            text = zlib.decompress(base64.b64decode(data), wbits=-zlib.MAX_WBITS).decode()
            found += text.split(SEPARATOR)
    return found
