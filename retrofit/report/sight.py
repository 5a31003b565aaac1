"""Whether the styles of a page leave its cautions in sight: a list of what they may say there, not of what hides.

A rule is held against the caution block and what the block stands in. If it can match any of these elements, every one
of its declarations has to be on the list below, with a value that leaves text readable. Whatever the list does not
name is refused, and so is a selector that cannot be read. Conditions (`@media`, `:hover` and the like) are taken as
met. Rules for other elements are free, except for what reaches the block from outside: loading something, a negative
distance that pulls it away, and a layer above it. The block itself carries colours, paper and the topmost layer.
"""

from __future__ import annotations

from collections.abc import Callable, Iterable, Iterator, Sequence
from dataclasses import dataclass, field
from typing import TYPE_CHECKING, Any

from retrofit.errors import ReportError

if TYPE_CHECKING:
    from selectolax.lexbor import LexborHTMLParser, LexborNode

PX = {"px": 1.0, "pt": 4 / 3, "pc": 16.0, "in": 96.0, "cm": 96 / 2.54, "mm": 96 / 25.4, "q": 24 / 25.4}  # CSS Values 4
ROOT_PX = 16.0  # the usual size of type, for lengths that follow it
SMALLEST_ROOT_PX = 12.8  # what a template may make of it
SMALLEST_PX = 8.5  # of type, 6.4 pt
FARTHEST_PX = 10_000.0  # no length of a page is longer
TOPMOST = 1000  # layer of the template's own parts; the block lies above
MOST_ASIDE_PX = 384.0  # left and right of a caution, all margins and padding together; A4 leaves 690 px between margins
HANGING_PX = 56.0  # a heading may hang in the margin
ALWAYS = ":not(no-such-element)"  # stands for a condition that is taken as met
STRUCTURAL = frozenset("root first-child last-child only-child first-of-type last-of-type only-of-type".split())
PLAIN_FUNCTIONS = frozenset("is where not nth-child nth-last-child nth-of-type nth-last-of-type".split())
BESIDE = frozenset(("before", "after", "marker"))  # made beside the text of an element, not of it
_BESIDE_MARK = "::beside "
GROUPS = frozenset(("media", "supports", "layer", "container"))
SIDES = ("top", "right", "bottom", "left")
UNREADABLE_FONTS = ("dings", "blank", "barcode", "symbol")


@dataclass(frozen=True)
class Guarded:
    """What has to stay in sight.

    Attributes:
        tree: The page that rules are held against.
        around: The elements that the block stands in, outermost first.
        block: The elements of the block, itself first.
    """

    tree: LexborHTMLParser
    around: tuple[LexborNode, ...]
    block: tuple[LexborNode, ...]


@dataclass(frozen=True)
class Rule:
    """One declaration of a style and the selectors it holds for; none for one that stands at an element."""

    selectors: tuple[str, ...]
    said: str
    name: str
    value: tuple[Any, ...]

    def __str__(self) -> str:
        import tinycss2

        return f"{self.said[:60]} {{ {self.name}: {tinycss2.serialize(self.value).strip()[:60]} }}"


@dataclass
class _Aside:
    """How much room the rules can take left and right of an element, by side."""

    taken: dict[str, float] = field(default_factory=dict)

    def note(self, name: str, value: Sequence[Any]) -> None:
        for side, length in _sides(name, value):
            if side in ("left", "right"):
                key = f"{name.partition('-')[0]} {side}"
                self.taken[key] = max(self.taken.get(key, 0.0), length)


def check_styles(styles: Iterable[str], attributes: Iterable[str], guarded: Guarded) -> None:
    """Refuse styles that could take the cautions out of sight.

    Args:
        styles: The texts of all style elements of the page. [-]
        attributes: The style attributes of all elements outside the block. [-]
        guarded: What has to stay in sight.
    Raises: ReportError naming rule, declaration and element.
    """
    asides: dict[int, _Aside] = {}
    around = {node.mem_id for node in guarded.around}
    for style in styles:
        for rule in _rules_of(style):
            _check_everywhere(rule)
            for node in _reached(rule, guarded):
                _check_at(rule, node, node.mem_id in around)
                asides.setdefault(node.mem_id, _Aside()).note(rule.name, rule.value)
    for text in dict.fromkeys(attributes):
        for rule in _declared(text, 'style="…"'):
            _check_everywhere(rule)
    for node in guarded.around:
        for rule in _declared(node.attributes.get("style") or "", path_of(node)):
            _check_at(rule, node, True)
            asides.setdefault(node.mem_id, _Aside()).note(rule.name, rule.value)
    _check_room(guarded, asides)


def path_of(node: LexborNode) -> str:
    """Return where an element stands, as a reader of the template finds it."""
    names = []
    at: LexborNode | None = node
    while at is not None and at.is_element_node:
        marks = "".join(f".{name}" for name in (at.attributes.get("class") or "").split())
        names.append(f"{at.tag}{'#' + str(at.id) if at.id else ''}{marks}"[:40])
        at = at.parent
    return " > ".join(reversed(names[:8]))


# Reading styles.


def _rules_of(style: str) -> Iterator[Rule]:
    import tinycss2

    nodes = tinycss2.parse_stylesheet(style, skip_comments=True, skip_whitespace=True)
    yield from _walked(nodes, (), "")


def _walked(nodes: Iterable[Any], parents: tuple[str, ...], said: str) -> Iterator[Rule]:
    """Yield every declaration, whatever conditions it stands under."""
    import tinycss2

    for node in nodes:
        if node.type == "error":
            raise ReportError(
                f'the template is refused: near "{said or "its beginning"}" a style cannot be read ({node.message}), '
                "and what cannot be read can hide the cautions; correct the style"
            )
        if node.type == "declaration":
            yield Rule(parents, said, node.lower_name, tuple(_bare(node.value)))
        elif node.type == "qualified-rule":
            text = " ".join(tinycss2.serialize(node.prelude).split())
            inside = tinycss2.parse_blocks_contents(node.content, skip_comments=True, skip_whitespace=True)
            yield from _walked(inside, _selectors(node.prelude, parents), text)
        elif node.type == "at-rule" and node.lower_at_keyword in GROUPS and node.content is not None:
            parse = tinycss2.parse_blocks_contents if parents else tinycss2.parse_rule_list
            yield from _walked(parse(node.content, skip_comments=True, skip_whitespace=True), parents, said)
        elif node.type == "at-rule" and node.lower_at_keyword == "page" and not parents:
            _check_sheet(node)
        elif node.type == "at-rule" and node.lower_at_keyword != "layer":
            fetching = " and would load something" if node.lower_at_keyword in ("import", "font-face") else ""
            raise ReportError(
                f'the template is refused: "@{node.lower_at_keyword}" in a style can hide the cautions{fetching}; '
                f"a template may use {', '.join(f'@{name}' for name in sorted(GROUPS))} and @page"
            )


def _declared(text: str, said: str) -> Iterator[Rule]:
    """Yield the declarations of a style attribute."""
    import tinycss2

    for node in tinycss2.parse_blocks_contents(text, skip_comments=True, skip_whitespace=True):
        if node.type != "declaration":
            raise ReportError(
                f'the template is refused: a style="…" cannot be read ("{text[:60]}"), and what cannot be read can '
                "hide the cautions; correct it"
            )
        yield Rule((), said, node.lower_name, tuple(_bare(node.value)))


def _bare(tokens: Iterable[Any]) -> Iterator[Any]:
    return (token for token in tokens if token.type not in ("whitespace", "comment"))


def _selectors(prelude: Sequence[Any], parents: tuple[str, ...]) -> tuple[str, ...]:
    """Return the selectors of a rule without the conditions that a browser decides: they match as much or more.

    One that ends in `::before` or the like gets a mark: what it reaches is made beside the text of the element.
    """
    return tuple(_widened(part, parents) for part in _split(prelude, ","))


def _split(tokens: Sequence[Any], mark: str) -> list[list[Any]]:
    parts: list[list[Any]] = [[]]
    for token in tokens:
        if token.type == "literal" and token.value == mark:
            parts.append([])
        else:
            parts[-1].append(token)
    return parts


def _widened(tokens: Sequence[Any], parents: tuple[str, ...]) -> str:
    parts: list[str] = []
    beside = False
    parent = f":is({', '.join(text.removeprefix(_BESIDE_MARK) for text in parents)})"
    rest = [token for token in tokens if token.type != "comment"]
    while rest:
        token = rest.pop(0)
        if token.type == "literal" and token.value == ":" and rest:
            is_element = rest[0].type == "literal" and rest[0].value == ":"
            if is_element:
                rest.pop(0)
            part = rest.pop(0) if rest else None
            name = getattr(part, "lower_value", getattr(part, "lower_name", ""))
            beside = beside or name in BESIDE
            parts.append(ALWAYS if is_element or part is None else _condition(part))
        elif token.type == "literal" and token.value == "&":
            parts.append(parent if parents else ":root")
        else:
            parts.append(token.serialize())
    text = "".join(parts).strip()
    if parents and not any(token.type == "literal" and token.value == "&" for token in tokens):
        text = f"{parent} {text}"
    return f"{_BESIDE_MARK}{text}" if beside else text


def _condition(part: Any) -> str:
    """Return a pseudo-class as it stands if it follows from the tree alone, else one that is always met."""
    if part.type == "ident" and part.lower_value in STRUCTURAL:
        return f":{part.lower_value}"
    if part.type == "function" and part.lower_name in PLAIN_FUNCTIONS:
        plain = all(
            inner.type != "function" and not (inner.type == "literal" and inner.value in (":", "&"))
            for inner in part.arguments
        )
        is_of = any(inner.type == "ident" and inner.lower_value == "of" for inner in part.arguments)
        if plain and not (is_of and part.lower_name.startswith("nth")):
            return f":{part.serialize()}"
    return ALWAYS


def _reached(rule: Rule, guarded: Guarded) -> list[LexborNode]:
    """Return the guarded elements that a rule can match: every one if a selector cannot be read."""
    from selectolax.lexbor import SelectolaxError

    found: dict[int, LexborNode] = {}
    for text in rule.selectors:
        is_beside = text.startswith(_BESIDE_MARK)
        nodes = {node.mem_id: node for node in (guarded.block if is_beside else (*guarded.around, *guarded.block))}
        try:
            matched = guarded.tree.css(text.removeprefix(_BESIDE_MARK))
        except SelectolaxError:
            return list(nodes.values())
        found |= {node.mem_id: nodes[node.mem_id] for node in matched if node.mem_id in nodes}
    return list(found.values())


# What any rule of a page may not do.


def _check_everywhere(rule: Rule) -> None:
    for token in _all_tokens(rule.value):
        if _loads(token):
            raise ReportError(f'the template is refused: its style "{rule}" would load something')
        if token.type == "dimension" and abs(_length(token) or 0.0) > FARTHEST_PX:
            _refuse(rule, f"a length of more than {FARTHEST_PX:.0f} px")
    if rule.name == "z-index" and not _is_layer(rule.value):
        _refuse(rule, f"a layer other than a whole number up to {TOPMOST}")
    pulls = rule.name.startswith("--") or (
        rule.name.startswith("margin") and rule.name not in ("margin-left", "margin-right", "margin-inline")
    )
    if pulls and any(_is_negative(token) for token in _upright(rule)):
        _refuse(rule, "a negative distance")
    if rule.name.startswith(("--", "font")) and any(_is_unreadable(token) for token in _all_tokens(rule.value)):
        _refuse(rule, "a font without letters")


def _refuse(rule: Rule, why: str) -> None:
    raise ReportError(f'the template is refused: its style "{rule}" has {why}, which can hide the cautions; change it')


def _all_tokens(tokens: Iterable[Any]) -> Iterator[Any]:
    for token in tokens:
        yield token
        inner = getattr(token, "arguments", None) or getattr(token, "content", None)
        if isinstance(inner, list):
            yield from _all_tokens(inner)


def _loads(token: Any) -> bool:
    if token.type == "function":
        if token.lower_name == "url":
            given = [inner.value for inner in token.arguments if inner.type == "string"]
            return not (given and _is_inside(given[0]))
        return token.lower_name in ("image-set", "-webkit-image-set", "src", "image", "cross-fade", "element")
    return token.type == "url" and not _is_inside(token.value)


def _is_inside(address: str) -> bool:
    return address.strip().casefold().startswith(("data:", "#"))


def _is_layer(value: Sequence[Any]) -> bool:
    (token,) = value if len(value) == 1 else (None,)
    if token is None:
        return False
    if token.type == "number":
        return token.int_value is not None and abs(token.int_value) <= TOPMOST
    return token.type == "ident" and token.lower_value in ("auto", "inherit", "initial", "unset")


def _is_negative(token: Any) -> bool:
    """Say whether a token is a negative size, or may make one."""
    if token.type in ("dimension", "percentage", "number"):
        return bool(token.value < 0)
    if token.type == "function" and token.lower_name in ("calc", "min", "max", "clamp", "round", "mod", "rem"):
        return any(
            (inner.type == "literal" and inner.value == "-") or _is_negative(inner)
            for inner in _all_tokens(token.arguments)
        )
    return False


def _upright(rule: Rule) -> Sequence[Any]:
    """Return the parts of a margin that act upwards and downwards; all of another declaration."""
    if rule.name == "margin":
        return rule.value[::2]
    return rule.value


def _is_unreadable(token: Any) -> bool:
    text = token.value if token.type in ("ident", "string") else ""
    name = text.casefold()
    return name != "segoe ui symbol" and any(part in name for part in UNREADABLE_FONTS)


# What a rule may say where the cautions are.


def _check_at(rule: Rule, node: LexborNode, is_around: bool) -> None:
    if rule.name.startswith("--"):
        return
    is_heading = not is_around and (node.tag == "h2" or (node.parent is not None and node.parent.tag == "h2"))
    allowed = ALLOWED.get(rule.name)
    if is_heading and rule.name in HEADING:
        allowed = HEADING[rule.name]
    if is_around and rule.name in AROUND:
        allowed = AROUND[rule.name]
    inherits = len(rule.value) == 1 and rule.value[0].type == "ident" and rule.value[0].lower_value == "inherit"
    if allowed is None or not (inherits or (rule.value and allowed(rule.value))):
        raise ReportError(
            f'the template is refused: its style "{rule}" acts on {path_of(node)} and can hide the cautions; '
            + ("give what shall look so a class of its own" if rule.selectors else "put {{ cautions }} outside of it")
        )


def _check_room(guarded: Guarded, asides: dict[int, _Aside]) -> None:
    for node in guarded.block:
        taken = 0.0
        at: LexborNode | None = node
        while at is not None:
            taken += sum(asides[at.mem_id].taken.values()) if at.mem_id in asides else 0.0
            at = at.parent
        if taken > MOST_ASIDE_PX:
            raise ReportError(
                f"the template is refused: margins and padding around {path_of(node)} take {taken:.0f} px of its "
                f"width, which can hide the cautions; {MOST_ASIDE_PX:.0f} px are allowed"
            )


def _check_sheet(rule: Any) -> None:
    """Check an @page rule: a sheet that holds text, with something in its margins."""
    import tinycss2

    for node in tinycss2.parse_blocks_contents(rule.content or [], skip_comments=True, skip_whitespace=True):
        if node.type == "at-rule" and node.lower_at_keyword.startswith(SIDES) and node.content is not None:
            inside = tinycss2.parse_blocks_contents(node.content, skip_comments=True, skip_whitespace=True)
            for piece in inside:
                found = _sheet_rule(piece, f"@{node.lower_at_keyword}")
                if found.name not in IN_SHEET_MARGIN:
                    _refuse(found, "what the margin of a sheet may not have")
            continue
        found = _sheet_rule(node, "@page")
        allowed = SHEET.get(found.name)
        if allowed is None or not allowed(found.value):
            _refuse(found, "what a sheet of paper may not have")


def _sheet_rule(node: Any, said: str) -> Rule:
    if node.type != "declaration":
        raise ReportError(f"the template is refused: its {said} cannot be read and can hide the cautions; correct it")
    found = Rule((), said, node.lower_name, tuple(_bare(node.value)))
    _check_everywhere(found)
    return found


# Values.

Allowed = Callable[[Sequence[Any]], bool]


def _length(token: Any) -> float | None:
    """Return a length in px, with the usual size of type for those that follow it; None for anything else. [px]"""
    if token.type == "number" and token.value == 0:
        return 0.0
    if token.type != "dimension":
        return None
    unit = token.lower_unit
    if unit in PX:
        return float(token.value * PX[unit])
    return float(token.value * ROOT_PX) if unit in ("em", "rem") else float(token.value * 10)


def _is_fixed(token: Any) -> bool:
    return token.type == "number" or (token.type == "dimension" and token.lower_unit in (*PX, "em", "rem"))


def _between(low_px: float, high_px: float) -> Allowed:
    def allowed(value: Sequence[Any]) -> bool:
        lengths = [_length(token) if _is_fixed(token) else None for token in value]
        return all(length is not None and low_px <= length <= high_px for length in lengths)

    return allowed


def _words(*words: str) -> Allowed:
    chosen = frozenset(words)
    return lambda value: all(token.type == "ident" and token.lower_value in chosen for token in value)


def _either(*ways: Allowed) -> Allowed:
    return lambda value: all(any(way([token]) for way in ways) for token in value)


def _one(number: float) -> Allowed:
    return lambda value: len(value) == 1 and value[0].type == "number" and value[0].value == number


def _anything(value: Sequence[Any]) -> bool:
    """Allow what only looks different: a colour, a kind of letters, where a page breaks."""
    return True


def _is_wide(value: Sequence[Any]) -> bool:
    (token,) = value if len(value) == 1 else (None,)
    if token is None:
        return False
    if token.type == "percentage":
        return bool(token.value == 100)
    return _words("auto", "none")(value) or _between(240, FARTHEST_PX)(value)


def _is_readable(value: Sequence[Any]) -> bool:
    """Say whether a size of type is large enough whatever it follows."""
    (token,) = value if len(value) == 1 else (None,)
    if token is None:
        return False
    if token.type == "ident":
        return token.lower_value in ("small", "medium", "large", "x-large", "xx-large", "larger")
    if token.type == "percentage" or (token.type == "dimension" and token.lower_unit == "em"):
        return bool(token.value >= (100 if token.type == "percentage" else 1)) and token.value <= 500
    if token.type != "dimension" or token.lower_unit not in (*PX, "rem"):
        return False
    size = token.value * (SMALLEST_ROOT_PX if token.lower_unit == "rem" else PX[token.lower_unit])
    return bool(SMALLEST_PX <= size <= 100)


def _is_open(value: Sequence[Any]) -> bool:
    """Say whether lines stand far enough apart."""
    (token,) = value if len(value) == 1 else (None,)
    if token is None:
        return False
    if token.type == "number":
        return bool(1 <= token.value <= 4)
    if token.type == "percentage":
        return bool(100 <= token.value <= 400)
    return _words("normal")(value) or (token.type == "dimension" and token.lower_unit == "em" and token.value >= 1)


def _is_font(value: Sequence[Any]) -> bool:
    """Say whether a `font` has a size and a distance of lines that can be read."""
    places = [i for i, token in enumerate(value) if token.type in ("dimension", "percentage")]
    if not places or any(token.type == "function" for token in value[: places[0]]):
        return False
    at = places[0]
    has_lines = len(value) > at + 2 and value[at + 1].type == "literal" and value[at + 1].value == "/"
    return _is_readable([value[at]]) and (not has_lines or _is_open([value[at + 2]]))


def _is_line(value: Sequence[Any]) -> bool:
    """Say whether a border is thin; its colour and kind are free."""
    thin = _between(0, 8)
    return all(token.type not in ("dimension", "number", "percentage") or thin([token]) for token in value)


def _without_calc(way: Allowed) -> Allowed:
    return lambda value: not any(t.type == "function" and t.lower_name != "var" for t in value) and way(value)


def _sides(name: str, value: Sequence[Any]) -> list[tuple[str, float]]:
    """Return side and length of a margin or padding; nothing for other declarations. [px]"""
    kind, _, side = name.partition("-")
    if kind not in ("margin", "padding"):
        return []
    lengths = [max(0.0, _length(token) or 0.0) for token in value]
    if side == "inline" or side.startswith("inline-"):
        return [("left", max(lengths)), ("right", max(lengths))]
    if side:
        return [(side, max(lengths))]
    right = lengths[1] if len(lengths) > 1 else lengths[0]
    return [("right", right), ("left", lengths[3] if len(lengths) > 3 else right)]


_MARGIN = _either(_between(0, 192), _words("auto"))
_PADDING = _between(0, 192)
_TEXT = "color font-family font-style font-weight font-stretch font-variant font-variant-numeric font-kerning"
_FREE = (
    "font-variant-ligatures font-variant-caps font-optical-sizing text-rendering text-align text-align-last "
    "text-underline-offset text-underline-position text-decoration-color text-decoration-style "
    "text-decoration-thickness text-wrap text-wrap-style text-wrap-mode text-size-adjust "
    "-webkit-text-size-adjust -webkit-font-smoothing -moz-osx-font-smoothing print-color-adjust "
    "-webkit-print-color-adjust overflow-wrap word-wrap word-break line-break hyphens quotes tab-size "
    "hanging-punctuation list-style list-style-type list-style-position orphans widows break-before break-after "
    "break-inside page-break-before page-break-after page-break-inside box-sizing clear cursor scroll-behavior "
    "scroll-margin-top scroll-padding-top border-color border-style border-radius border-collapse border-top-color "
    "border-right-color border-bottom-color border-left-color border-top-style border-right-style border-bottom-style "
    "border-left-style accent-color caret-color stroke-linejoin stroke-linecap"
)
ALLOWED: dict[str, Allowed] = {
    **dict.fromkeys((*_TEXT.split(), *_FREE.split()), _anything),
    **{f"margin{side}": _MARGIN for side in ("", "-block", "-inline", *(f"-{side}" for side in SIDES))},
    **{f"padding{side}": _PADDING for side in ("", "-block", "-inline", *(f"-{side}" for side in SIDES))},
    **{
        f"border{side}{part}": _without_calc(_is_line)
        for side in ("", *(f"-{side}" for side in SIDES))
        for part in ("", "-width")
    },
    "color-scheme": lambda value: any(token.type == "ident" and token.lower_value == "light" for token in value),
    "display": _words("block", "inline", "inline-block", "flow-root"),
    "visibility": _words("visible"),
    "opacity": _one(1),
    "position": _words("static", "relative"),
    "float": _words("none"),
    "overflow": _words("visible"),
    "overflow-x": _words("visible"),
    "overflow-y": _words("visible"),
    "width": _is_wide,
    "max-width": _is_wide,
    "min-width": _between(0, 320),
    "height": _words("auto"),
    "max-height": _words("none"),
    "min-height": _between(0, 960),
    "font": _is_font,
    "font-size": _is_readable,
    "line-height": _is_open,
    "letter-spacing": _either(_between(-0.5, 3), _words("normal")),
    "word-spacing": _either(_between(0, 8), _words("normal")),
    "white-space": _words("normal", "pre-line", "pre-wrap", "break-spaces"),
    "text-transform": _words("none", "uppercase", "lowercase", "capitalize"),
    "text-decoration": _words("none", "underline"),
    "text-decoration-line": _words("none", "underline"),
    "text-indent": _between(0, 64),
    "vertical-align": _words("baseline", "middle", "top", "text-top", "text-bottom"),
    "outline": _without_calc(_is_line),
    "outline-width": _between(0, 4),
    "outline-offset": _between(-4, 4),
    "outline-color": _anything,
    "outline-style": _anything,
}
HEADING: dict[str, Allowed] = {
    "float": _words("none", "left"),
    "margin-left": _either(_between(-HANGING_PX, 192), _words("auto")),
}
AROUND: dict[str, Allowed] = {
    **dict.fromkeys(
        "background background-color background-image background-repeat background-size".split(), _anything
    ),
    **dict.fromkeys("background-position background-attachment background-origin background-clip".split(), _anything),
    "display": _words("block", "flow-root"),
}
SHEET: dict[str, Allowed] = {
    "size": _either(
        _words("a3", "a4", "a5", "b4", "b5", "letter", "legal", "portrait", "landscape"), _between(480, 2000)
    ),
    **{f"margin{side}": _between(0, 160) for side in ("", *(f"-{side}" for side in SIDES))},
}
IN_SHEET_MARGIN = frozenset(
    "content color font font-family font-size font-style font-weight font-variant font-variant-numeric line-height "
    "letter-spacing text-align text-transform vertical-align white-space border border-top border-bottom border-width "
    "border-style border-color padding padding-top padding-bottom".split()
)
