"""Who may talk to the page and what it lets through."""

import re

import pytest

from retrofit.meeting import session_of
from retrofit.meeting.security import LARGEST_REQUEST_BYTES
from tests.meeting.conftest import HOME, Client, case_text

HOSTILE = {
    "script": "<script>alert(1)</script>",
    "attribute": '" onfocus="alert(1)" autofocus x="',
    "style": "</style><style>body{display:none}</style>",
    "template": "{{ 7 * 7 }} {% include 'report.html' %}",
    "picture": "<img src=x onerror=alert(1)><svg onload=alert(1)>",
    "long": "longword" * 24,
}


def raw(client, path="/", method="GET", **options):
    """Send a request as it is."""
    return client.http.open(path, method=method, **options)


@pytest.mark.parametrize("host", ["evil.example", "evil.example:8000", "127.0.0.1.evil.example", "0.0.0.0:8000", ""])
def test_another_host_name_is_refused(watched, host):
    """A page that was led here under another name gets nothing (DNS rebinding)."""
    assert raw(watched, headers={"Host": host}).status_code == 400


@pytest.mark.parametrize("host", ["127.0.0.1:8000", "localhost:5000", "127.0.0.1"])
def test_this_machine_s_names_are_answered(watched, host):
    """The two names of this machine, on any port."""
    assert raw(watched, headers={"Host": host}).status_code == 200


@pytest.mark.parametrize(
    ("headers", "token"),
    [
        ({}, ""),
        ({}, "x" * 32),
        ({"Origin": "http://evil.example"}, None),
        ({"Origin": "null"}, None),
        ({"Origin": "http://127.0.0.1:9000"}, None),
        ({"Sec-Fetch-Site": "cross-site"}, None),
        ({"Sec-Fetch-Site": "same-site"}, None),
    ],
)
@pytest.mark.parametrize("path", ["/change", "/freeze"])
def test_a_post_from_elsewhere_is_refused(client, path, headers, token):
    """Without the token of this start, or from another origin, nothing is changed and nothing written."""
    given = client.token if token is None else token
    before = client.session.version
    answer = client.http.post(
        path, base_url=HOME, headers=headers, data={"token": given, "act": "hide R448A", "seen": 1}
    )

    assert answer.status_code == 403
    assert client.session.version == before


def test_a_post_of_the_page_itself_is_taken(client):
    """With token, origin and fetch metadata as a browser sends them."""
    headers = {"Origin": HOME, "Sec-Fetch-Site": "same-origin"}
    data = {"token": client.token, "act": "hide R448A", "seen": 1}

    assert client.http.post("/change", base_url=HOME, headers=headers, data=data).status_code == 303
    assert client.state.hidden == ("R448A",)


def test_a_get_changes_nothing(client):
    """What acts is posted; another method is refused."""
    for path in ("/change?act=hide+R448A", "/freeze"):
        assert client.get(path).status_code == 405
    assert client.state.hidden == ()


def test_every_answer_carries_the_headers(watched):
    """A strict policy, no sniffing, no framing, and referrers to this page alone."""
    key = re.search(r"/picture/[^/]+/change-0.svg", watched.page())[0]
    for path in ("/", "/how/R448A/duty-mass-flow", "/why/R448A", "/report", "/meeting.js", key, "/nothing", "/change"):
        headers = watched.get(path).headers
        assert headers["Content-Security-Policy"].startswith("default-src 'none'"), path
        assert headers["X-Content-Type-Options"] == "nosniff"
        assert headers["Referrer-Policy"] == "same-origin"
        assert headers["X-Frame-Options"] == "DENY"


def test_the_policy_names_no_source_of_another_host(watched):
    """Script and style by nonce, never inline or from anywhere; the nonce is new each time."""
    policies = [watched.get().headers["Content-Security-Policy"] for _ in range(2)]

    assert policies[0] != policies[1]
    assert "'unsafe-inline'" not in policies[0]
    assert "http" not in policies[0]
    assert "*" not in policies[0]
    assert re.search(r"script-src 'nonce-[\w-]{16,}';", policies[0])
    assert "form-action 'self'" in policies[0]
    assert "frame-ancestors 'none'" in policies[0]


@pytest.mark.parametrize(
    "path",
    [
        "/../../etc/passwd", "/..%2f..%2fetc%2fpasswd", "/how/..%2f../passwd", "/picture/../x.svg",
        "/static/meeting.js", "/meeting.html", "/how/%00/x", "/why/%ff",
    ],
)  # fmt: skip
def test_no_path_leads_to_a_file(watched, path):
    """Nothing but the page's own addresses is answered."""
    answer = watched.get(path)

    assert answer.status_code in (204, 400, 404)
    assert "root:" not in answer.get_data(as_text=True)


def test_a_request_is_bounded(client):
    """A form that is too large, or comes in parts, is refused; the meeting goes on."""
    large = client.post("note", **{"n.meeting": "x" * (LARGEST_REQUEST_BYTES + 1)})
    data = {"token": client.token, "act": "hide R448A", "seen": "1"}
    parts = client.http.post("/change", base_url=HOME, data=data, content_type="multipart/form-data")
    long_note = client.change("note", **{"n.meeting": "x" * 5000})

    assert large.status_code == 413
    assert parts.status_code == 415
    assert "it has 5000 characters" in long_note
    assert client.state.notes == ()


@pytest.mark.parametrize(
    "data",
    [b"", b"\xff\xfe\x00", b"token=%ff&act=%00", b"a" * 5000, b'{"act": "hide R448A"}', b"&&&&==;;"],
)
def test_a_malformed_request_is_refused_in_a_word(client, data):
    """No traceback and no fault of the server, whatever is sent."""
    for kind in ("application/x-www-form-urlencoded", "multipart/form-data; boundary=x", "application/json", "%%%"):
        answer = raw(client, "/change", "POST", base_url=HOME, data=data, content_type=kind)
        assert answer.status_code in (400, 403, 415)
        assert "Traceback" not in answer.get_data(as_text=True)


def test_strange_fields_end_in_words(client):
    """Fields of the right form with strange content are refused on the page, never by a fault."""
    for seen in ("-1", "1e9", "9" * 40, "x", "\u0661"):
        assert client.post("set", seen=seen, **{"in.duty.condensing": "45 degC"}).status_code == 303
    for text in ("9" * 400 + " degC", "\x00", "\u202e45 degC", "1e999 degC", "nan", "[[[[", "{a = 1}", '"""', "-" * 90):
        assert client.post("set", **{"in.duty.condensing": text}).status_code == 303
        assert client.get().status_code == 200
    for text in ("[" * 60 + "]" * 60, "[1, 2, 3, 4]", "[nan, inf, 1]", "[0.1, 0.2, 1e308]", "{a = {a = 1}}", "../../x"):
        assert client.post("set", **{"in.money.tariff": text}).status_code == 303
        assert client.get().status_code == 200
    assert client.state.changes == ()


def test_a_fault_of_the_program_shows_no_traceback(client, monkeypatch, caplog):
    """A bug is told as one; the page and what was there before stay."""
    monkeypatch.setattr("retrofit.meeting.app.build_board", lambda *parts: 1 / 0)
    answer = client.get()
    text = answer.get_data(as_text=True)

    assert answer.status_code == 500
    assert "ZeroDivisionError" not in text
    assert "fault of the program" in text
    assert "ZeroDivisionError" in caplog.text


@pytest.mark.parametrize("text", HOSTILE.values(), ids=HOSTILE)
def test_a_hostile_case_is_only_text(tmp_path, read, text):
    """Title, about, room and file name full of markup show as text, and add no element to the page."""
    plain, hostile = "A plant", text.replace("\\", "\\\\").replace('"', '\\"')
    pages = []
    for words in (plain, hostile):
        path = tmp_path / "a plant <b>.toml"
        case = case_text().replace("Harbour market, medium-temperature rack", words).replace("sales floor", words[:90])
        path.write_text(re.sub(r"about = .*", f'about = "{words}"', case), encoding="utf-8")
        pages.append(Client(session_of(path)).page())
    (usual, _), (elements, seen) = map(read, pages)

    assert re.sub(r"\s+", " ", text) in seen
    assert [tag for tag, _ in elements] == [tag for tag, _ in usual]
    assert not any(name.startswith("on") for _, named in elements for name in named)
