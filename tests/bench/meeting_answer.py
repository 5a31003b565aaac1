"""How long the meeting page takes to answer a change, in a real browser, for eight candidates on every basis.

Run from the top of the repository: `python tests/bench/meeting_answer.py [--changes N]`. Each change types another
condensing temperature and waits until the page shows its numbers, the page's own pause after typing included and
taken off again; charts follow by themselves and are not waited for. The yardstick, taken between the changes, is one
state of a blend by pressure and temperature through the high-level interface of the property library.

Two paces: calm, the next change when charts and years of the last are there; and hurried, half a second after it.
"""

from __future__ import annotations

import argparse
import re
import statistics
import tempfile
import threading
import time
from pathlib import Path

ROOT = Path(__file__).resolve().parents[2]
CANDIDATES = ["R448A", "R449A", "R407A", "R407H", "R452A", "R454C", "R407F", "R455A"]
FLAGS = ["--no-sandbox", "--disable-gpu", "--disable-quic", "--no-first-run", "--disable-background-networking",
         "--disable-component-update", "--disable-sync"]  # fmt: skip
PAUSE_S = 0.2  # after typing, by meeting.js
ALLOWED_S = 0.25
# In the page: type, wait for the answer in place, and say how long that took.
TYPE = """text => new Promise(done => {
  const field = document.getElementById('in-duty.condensing'), start = performance.now();
  const watch = new MutationObserver(() => {
    const board = document.getElementById('board');
    if (!board.dataset.working && board.dataset.said.includes(text)) {
      watch.disconnect();
      requestAnimationFrame(() => setTimeout(() => done(performance.now() - start)));
    }
  });
  watch.observe(document.body, {childList: true, subtree: true});
  field.value = text;
  field.dispatchEvent(new Event('input', {bubbles: true}));
})"""


def case_file(folder: Path) -> Path:
    """Return the harbour market's case with eight candidates."""
    text = (ROOT / "cases" / "harbour-market.toml").read_text(encoding="utf-8")
    names = str(CANDIDATES).replace("'", '"')
    path = folder / "market.toml"
    path.write_text(re.sub(r"candidates = \[.*?\]", f"candidates = {names}", text), encoding="utf-8")
    return path


def high_level_state_s() -> float:
    """Return the time of one state of a blend through the high-level interface. [s]"""
    from CoolProp.CoolProp import PropsSI

    start = time.perf_counter()
    PropsSI("H", "T", 310.0, "P", 5e5, "HEOS::R32[0.5]&R125[0.5]")
    return time.perf_counter() - start


def main() -> None:
    """Measure and print."""
    from playwright.sync_api import sync_playwright

    from retrofit.meeting import session_of
    from retrofit.meeting.server import make_server

    parser = argparse.ArgumentParser(description=__doc__)
    parser.add_argument("--changes", type=int, default=40)
    count = parser.parse_args().changes
    with tempfile.TemporaryDirectory() as folder, sync_playwright() as playwright:
        server = make_server(session_of(case_file(Path(folder))))
        threading.Thread(target=server.serve_forever, daemon=True).start()
        browser = playwright.chromium.launch(executable_path="/usr/bin/chromium", args=FLAGS)
        page = browser.new_page(viewport={"width": 1280, "height": 900})
        page.goto(f"http://127.0.0.1:{server.server_port}/", wait_until="networkidle")
        high_level_state_s()
        answers: dict[str, list[float]] = {"calm": [], "hurried": []}
        states = []
        for place in range(2 * count):
            pace = "calm" if place < count else "hurried"
            took_s = page.evaluate(TYPE, f"{40 + 0.1 * (place + 1):.1f} degC") / 1000.0
            answers[pace].append(took_s - PAUSE_S)
            states.append(statistics.median(high_level_state_s() for _ in range(5)))
            if pace == "calm":
                page.wait_for_selector("#board:not([data-follows]):not(:has(.late))", timeout=60_000)
                page.wait_for_timeout(200)
            else:
                page.wait_for_timeout(500)
        browser.close()
        server.shutdown()
    state = statistics.median(states)
    print(f"candidates                      {len(CANDIDATES)}")
    print(f"one high-level state of a blend {1000 * state:.1f} ms")
    for pace, taken in answers.items():
        answer = statistics.median(taken)
        slow = sorted(taken)[int(0.9 * len(taken))]
        print(f"answer to a change, {pace + ',':9} median {1000 * answer:.0f} ms (allowed {1000 * ALLOWED_S:.0f})")
        print(f"  90 % within                   {1000 * slow:.0f} ms")
        print(f"  over one high-level state     {answer / state:.1f}")


if __name__ == "__main__":
    main()
