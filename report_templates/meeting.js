// The meeting page's own script: posts forms without leaving the page, and puts the newest answer in place.
"use strict";
(() => {
  const WINDOW = Math.random().toString(36).slice(2), PAUSE = 200, SOON = 400, NEWS = 2000, STAYS = 6000, NUMBERS = "td a.how, dd a.how", known = new Map();
  const said = document.getElementById("said"), aside = document.getElementById("aside");
  const board = () => document.getElementById("board");
  const fields = (root) => root.querySelectorAll("input:not([type=hidden]), textarea, select");
  let shown = +board().dataset.version, under = 0, typed = null, timer = 0, quiet = 0, drawing = null, waiting = null, sent = new Map();

  // With the script a change goes out by itself: buttons that only send a form are for pages without it.
  const look = (name) => { document.documentElement.className = `live ${name}`; };
  look(board().dataset.look);

  const isDirty = (field) => field.tagName === "SELECT"
    ? [...field.options].some((option) => option.selected !== option.defaultSelected) : field.value !== field.defaultValue;

  // What is under way or follows is always asked for again, whatever its version.
  const isOpen = () => board().dataset.working || board().dataset.follows || board().dataset.writing;
  const news = () => ask(`/news?seen=${isOpen() ? 0 : shown}`);

  function say(text, stays) {
    said.textContent = text;
    clearTimeout(quiet);
    if (!stays) quiet = setTimeout(() => { said.textContent = ""; }, STAYS);
  }

  async function ask(url, options) {
    under += 1;
    try {
      const answer = await fetch(url, { ...options, headers: { "X-Part": "1" } });
      if (answer.status === 204) return;
      const text = await answer.text();
      if (answer.ok) put(text);
      else say(text);
    } catch (error) {
      if (error.name !== "AbortError") say("No answer: the meeting has ended on this machine. What is shown is the last answer.");
    } finally {
      under -= 1;
    }
  }

  // Only what was typed is overtaken: the next form carries it again. A button's request is never taken back.
  function post(form, button) {
    clearTimeout(timer);
    waiting = null;
    if (typed && typed.form === form) typed.control.abort();
    typed = button ? null : { form, control: new AbortController() };
    if (form.action.endsWith("/freeze")) say("Writing the revision and its report…", true);
    sent = new Map([...fields(form)].map((field) => [field.id, field.value]));
    const body = new URLSearchParams(new FormData(form, button));
    body.set("window", WINDOW);  // what this window changed itself is news to others alone
    ask(form.action, { method: "POST", body, signal: typed?.control.signal });
  }

  function later(form) {
    if (waiting && waiting !== form) post(waiting);
    clearTimeout(timer);
    waiting = form;
    timer = setTimeout(() => post(form), PAUSE);
  }

  // An answer older than what is shown is dropped; what was typed meanwhile stays, and goes out after it.
  function put(html) {
    const fresh = new DOMParser().parseFromString(html, "text/html").getElementById("board");
    if (!fresh || +fresh.dataset.version < shown) return;
    const old = board(), focus = mark(document.activeElement), again = carry(old, fresh);
    carryPictures(old, fresh);
    for (const box of old.querySelectorAll("details[id]")) fresh.querySelector(`#${box.id}`).open = box.open;
    markMoved(old, fresh);
    const scrolled = [...old.querySelectorAll(".scroll, .inputs")].map((box) => [box.scrollLeft, box.scrollTop]);
    const [x, y] = [scrollX, scrollY];
    shown = +fresh.dataset.version;
    old.replaceWith(document.adoptNode(fresh));
    look(fresh.dataset.look);
    const boxes = fresh.querySelectorAll(".scroll, .inputs");
    if (boxes.length === scrolled.length) boxes.forEach((box, i) => { [box.scrollLeft, box.scrollTop] = scrolled[i]; });
    scrollTo(x, y);
    restore(fresh, focus);
    say(fresh.dataset.said);
    if (isOpen()) setTimeout(() => under || news(), SOON);
    if (again) later(again);
  }

  function carry(old, fresh) {
    let again = null;
    for (const field of fields(old)) {
      if (!field.id || !isDirty(field) || sent.get(field.id) === field.value) continue;
      const place = fresh.querySelector(`#${CSS.escape(field.id)}`);
      if (!place) continue;
      place.value = field.value;
      if (place.form.hasAttribute("data-live")) again = place.form;
    }
    return again;
  }

  // A picture that was in sight stays until the new one is drawn; they are asked for one after the other, so that the
  // next change never waits behind them, and what is overtaken is asked for no more.
  function carryPictures(old, fresh) {
    const late = [];
    for (const picture of fresh.querySelectorAll("img.picture")) {
      const before = old.querySelector(`#${CSS.escape(picture.id)}`), next = picture.getAttribute("src");
      const shownNow = before?.getAttribute("src");
      if (!before || shownNow === next || !before.naturalWidth) continue;
      picture.src = shownNow;
      picture.dataset.next = next;
      picture.classList.add("late");
      late.push(picture);
    }
    if (!fresh.querySelector("img.picture")) return;
    if (drawing) drawing.src = "";
    draw(late);
  }

  function draw(late) {
    const picture = late.shift();
    drawing = null;
    if (!picture) return;
    const image = drawing = new Image(), next = picture.dataset.next;
    image.onload = () => {
      if (image !== drawing) return;
      picture.src = next;
      picture.classList.remove("late");
      delete picture.dataset.next;
      draw(late);
    };
    image.onerror = () => { if (image === drawing) draw(late); };
    image.src = next;
  }

  // Years come a moment after the other numbers: what they were stays known meanwhile.
  function markMoved(old, fresh) {
    const isSame = +fresh.dataset.version === shown;
    for (const cell of old.querySelectorAll(NUMBERS)) {
      known.set(cell.getAttribute("href"), [cell.textContent, cell.classList.contains("moved")]);
    }
    for (const cell of fresh.querySelectorAll(NUMBERS)) {
      const [text, moved] = known.get(cell.getAttribute("href")) ?? [cell.textContent, false];
      cell.classList.toggle("moved", text !== cell.textContent || (isSame && moved));
    }
  }

  function mark(element) {
    if (!element || !board().contains(element)) return null;
    const range = element.selectionStart === undefined ? null : [element.selectionStart, element.selectionEnd];
    const id = element.id ? `#${CSS.escape(element.id)}` : "", name = element.dataset.focus;
    const href = element.getAttribute("href");
    const path = id || (name ? `[data-focus="${name}"]` : element.value ? `button[value="${CSS.escape(element.value)}"]` : href ? `a[href="${CSS.escape(href)}"]` : "");
    const near = element.closest("section, details");
    return { path, range, near: near ? near.id : "" };
  }

  function restore(fresh, focus) {
    if (!focus) return;
    const element = (focus.path && fresh.querySelector(focus.path)) || (focus.near && fresh.querySelector(`#${CSS.escape(focus.near)}-h`));
    if (!element) return;
    element.focus({ preventScroll: true });
    if (focus.range && element.setSelectionRange && element.type === "text") element.setSelectionRange(...focus.range);
  }

  async function tell(href) {
    const answer = await fetch(href, { headers: { "X-Part": "1" } });
    const body = document.getElementById("aside-body");
    body.replaceChildren(...new DOMParser().parseFromString(await answer.text(), "text/html").body.childNodes);
    if (!aside.open) aside.showModal();
    aside.scrollTop = 0;
  }

  document.addEventListener("submit", (event) => {
    if (event.target.method !== "post") return;
    event.preventDefault();
    post(event.target, event.submitter);
  });
  document.addEventListener("input", (event) => {
    const form = event.target.form;
    if (form?.hasAttribute("data-live")) later(form);
  });
  document.addEventListener("click", (event) => {
    if (event.target.closest("a[href='#inputs']")) document.getElementById("inputs").open = true;
    const link = event.target.closest("a.how");
    if (!link || event.ctrlKey || event.metaKey || event.shiftKey || event.button) return;
    const href = link.getAttribute("href");
    if (href.startsWith("#")) return;
    event.preventDefault();
    tell(href).catch(() => { location.href = href; });
  });
  setInterval(() => {
    if (!under && !waiting && !document.hidden && !aside.open) news();
  }, NEWS);
  const margin = document.getElementById("inputs");
  if (margin && matchMedia("(max-width: 44rem)").matches) margin.open = false;
  if (isOpen()) setTimeout(news, SOON);
})();
