"""The last look at a finished page: all cautions are in it and in sight, and it loads nothing.

What is refused: a page without the block of cautions as it was made, or with it inside an element that is
hidden, inactive or closed; a style rule that hides and can reach the block; scripts and their attributes;
anything that a browser would load. What cannot be refused: a style that puts something over the block, moves
the page away, or prints it in the colour of the paper by a way not listed here. The elements of the block
carry their own display, visibility and opacity as a second line of defence.
"""

from __future__ import annotations

import re
from html.parser import HTMLParser
from typing import TYPE_CHECKING

from retrofit.errors import ReportError

if TYPE_CHECKING:
    from retrofit.report.page import Page
    from retrofit.report.site_copy import SiteCopy

# What a browser may do with a report: show it, with the styles and pictures that are in it.
BLOCK_ID = "cautions"
POLICY = "default-src 'none'; style-src 'unsafe-inline'; img-src data:"
VOID = frozenset("area base br col embed hr img input link meta param source track wbr".split())
UNSEEN = frozenset("script style template noscript textarea title iframe object select datalist svg head".split())
LOADING_ATTRIBUTES = frozenset("src srcset srcdoc data poster background action formaction xlink:href".split())
HIDING = re.compile(
    r"display:none|visibility:(hidden|collapse)|opacity:0*\.?0*(;|!|$)|font-size:0|content-visibility:hidden"
    r"|(max-)?(height|width):0(px|em|rem|%)?(;|!|$)|clip-path|clip:|position:(absolute|fixed)|text-indent:-"
    r"|color:transparent|transform:|zoom:0|filter:"
)
FETCHING = re.compile(r"""@import|image-set\(|url\(\s*(?!['"]?\s*(data:|#))""", re.IGNORECASE)
# Selectors that reach the block: by its own names, by the elements it is made of or stands in, or all elements.
REACHING = re.compile(
    r"caution|deference|\*|(^|[\s>+~(,])(html|body|main|section|article|div|header|h2|h3|h4|p|ul|ol|li|span|strong)"
    r"($|[\s>+~:.#\[,)])|:root|:is|:where|:has|:not|nth-|child|of-type|\[|&"
)


def check_page(html: str, page: Page | SiteCopy, cautions: str) -> None:
    """Refuse a page that has lost or hidden its cautions, or that would load or run something.

    Args:
        html: The finished page. [-]
        page: What it was made from.
        cautions: The block of cautions as it was made. [-]
    Raises: ReportError saying what is missing or refused.
    """
    if cautions not in html:
        raise ReportError(
            "the template leaves out or changes the cautions; put {{ cautions }} back where they shall stand"
        )
    reader = _PageReader()
    reader.feed(html)
    reader.close()
    if reader.refused:
        raise ReportError(f"the template is refused: {reader.refused[0]}; a report runs and loads nothing")
    if not reader.has_policy:
        raise ReportError(
            "the template leaves out the policy that keeps a report from loading things; take it from report.html"
        )
    _check_words(reader.seen_text(), page)
    _check_styles(reader.styles, reader.around)


def _check_words(seen: str, page: Page | SiteCopy) -> None:
    wanted = [page.deference]
    wanted += [text for g in page.cautions for item in g.items for text in (item.caution.title, item.caution.text)]
    for text in wanted:
        if _plain(text) not in seen:
            raise ReportError(
                f'the template hides a caution: "{text[:60]}…" is not among the visible text; put {{{{ cautions }}}} '
                "into the open part of the page"
            )


def _check_styles(styles: list[str], around: set[str]) -> None:
    """Refuse a rule that hides and can reach the block, by itself or by an element around it."""
    reaching = re.compile("|".join([REACHING.pattern, *(rf"(?<![\w-]){re.escape(name)}(?![\w-])" for name in around)]))
    for style in styles:
        text = _unescaped(re.sub(r"/\*.*?\*/", "", style, flags=re.DOTALL))
        if found := FETCHING.search(text):
            raise ReportError(f'the template is refused: its style has "{found[0]}", which would load something')
        for selector, body in re.findall(r"([^{}]*)\{([^{}]*)\}", text):
            plain = re.sub(r"\s+", "", body).casefold()
            if HIDING.search(plain) and reaching.search(selector.strip().casefold()):
                raise ReportError(
                    f'the template is refused: its style "{selector.strip()[:60]}" can hide the cautions; '
                    "give what shall be hidden a class of its own"
                )


def _unescaped(style: str) -> str:
    """Return a style with its \\hex escapes of letters undone, so that a rule cannot be written past the check."""
    return re.sub(r"\\([0-9a-fA-F]{1,6})\s?", lambda match: _letter(int(match[1], 16)), style)


def _letter(code: int) -> str:
    return chr(code) if code < 128 and chr(code).isalnum() else ""


def _plain(text: str) -> str:
    return re.sub(r"\s+", " ", text).strip()


class _PageReader(HTMLParser):
    """Collects the text that stands in the open, the styles, and what is not allowed in a report."""

    def __init__(self) -> None:
        super().__init__(convert_charrefs=True)
        self.open: list[tuple[str, bool, set[str]]] = []  # tag, whether it hides what is in it, tag, id and classes
        self.around: set[str] = set()  # tags, ids and classes of what the block stands in
        self.texts: list[str] = []
        self.styles: list[str] = []
        self.refused: list[str] = []
        self.has_policy = False

    def seen_text(self) -> str:
        return _plain(" ".join(self.texts))

    def handle_starttag(self, tag: str, attrs: list[tuple[str, str | None]]) -> None:
        named = {name: value or "" for name, value in attrs}
        self._refuse(tag, named)
        if named.get("id") == BLOCK_ID:
            self.around.update(*(names for _, _, names in self.open))
        if tag not in VOID:
            names = {tag, named.get("id", ""), *named.get("class", "").split()} - {""}
            self.open.append((tag, self._hides(tag, named), {name.casefold() for name in names}))

    def handle_startendtag(self, tag: str, attrs: list[tuple[str, str | None]]) -> None:
        self._refuse(tag, {name: value or "" for name, value in attrs})

    def handle_endtag(self, tag: str) -> None:
        names = [name for name, _, _ in self.open]
        if tag in names:
            del self.open[len(names) - 1 - names[::-1].index(tag) :]

    def handle_data(self, data: str) -> None:
        if self.open and self.open[-1][0] == "style":
            self.styles.append(data)
        elif not any(hides for _, hides, _ in self.open):
            self.texts.append(data)

    def _hides(self, tag: str, named: dict[str, str]) -> bool:
        style = re.sub(r"\s+", "", named.get("style", "")).casefold()
        closed = tag == "dialog" or (tag == "details" and "open" not in named)
        hidden = "hidden" in named or "popover" in named or named.get("aria-hidden") == "true"
        return tag in UNSEEN or closed or hidden or bool(HIDING.search(style))

    def _refuse(self, tag: str, named: dict[str, str]) -> None:
        for name, value in named.items():
            if name.startswith("on"):
                self.refused.append(f"<{tag} {name}=…> would run a script")
            target = value.strip().casefold()
            is_picture = (tag, name) == ("img", "src") and target.startswith("data:image/")
            if name in LOADING_ATTRIBUTES and not is_picture:
                self.refused.append(f"<{tag} {name}=…> would load something")
            if name == "href" and tag not in ("a", "area") and not target.startswith("#"):
                self.refused.append(f"<{tag} href=…> would load something")
            if name == "href" and target.startswith(("javascript:", "data:", "vbscript:")):
                self.refused.append(f"<{tag} href=…> would run a script")
        if tag == "script":
            self.refused.append("<script> would run")
        if FETCHING.search(named.get("style", "")):
            self.refused.append(f"<{tag} style=…> would load something")
        if tag == "meta" and named.get("http-equiv") == "Content-Security-Policy":
            self.has_policy = named.get("content") == POLICY
        if tag == "meta" and named.get("http-equiv", "").casefold() == "refresh":
            self.refused.append("<meta http-equiv=refresh> would leave the page")
