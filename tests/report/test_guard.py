"""The last look at a page: the cautions are laid out in sight, or the page is refused with what and where."""

import re

import pytest

from retrofit.checks import assess
from retrofit.errors import ReportError
from retrofit.report import render_html
from retrofit.report.guard import check_page
from retrofit.study import compare


@pytest.fixture(scope="module")
def page(case_of, made_at):
    """Return the built-in page of a small case and its block of cautions."""
    html = render_html(assess(compare(case_of(candidates=("R454C",)))), made_at=made_at)
    start = html.index('<section id="cautions"')
    return html, html[start : html.index("</section>", start) + len("</section>")]


@pytest.fixture(scope="module")
def look(page):
    """Return a function that looks at the page with something else in place of the block, and more style."""
    html, cautions = page

    def at(instead="{}", style="", anywhere="", old="", new=""):
        assert old in html
        changed = html.replace(cautions, instead.replace("{}", cautions), 1) if instead != "{}" else html
        changed = changed.replace(old, new, 1) if old else changed
        changed = changed.replace("</style>", f"{style}</style>", 1).replace("</main>", f"{anywhere}</main>", 1)
        check_page(changed, cautions)

    return at


WRAPPED = {
    "unclosed comment": "<!-- {}",
    "half a comment": "<!--> <!-- {} --",
    "bogus comment": "<? {}",
    "noembed": "<noembed>{}</noembed>",
    "noframes": "<noframes>{}</noframes>",
    "noscript": "<noscript>{}</noscript>",
    "plaintext": "<plaintext>{}",
    "xmp": "<xmp>{}</xmp>",
    "textarea": "<textarea>{}</textarea>",
    "title": "<title>{}</title>",
    "title in a drawing": "<svg><title>{}</title></svg>",
    "style": "<style>{}</style>",
    "style in a drawing": "<svg><style>{}</style></svg>",
    "drawing": "<svg>{}</svg>",
    "foreign object": "<svg><foreignObject>{}</foreignObject></svg>",
    "formula": "<math><annotation-xml encoding='text/html'>{}</annotation-xml></math>",
    "iframe": "<iframe>{}</iframe>",
    "template": "<template>{}</template>",
    "shadow": "<div><template shadowrootmode='open'></template>{}</div>",
    "select": "<select><option>{}</option></select>",
    "datalist": "<datalist>{}</datalist>",
    "audio": "<audio>{}</audio>",
    "video": "<video>{}</video>",
    "canvas": "<canvas>{}</canvas>",
    "meter": "<meter>{}</meter>",
    "progress": "<progress>{}</progress>",
    "object": "<object>{}</object>",
    "button": "<button>{}</button>",
    "marquee": "<marquee>{}</marquee>",
    "dialog": "<dialog>{}</dialog>",
    "fieldset": "<fieldset disabled>{}</fieldset>",
    "details": "<details>{}</details>",
    "open details": "<details open>{}</details>",
    "summary": "<details><summary>{}</summary></details>",
    "struck out": "<s>{}</s>",
    "struck out by what is not closed": "<p><s>over</p>{}",
    "small by what is not closed": "<small>{}",
    "attribute": '<div title="{}',
    "hidden": "<div hidden>{}</div>",
    "hidden until found": "<div hidden=until-found>{}</div>",
    "popover": "<div popover>{}</div>",
    "inert": "<div inert>{}</div>",
    "hidden from readers aloud": "<div aria-hidden=true>{}</div>",
    "cell": "<table><tr><td>{}</td></tr></table>",
    "hundred elements": "<div>" * 100 + "{}" + "</div>" * 100,
    "twice": "{}<div hidden>{}</div>",
    "decoy": "<section id=cautions></section>{}",
    "unknown element": "<no-such-thing>{}</no-such-thing>",
}


@pytest.mark.parametrize("instead", WRAPPED.values(), ids=WRAPPED)
def test_the_cautions_stand_in_open_elements_alone(instead, look):
    """Whatever a browser may not lay out, or lay out as struck through or tiny, is refused around the block."""
    with pytest.raises(ReportError, match=r"cautions.*(put|leave)"):
        look(instead)


DECLARED = [
    "display:none", "display:contents", "display:table-column", "display:-webkit-box", "visibility:hidden",
    "visibility:collapse", "opacity:0", "opacity:.01", "opacity:calc(0)", "clip:rect(0,0,0,0)", "clip-path:inset(50%)",
    "-webkit-clip-path:circle(0)", "mask:linear-gradient(transparent,transparent)", "-webkit-mask-image:none",
    "transform:scale(0)", "-webkit-transform:scale(0)", "scale:0", "translate:-9999px", "rotate:y 90deg",
    "offset-path:ray(0deg)", "position:absolute", "position:fixed", "position:sticky", "left:-9999px", "inset:0",
    "height:0", "height:1px", "max-height:1px;overflow:hidden", "block-size:0", "max-block-size:1px", "height:0%",
    "overflow:hidden", "overflow:clip", "overflow-y:scroll", "contain:strict", "contain:size",
    "content-visibility:hidden", "content-visibility:auto", "font-size:0", "font-size:1px", "font-size:.1em",
    "font-size:1%", "font-size:calc(0px)", "font-size:var(--none)", "font-size:0.01vw", "font-size:smaller",
    "font:0/0 a", "font:1px serif", "font:var(--f)", "font:caption", "font-family:Wingdings",
    "font-family:'Adobe Blank'",
    "line-height:0", "line-height:1px", "letter-spacing:-1em", "word-spacing:-2em", "filter:opacity(0)",
    "filter:contrast(0)", "backdrop-filter:blur(9px)", "zoom:.01", "zoom:0", "text-indent:-9999px", "text-indent:100vw",
    "width:0", "width:1px", "max-width:1px", "max-width:1%", "inline-size:0", "min-width:9999px", "white-space:nowrap",
    "-webkit-text-fill-color:transparent", "-webkit-text-security:disc", "-webkit-line-clamp:1",
    "text-decoration:line-through", "text-shadow:0 0 99px red", "mix-blend-mode:screen", "will-change:transform",
    "z-index:-1", "z-index:0;position:relative", "isolation:isolate", "writing-mode:vertical-rl", "direction:rtl",
    "unicode-bidi:bidi-override", "columns:99", "float:left", "float:right", "all:unset", "all:initial",
    "padding-left:90vw", "padding:0 9999px", "margin-left:-9999px", "margin-top:-9999px", "margin-left:100%",
    "margin:calc(-1*9999px)", "border:999px solid white", "outline:999px solid white", "box-shadow:0 0 0 9999px white",
    "animation:a 1s infinite", "transition:opacity 9999s", "color-scheme:dark", "display:var(--d)", "DISPLAY : NONE",
    "di\\73play:none", "display:none!important", "appearance:none", "grid-area:1/1", "object-fit:none",
    "position:running(x)", "page:tiny", "shape-outside:inset(0)", "user-select:none;speak:none", "content:none",
]  # fmt: skip


@pytest.mark.parametrize("declared", DECLARED)
def test_a_style_around_the_cautions_says_what_is_listed_alone(declared, look):
    """Each way to take text out of sight is refused at the element around, by a class, for print, and on a caution."""
    with pytest.raises(ReportError, match="can hide the cautions"):
        look(f"<div style='{declared}'>{{}}</div>".replace("'Adobe Blank'", '"Adobe Blank"'))
    for rule in (".around", "@media print { main div.around", ".caution-text", "#cautions"):
        with pytest.raises(ReportError, match="can hide the cautions"):
            look('<div class="around">{}</div>', f"{rule} {{ {declared} }} {'}' if '@' in rule else ''}")


REACHING = [
    "*", "main", ":root", "body *", "main > *", "section:hover", "section:not(:hover)", ":not(:focus)",
    ":is(section, a)",
    ":where(main section)", "[id]", "[id^=caut]", "[id=CAUTIONS i]", "#c\\61utions", "#\\63 autions", ".caution *",
    "section:has(p)", "body:has(h1) main", ":nth-child(n)", ":nth-last-child(n of section)", "section + section",
    "h1 ~ main, main", "header ~ *", "main:not(.ours)", "html:lang(en)", ":any-link, main", "section:target",
    ":nonsense", "p::first-line", "p::first-letter", "::marker, p", "main:state(x)", "a >> b, c || d", "SECTION",
    "main:is(:not(:hover), .x)", "section:dir(ltr)", ".caution-text:lang(en)::first-line", "div:nth-child(odd)",
]  # fmt: skip


@pytest.mark.parametrize("selector", REACHING)
def test_no_selector_reaches_the_cautions_unseen(selector, look):
    """A rule that hides is refused however the cautions, or what they stand in, are named."""
    for rule in (
        f"{selector} {{ opacity: 0 }}",
        f"@supports (color: red) {{ @layer a {{ {selector} {{scale: 0}} }} }}",
    ):
        with pytest.raises(ReportError, match="can hide the cautions"):
            look(style=rule)


SHEETS = {
    "import": "@import 'a.css';",
    "import of data": "@import url(data:text/css,*{display:none});",
    "font": "@font-face { font-family: serif; src: url(data:font/woff2;base64,AAAA) }",
    "keyframes": "@keyframes a { to { opacity: 0 } }",
    "scope": "@scope (main) { section { display: none } }",
    "starting": "@starting-style { main { opacity: 0 } }",
    "small sheet": "@page { size: 1mm 1mm }",
    "wide margin": "@page { margin: 500mm }",
    "negative margin": "@page { margin: -500mm }",
    "margin box over the page": "@page { @top-left { content: ''; height: 999mm; background: white } }",
    "nested": "main { & section { display: none } }",
    "nested without sign": "main { section { display: none } }",
    "nested in a condition": "main { @media print { display: none } }",
    "nested twice": "body { > main { #cautions { scale: 0 } } }",
    "unreadable": "main { display none }",
    "half a rule": ".ours { color: red } main",
    "unclosed comment": ".ours { color: red } main { display: none /* ",
    "unclosed block": "main { scale: 0",
    "in a variable": ".ours { --gap: -9999px }",
    "variable with a font": ":root { --serif: 'Wingdings' }",
    "layer above": ".ours { position: fixed; inset: 0; z-index: 2147483647 }",
    "layer by a variable": ".ours { position: fixed; inset: 0; z-index: var(--z) }",
    "pulled up by what stands before": ".ours { margin-bottom: -9999px }",
    "pulled up, all sides": ".ours { margin: 0 0 -9999px }",
    "pulled up by a calculation": ".ours { margin-bottom: calc(1px - 9999px) }",
    "pushed far": ".ours { padding-top: 9999999px }",
    "small root": "html { font-size: 1% } ",
    "deep": "a{" * 3000,
}


@pytest.mark.parametrize("style", SHEETS.values(), ids=SHEETS)
def test_a_style_sheet_cannot_work_around_the_list(style, look):
    """At-rules, nesting, broken text and what acts on the block from outside are refused."""
    with pytest.raises(ReportError, match=r"hide the cautions|would load"):
        look('<p class="ours">Ours</p>{}', style)


def test_a_style_in_a_drawing_counts(look):
    """A style element inside SVG is a style of the page (SVG 2, 6.2)."""
    with pytest.raises(ReportError, match="can hide the cautions"):
        look(anywhere="<svg><style>#cautions { display: none }</style></svg>")


ANYWHERE = {
    "iframe with a document": '<iframe srcdoc=""></iframe>',
    "script in a drawing": "<svg><script>1</script></svg>",
    "moved by a drawing": '<svg><set attributeName="x" href="#cautions"/></svg>',
    "base": '<base href="https://example.org/">',
    "form": "<form><input></form>",
    "second policy": '<meta http-equiv="Content-Security-Policy" content="style-src-attr \'none\'">',
    "other letters": '<meta charset="utf-16">',
    "dark alone": '<meta name="color-scheme" content="dark">',
    "leaving": '<meta http-equiv="refresh" content="0;url=https://example.org">',
    "script link in pieces": '<a href="java\nscript:x()">a</a>',
    "slow template": "<template>{{ page }}</template>",
}


@pytest.mark.parametrize("piece", ANYWHERE.values(), ids=ANYWHERE)
def test_what_a_report_does_not_need_is_refused_wherever_it_stands(piece, look):
    """Elements that run, load, take input or change how the page is read."""
    with pytest.raises(ReportError, match="the template"):
        look(anywhere=piece)


def test_a_page_is_read_by_the_rules_of_the_standard(look):
    """Without the doctype browsers match names of classes in any case, and more: it has to stay."""
    with pytest.raises(ReportError, match="DOCTYPE"):
        look(old="<!DOCTYPE html>", new="<!DOCTYPE html PUBLIC '-//W3C//DTD HTML 3.2//EN'>")


def test_margins_cannot_squeeze_the_cautions_together(look):
    """Each of ten paddings is small; together they would leave a line of no width (48 px each, 480 px left)."""
    with pytest.raises(ReportError, match="margins and padding"):
        look('<div class="in">' * 10 + "{}" + "</div>" * 10, ".in { padding-left: 3rem }")


def test_a_refusal_says_rule_value_and_element(look):
    """The message names what and where."""
    with pytest.raises(
        ReportError, match=re.escape('"main .ours { contain: strict }" acts on html > body > main > div#a.ours')
    ):
        look('<div class="ours" id="a">{}</div>', "main .ours { contain: strict }")


COMPANY = {
    "colours and type": ":root { --ink: #003366; --serif: Georgia } body { color: var(--ink); font: 11pt/1.4 Georgia }",
    "house heading": "h2 { text-transform: uppercase; border-bottom: 2px solid #003366; letter-spacing: .05em }",
    "letterhead": ".ours { position: absolute; top: 0; right: 0; transform: rotate(3deg); z-index: 5; opacity: .5 }",
    "hidden on paper": "@media print { .ours, nav, a:hover { display: none } } a:focus { outline: 2px solid }",
    "own layout": ".ours { display: grid; grid-template-columns: 1fr 1fr; overflow: hidden; height: 3rem }",
    "own nesting": ".ours { & b { display: none } .caution { visibility: hidden } }",
    "sheet": "@page { size: A4; margin: 25mm 20mm; @bottom-center { content: counter(page); font: 8pt sans-serif } }",
    "caution of its own look": ".caution { border-left: 5px double #003366; padding: .5rem 1rem; margin: 1rem 0 }",
    "paper": "body { background: #fafafa url(data:image/png;base64,AAAA); max-width: 50rem; padding: 2rem }",
    "reset": "*, *::before, *::after { box-sizing: border-box; margin: 0; padding: 0 }",
    "marks": ".ours::before { content: '> '; position: absolute; left: -1em } main::before { display: none }",
    "emoji in the row of fonts": "body { font-family: system-ui, 'Segoe UI', 'Segoe UI Symbol', sans-serif }",
    "container": "@container (width > 3rem) { .ours { display: none } } @layer a, b;",
}


@pytest.mark.parametrize("style", COMPANY.values(), ids=COMPANY)
def test_a_company_has_its_look(style, look):
    """Type, colours, letterhead, own layout, what paper leaves out: none of it touches the cautions."""
    look('<p class="ours"><b>Ours</b></p><div class="wrap" lang="en">{}</div>', style)
