"""The last look at a finished page: all cautions are in it and laid out in sight, and it loads nothing.

The page is read as a browser reads it. The block of cautions has to be there once, as it was made, inside open
elements of a short list; `sight.py` holds the styles against it. Elements that a report does not need are refused
wherever they stand. What stays possible: so much before the block that nobody reads on, and words that talk it down.
"""

from __future__ import annotations

import re
from collections.abc import Iterator
from typing import TYPE_CHECKING

from retrofit.errors import ReportError
from retrofit.report.sight import Guarded, check_styles, path_of

if TYPE_CHECKING:
    from selectolax.lexbor import LexborNode

# What a browser may do with a report: show it, with the styles and pictures that are in it.
POLICY = "default-src 'none'; style-src 'unsafe-inline'; img-src data:"
BLOCK_ID = "cautions"
CARRIED = {"id": "retrofit-carried"}  # the one template element of a page, which no browser shows
STANDARDS = re.compile(r"\s*(<!--.*?-->\s*)*<!doctype html>", re.IGNORECASE | re.DOTALL)
AROUND = frozenset("html body main article section div header footer".split())
AROUND_ATTRIBUTES = frozenset("id class lang dir style title role".split())
ELEMENTS = frozenset(
    "html head meta title style body header footer main nav section article aside div address hgroup h1 h2 h3 h4 h5 h6 "
    "p blockquote pre hr br wbr ul ol li dl dt dd figure figcaption table caption colgroup col thead tbody tfoot tr th "
    "td a abbr b bdi bdo cite code data del dfn em i ins kbd mark q rp rt ruby s samp small span strong sub sup time u "
    "var details summary img template".split()
)
DRAWN = frozenset(
    "svg g defs symbol use path rect circle ellipse line polyline polygon text tspan title desc metadata style a "
    "clippath lineargradient radialgradient stop pattern marker mask".split()
)
LOADING_ATTRIBUTES = frozenset("src srcset srcdoc data poster background action formaction xlink:href".split())
MOST_AROUND = 16  # elements one in the other
PUT_BACK = "put {{ cautions }} into the open part of the page"


def check_page(html: str, cautions: str) -> None:
    """Refuse a page that has lost or hidden its cautions, or that would load or run something.

    Args:
        html: The finished page. [-]
        cautions: The block of cautions as it was made. [-]
    Raises: ReportError saying what is missing or refused, and where.
    """
    try:
        _check(html, cautions)
    except RecursionError:
        raise ReportError("the template is refused: a style is nested too deep, which can hide the cautions") from None


def _check(html: str, cautions: str) -> None:
    from selectolax.lexbor import LexborHTMLParser

    tree = LexborHTMLParser(html)
    if not STANDARDS.match(html):
        raise ReportError(
            "the template is refused: the page has to begin with <!DOCTYPE html>; take it from report.html"
        )
    # A comment that ends shows and hides nothing; one that does not takes the block with it.
    found = tree.root.traverse(include_text=False) if tree.root else ()
    nodes = [node for node in found if not node.is_comment_node]
    _check_nothing_runs(nodes)
    block = _block(nodes, cautions)
    around = _around(block)
    _check_elements(nodes)
    _check_head(nodes)
    inside = tuple(block.traverse(include_text=False))
    own = {node.mem_id for node in inside}
    styles = [_style_text(node) for node in nodes if node.tag == "style"]
    attributes = [
        text for node in nodes if node.mem_id not in own and (text := node.attributes.get("style") or "").strip()
    ]
    _prune(block)
    check_styles(styles, attributes, Guarded(tree, around, inside))


def _block(nodes: list[LexborNode], cautions: str) -> LexborNode:
    """Return the one block of cautions of a page, the same as it was made."""
    from selectolax.lexbor import LexborHTMLParser

    found = [node for node in nodes if node.id == BLOCK_ID]
    if not found:
        raise ReportError(f"the template leaves out the cautions or hides them in what no browser shows; {PUT_BACK}")
    made = LexborHTMLParser(f"<!DOCTYPE html><body>{cautions}").css_first(f"#{BLOCK_ID}")
    if len(found) > 1 or made is None or found[0].html != made.html:
        raise ReportError(f"the template changes the cautions or shows a part of them twice; {PUT_BACK}")
    return found[0]


def _around(block: LexborNode) -> tuple[LexborNode, ...]:
    """Return what the block stands in, outermost first, all of it open."""
    found: list[LexborNode] = []
    at = block.parent
    while at is not None and at.is_element_node:
        found.append(at)
        at = at.parent
    if len(found) > MOST_AROUND:
        raise ReportError(f"the template hides the cautions in {len(found)} elements, one in the other; {PUT_BACK}")
    for node in found:
        if node.tag not in AROUND:
            raise ReportError(f"the template hides the cautions in <{node.tag}> ({path_of(node)}); {PUT_BACK}")
        for name in node.attributes:
            if name not in AROUND_ATTRIBUTES and not name.startswith(("data-", "aria-label", "aria-describedby")):
                raise ReportError(
                    f'the template gives {path_of(node)} the attribute "{name}", which can hide the cautions; '
                    f"leave it out, or {PUT_BACK}"
                )
    return tuple(reversed(found))


def _check_elements(nodes: list[LexborNode]) -> None:
    drawn: set[int] = set()
    for node in nodes:
        parent = node.parent
        tag = (node.tag or "").casefold()
        if tag == "svg" or (parent is not None and parent.mem_id in drawn):
            drawn.add(node.mem_id)
        allowed = DRAWN if node.mem_id in drawn else ELEMENTS
        if tag not in allowed or (tag == "template" and node.attributes != CARRIED):
            raise ReportError(
                f"the template is refused: <{node.tag}> ({path_of(node)}) is not among the elements of a report, "
                "because browsers can hide the cautions with it; leave it out"
            )


def _check_head(nodes: list[LexborNode]) -> None:
    metas = [node for node in nodes if node.tag == "meta"]
    commands = [node for node in metas if "http-equiv" in node.attributes]
    kept = [
        (
            node.attributes.get("http-equiv") or "",
            node.attributes.get("content"),
            node.parent.tag if node.parent else "",
        )
        for node in commands
    ]
    if kept != [("Content-Security-Policy", POLICY, "head")]:
        raise ReportError(
            "the template leaves out or changes the policy that keeps a report from loading things; take the one meta "
            "element with http-equiv from report.html"
        )
    letters = [(node.attributes.get("charset") or "").casefold() for node in metas if "charset" in node.attributes]
    schemes = [node.attributes.get("content") or "" for node in metas if node.attributes.get("name") == "color-scheme"]
    if any("light" not in scheme for scheme in schemes):
        raise ReportError("the template is refused: a page of dark colours alone can hide the cautions on paper")
    if letters != ["utf-8"]:
        raise ReportError(
            'the template is refused: the page needs <meta charset="utf-8"> once; take it from report.html'
        )


def _style_text(node: LexborNode) -> str:
    if any(child.is_element_node for child in node.iter(include_text=True)):
        raise ReportError(
            f"the template is refused: {path_of(node)} holds elements, which can hide the cautions; correct it"
        )
    return node.text(deep=True)


def _prune(block: LexborNode) -> None:
    """Empty what stands beside the block and what holds it: no selector that is held against them asks for it."""
    at: LexborNode | None = block
    while at is not None and at.is_element_node:
        other = at.parent.child if at.parent is not None else None
        while other is not None:
            following = other.next
            if other.is_element_node and other.mem_id != at.mem_id:
                for child in list(other.iter(include_text=True)):
                    child.decompose(recursive=True)
            other = following
        at = at.parent


def _check_nothing_runs(nodes: list[LexborNode]) -> None:
    """Refuse what would run a script, load something or leave the page."""
    for node in nodes:
        if why := next(_running(node.tag or "", node.attributes), ""):
            raise ReportError(f"the template is refused: {why} ({path_of(node)}); a report runs and loads nothing")


def _running(tag: str, attributes: dict[str, str | None]) -> Iterator[str]:
    if tag == "script":
        yield "<script> would run"
    for name, given in attributes.items():
        target = "".join((given or "").split()).casefold()
        is_picture = (tag, name) == ("img", "src") and target.startswith("data:image/")
        if name.startswith("on"):
            yield f"<{tag} {name}=…> would run a script"
        if name in LOADING_ATTRIBUTES and not is_picture and not (name == "xlink:href" and target.startswith("#")):
            yield f"<{tag} {name}=…> would load something"
        if name == "href" and tag not in ("a", "area") and not target.startswith("#"):
            yield f"<{tag} href=…> would load something"
        if name == "href" and target.startswith(("javascript:", "data:", "vbscript:")):
            yield f"<{tag} href=…> would run a script"
    if tag == "meta" and (attributes.get("http-equiv") or "").strip().casefold() == "refresh":
        yield "<meta http-equiv=refresh> would leave the page"
