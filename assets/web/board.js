/* The hand on the board: edits are queued here, numbered, and sent once each; pictures arrive and are put in place. */
(function () {
  "use strict";

  const board = {
    known: {},        // what every control shows, by path
    unheard: [],      // edits the server has not confirmed
    refused: [],      // edits refused because another tab was first
    number: 0,        // number of the last edit
    change: 0,        // last change of the work that this tab has seen
    busy: false,      // an edit made while dragging waits for its picture
    held: null,       // the newest edit made while busy
    echoes: {},       // values that the page itself has put into controls
    typing: null,     // what is being typed and not taken up yet
    dragging: false,
    lastKey: 0,
    drawn: null,      // what the last pictures carried
    position: null,   // stroke position under the pointer
    open: {},         // which sections of the drawer are open
    focus: null,      // control of the drawer that had the focus last
    timer: null,
  };
  window.pullward = board;

  const setProps = (id, props) => window.dash_clientside.set_props(id, props);
  const idOf = (type, path) => ({ path: path, type: type });
  const skip = () => window.dash_clientside.no_update;
  const byId = (id) => document.getElementById(id);
  const partId = (type, path) => document.getElementById(JSON.stringify({ path: path, type: type }));

  /* The page sets controls itself; what they say back then is an echo, not a hand. */
  function put(type, path, value) {
    const key = type + " " + path;
    (board.echoes[key] = board.echoes[key] || []).push({ value: value, until: performance.now() + 4000 });
    setProps(idOf(type, path), typeof value === "boolean" ? { checked: value } : { value: value });
  }

  /* Echoes come late, in any order and more than once. What the hand is on at the moment is never one. */
  function isEcho(id, value) {
    const key = id.type + " " + id.path;
    const control = partId(id.type, id.path);
    const list = (board.echoes[key] || []).filter((echo) => echo.until > performance.now());
    board.echoes[key] = list;
    if (control && control.contains(document.activeElement)) return false;
    if (id.type === "slider" && board.dragging) return false;
    return list.some((echo) => same(echo.value, value));
  }

  /* ---- sending ---- */

  function stale(on) {
    document.documentElement.classList.toggle("stale", on);
    const sheet = byId("page");
    if (sheet) sheet.setAttribute("aria-busy", on ? "true" : "false");
  }

  function say(text) {
    const line = byId("state-line");
    if (line) line.textContent = text;
  }

  board.send = function (edit, phase) {
    if (phase === "drag" && board.busy) {
      board.held = edit;
      return;
    }
    board.number += 1;
    board.unheard = board.unheard.filter((e) => !(e.do === "set" && edit.do === "set" && e.path === edit.path && e.phase === "drag"));
    board.unheard.push(Object.assign({ n: board.number, phase: phase }, edit));
    board.busy = true;
    clearTimeout(board.timer);
    board.timer = setTimeout(() => { board.busy = false; flush(); }, 20000);
    stale(true);
    say("working it out");
    setProps("edit", { data: { edits: board.unheard.slice(), phase: phase, seen: board.change } });
  };

  function flush() {
    if (board.held) {
      const edit = board.held;
      board.held = null;
      board.send(edit, board.dragging ? "drag" : "rest");
    }
  }

  board.set = function (path, value, phase) {
    if (same(board.known[path], value)) return;
    board.known[path] = value;
    board.lastPath = path;
    stale(true);
    board.send({ do: "set", path: path, value: value }, phase);
  };

  function same(a, b) {
    if (a === b) return true;
    if (a === undefined || a === null || a === "" || b === undefined || b === null || b === "") return (a || "") === (b || "") && a !== 0 && b !== 0;
    return typeof a !== "boolean" && typeof b !== "boolean" && Number(a) === Number(b);
  }

  /* ---- controls ---- */

  board.changed = function () {
    const hits = window.dash_clientside.callback_context.triggered || [];
    if (hits.length > 3) return skip();       // a drawer has just been built
    for (const hit of hits) {
      const cut = hit.prop_id.lastIndexOf(".");
      let id;
      try { id = JSON.parse(hit.prop_id.slice(0, cut)); } catch (error) { continue; }
      const value = hit.value;
      if (value === undefined || value === null || isEcho(id, value)) continue;
      if (same(board.known[id.path], value)) {
        if (board.typing && board.typing.path === id.path) board.typing = null;
        continue;
      }
      if (id.type === "slider") {
        if (partId("value", id.path)) put("value", id.path, value);
        board.set(id.path, value, gesture());
      } else {
        if (partId("slider", id.path) && typeof value === "number") put("slider", id.path, value);
        typed(id.path, value, partId("value", id.path));
      }
    }
    return skip();
  };

  /* Typing is taken up when it pauses, or when the field is left; a choice at once. */
  function typed(path, value, field) {
    board.typing = { path: path, value: value };
    clearTimeout(board.typeTimer);
    if (field && field === document.activeElement && !field.readOnly && field.type !== "checkbox") {
      board.typeTimer = setTimeout(takeTyped, 350);
    } else {
      takeTyped();
    }
  }

  function takeTyped() {
    const pending = board.typing;
    board.typing = null;
    clearTimeout(board.typeTimer);
    if (pending) board.set(pending.path, pending.value, "rest");
  }

  document.addEventListener("focusout", () => setTimeout(takeTyped, 0));

  /* A slider that a finger or a held key moves is still moving; a single key press is a change at rest. */
  function gesture() {
    const now = performance.now();
    const quick = now - board.lastKey < 250;
    board.lastKey = now;
    if (board.dragging) return "drag";
    if (quick) {
      clearTimeout(board.restTimer);
      board.restTimer = setTimeout(rest, 300);
      return "drag";
    }
    return "rest";
  }

  function rest() {
    board.restTimer = null;
    if (board.held) {
      const edit = board.held;
      board.held = null;
      board.send(edit, "rest");
    } else {
      board.send({ do: "rest" }, "rest");
    }
  }

  document.addEventListener("pointerdown", (event) => {
    if (event.target.closest && event.target.closest("[role=slider], .mantine-Slider-root")) {
      board.dragging = true;
      board.draggedFrom = board.number;
      board.slid = event.target.closest(".mantine-Slider-root");
    }
  }, true);
  document.addEventListener("pointerup", () => {
    if (!board.dragging) return;
    const slid = board.slid;
    board.slid = null;
    // The slider's last word is on the page a frame or two after the finger has left it.
    requestAnimationFrame(() => requestAnimationFrame(() => {
      board.dragging = false;
      const thumb = slid && slid.querySelector("[role=slider]");
      const owner = slid && (slid.id.startsWith("{") ? slid : slid.querySelector("[id^='{']") || slid.closest("[id^='{']"));
      if (thumb && owner) {
        const path = JSON.parse(owner.id).path, value = Number(thumb.getAttribute("aria-valuenow"));
        if (!same(board.known[path], value)) {
          board.held = null;
          put("value", path, value);
          board.set(path, value, "rest");
          return;
        }
      }
      if (board.number !== board.draggedFrom || board.held) rest();
    }));
  }, true);

  /* ---- what arrives ---- */

  board.arrived = function (state) {
    if (!state) return skip();
    board.unheard = board.unheard.filter((e) => e.n > state.n);
    if (state.conflict) {
      board.refused = state.refused || [];
      board.busy = false;
      stale(false);
      say("changed in another tab");
      return skip();
    }
    board.change = state.change;
    if (board.then && !board.unheard.length) {
      const link = document.querySelector(`a.page-link[href="${board.then}"]`);
      board.then = null;
      if (link) link.click();
    }
    const waiting = new Set(board.unheard.filter((e) => e.do === "set").map((e) => e.path));
    if (board.held && board.held.do === "set") waiting.add(board.held.path);
    if (board.typing) waiting.add(board.typing.path);
    for (const [path, value] of Object.entries(state.values)) {
      if (waiting.has(path) || same(board.known[path], value)) continue;
      board.known[path] = value;
      if (partId("value", path) || document.querySelector(`[id*='"path":"${path}"']`)) {
        put("value", path, value);
        if (partId("slider", path) && typeof value === "number") put("slider", path, value);
      }
    }
    tellProblems(state);
    tellFrame(state);
    if (!state.sound) {
      board.busy = false;
      stale(false);
      say("not a study yet: " + state.problem_list.length + (state.problem_list.length === 1 ? " problem" : " problems"));
      document.documentElement.classList.add("unsound");
      flush();
    } else {
      document.documentElement.classList.remove("unsound");
      caughtUp();
    }
    return skip();
  };

  /* Pages without the bench drawing have caught up when what they show was made of the last change. */
  function caughtUp() {
    if (byId("bench-picture") || !document.documentElement.classList.contains("stale") || board.unheard.length) return;
    const body = document.querySelector("[data-change]");
    if (document.querySelector(".waiting") || (body && Number(body.dataset.change) < board.change)) return;
    board.busy = false;
    stale(false);
    say("caught up");
  }

  function tellProblems(state) {
    const before = board.problems || {};
    board.problems = state.problems;
    for (const path of new Set([...Object.keys(before), ...Object.keys(state.problems)])) {
      const text = state.problems[path] || "";
      if (before[path] === state.problems[path]) continue;
      if (partId("problem", path)) setProps(idOf("problem", path), { children: text });
      else if (partId("value", path)) setProps(idOf("value", path), { error: text || null });
    }
  }

  function tellFrame(state) {
    const title = byId("study-title");
    if (title) title.textContent = state.title;
    for (const [id, able] of [["undo", state.can_undo], ["redo", state.can_redo]]) {
      const button = byId(id);
      if (button) button.disabled = !able;
    }
    document.title = state.title + " - Pullward";
  }

  board.drew = function (drawn) {
    if (!drawn) return skip();
    board.drawn = drawn;
    lay();
    putPeople(drawn);
    board.people = {};
    if (board.position === null || board.position >= drawn.readout.length) board.position = drawn.position;
    rule();
    grips();
    clearTimeout(board.timer);
    board.busy = false;
    if (board.held) { flush(); return skip(); }
    if (!board.unheard.length && drawn.change >= board.change) fresh(drawn);
    return skip();
  };

  function place(id, svg) {
    const box = byId(id);
    if (box && svg !== undefined && svg !== null) box.innerHTML = svg;
  }

  /* Pictures and ratings come together: nothing is un-greyed before both are there. */
  function fresh(drawn) {
    if (board.drawn !== drawn || board.unheard.length) return;
    const there = document.querySelector("#ratings [data-key]");
    if (!there || there.dataset.key !== drawn.key) { requestAnimationFrame(() => fresh(drawn)); return; }
    stale(false);
    say(drawn.more ? drawn.said + ", the rest is coming" : drawn.said);
    if (drawn.more && !board.dragging) setProps("edit", { data: { edits: [], phase: "full", seen: board.change } });
  }

  /* On a narrow screen the true view has the width to itself, and the view beside it comes below. */
  const narrow = window.matchMedia("(max-width: 700px)");
  function lay() {
    const drawn = board.drawn;
    if (!drawn) return;
    place("bench-picture", drawn.machine);
    place("beside-picture", narrow.matches ? drawn.machine : "");
    if (narrow.matches) {
      const [all, beside] = [document.querySelector("#bench-picture svg"), document.querySelector("#beside-picture svg")];
      if (all) all.setAttribute("viewBox", drawn.cells[0].join(" "));
      if (beside) beside.setAttribute("viewBox", drawn.cells[1].join(" "));
    }
    const [chart, left, right] = drawn.charts[narrow.matches ? "narrow" : "wide"];
    place("chart-picture", chart);
    drawn.span = [left, right];
  }
  narrow.addEventListener("change", () => { lay(); rule(); grips(); });

  function putPeople(drawn) {
    place("people-picture", drawn.operators);
    place("corner-picture", drawn.corner);
  }

  /* ---- the pointer over the stroke ---- */

  function rule() {
    const box = byId("chart-picture");
    const svg = box && box.querySelector("svg");
    if (!svg || !board.drawn || board.position === null) return;
    const [left, right] = board.drawn.span;
    const share = board.drawn.strokes[board.position];
    const x = left + (right - left) * share;
    let line = svg.querySelector(".rule");
    if (!line) {
      line = document.createElementNS("http://www.w3.org/2000/svg", "line");
      line.setAttribute("class", "rule");
      svg.appendChild(line);
    }
    const height = svg.viewBox.baseVal.height;
    for (const [name, value] of [["x1", x], ["x2", x], ["y1", 24], ["y2", height - 34]]) line.setAttribute(name, value);
    mark();
    const says = byId("pointer-says");
    if (says) says.textContent = board.drawn.readout[board.position];
    box.setAttribute("aria-valuenow", Math.round(100 * share));
    box.setAttribute("aria-valuetext", board.drawn.readout[board.position]);
  }

  /* The grip on the bench drawing that belongs to the position on the chart. */
  function mark() {
    const svg = document.querySelector("#bench-picture svg");
    if (!svg || !board.drawn.marks) return;
    svg.querySelectorAll(".grip-mark").forEach((old) => old.remove());
    for (const view of board.drawn.marks) {
      const at = view[board.position];
      const ring = document.createElementNS("http://www.w3.org/2000/svg", "circle");
      for (const [name, value] of [["class", "grip-mark"], ["cx", at[0]], ["cy", at[1]], ["r", 6]]) ring.setAttribute(name, value);
      svg.appendChild(ring);
    }
  }

  function pointTo(position) {
    const most = board.drawn.strokes.length - 1;
    position = Math.max(0, Math.min(most, position));
    if (position === board.position) return;
    board.position = position;
    rule();
    clearTimeout(board.pointTimer);
    board.pointTimer = setTimeout(askPeople, 60);
  }

  function askPeople() {
    const sheet = byId("sheet");
    if (!sheet || !board.drawn) return;
    if (board.people[board.position]) { putPeople(board.people[board.position]); return; }
    setProps("pointer", { data: { position: board.position, key: board.drawn.key } });
  }

  board.peopleDrew = function (drawn) {
    if (!drawn || !board.drawn || drawn.key !== board.drawn.key) return skip();
    board.people[drawn.position] = { operators: drawn.svg, corner: drawn.corner };
    if (drawn.position === board.position) putPeople(board.people[drawn.position]);
    return skip();
  };

  document.addEventListener("pointermove", (event) => {
    const box = event.target.closest && event.target.closest("#chart-picture");
    if (!box || !board.drawn || board.pulled) return;
    const svg = box.querySelector("svg");
    if (!svg) return;
    const at = new DOMPoint(event.clientX, event.clientY).matrixTransform(svg.getScreenCTM().inverse());
    const [left, right] = board.drawn.span;
    pointTo(nearest((at.x - left) / (right - left)));
  });

  function nearest(share) {
    let best = 0;
    board.drawn.strokes.forEach((s, n) => { if (Math.abs(s - share) < Math.abs(board.drawn.strokes[best] - share)) best = n; });
    return best;
  }

  /* ---- dimensions that one drags ---- */

  function grips() {
    document.querySelectorAll("#bench-picture g.dimension[data-key]").forEach((group) => {
      const path = dimensionPath(group);
      if (path && path in board.known) group.classList.add("grip");
    });
  }

  function dimensionPath(group) {
    return group.dataset.key || "";
  }

  document.addEventListener("pointerdown", (event) => {
    const group = event.target.closest && event.target.closest("g.dimension.grip");
    if (!group || event.button !== 0) return;
    const path = dimensionPath(group);
    const svg = group.ownerSVGElement;
    const pull = measure(group, svg, path);
    if (!pull) return;
    event.preventDefault();
    const at = onSheet(svg, event);
    board.pulled = Object.assign(pull, { path: path, from: at, start: Number(board.known[path]), toSheet: svg.getScreenCTM().inverse() });
    board.dragging = true;
    board.draggedFrom = board.number;
    document.documentElement.classList.add("pulling");
  }, true);

  document.addEventListener("pointermove", (event) => {
    const p = board.pulled;
    if (!p) return;
    event.preventDefault();
    const at = new DOMPoint(event.clientX, event.clientY).matrixTransform(p.toSheet);
    const value = Math.round(p.start + p.change(p.from, at));
    tag(event, label(p.path) + " " + value + (p.path.endsWith("_deg") ? "°" : "\u202fmm"));
    if (value === board.known[p.path]) return;
    put("value", p.path, value);
    if (partId("slider", p.path)) put("slider", p.path, value);
    board.set(p.path, value, "drag");
  });

  document.addEventListener("pointerup", () => {
    if (!board.pulled) return;
    board.pulled = null;
    document.documentElement.classList.remove("pulling");
    tag(null, "");
  });

  function onSheet(svg, event) {
    return new DOMPoint(event.clientX, event.clientY).matrixTransform(svg.getScreenCTM().inverse());
  }

  /* How a movement on the sheet changes the value: along the dimension line, or round the pivot. */
  function measure(group, svg, path) {
    const value = Number(board.known[path]);
    if (!Number.isFinite(value)) return null;
    const lines = [...group.querySelectorAll("polyline")].map((line) => [...line.points].map((p) => [p.x, p.y]));
    const arc = lines.find((line) => line.length > 20);
    if (arc) return { change: turning(arc, value) };
    const scale = board.drawn.mm_per_unit;
    const shaft = lines.filter((line) => line.length === 2).pop();
    if (!shaft) return null;
    let way = [shaft[1][0] - shaft[0][0], shaft[1][1] - shaft[0][1]];
    const length = Math.hypot(way[0], way[1]) || 1;
    way = [way[0] / length, way[1] / length];
    const sign = path.endsWith("[0]") && value < 0 ? -1 : 1;
    return { change: (from, at) => sign * scale * ((at.x - from.x) * way[0] + (at.y - from.y) * way[1]) };
  }

  function turning(arc, value) {
    const [a, b, c] = [arc[0], arc[Math.floor(arc.length / 2)], arc[arc.length - 1]];
    const d = 2 * (a[0] * (b[1] - c[1]) + b[0] * (c[1] - a[1]) + c[0] * (a[1] - b[1]));
    const q = (p) => p[0] * p[0] + p[1] * p[1];
    const cx = (q(a) * (b[1] - c[1]) + q(b) * (c[1] - a[1]) + q(c) * (a[1] - b[1])) / d;
    const cy = (q(a) * (c[0] - b[0]) + q(b) * (a[0] - c[0]) + q(c) * (b[0] - a[0])) / d;
    const angle = (x, y) => Math.atan2(y - cy, x - cx);
    const wrap = (t) => Math.atan2(Math.sin(t), Math.cos(t));
    const sweep = wrap(angle(b[0], b[1]) - angle(a[0], a[1]));
    const sign = Math.sign(sweep) * Math.sign(value || 1);
    return (from, at) => sign * wrap(angle(at.x, at.y) - angle(from.x, from.y)) * 180 / Math.PI;
  }

  function label(path) {
    return path.replace(/^.*\./, "").replace(/\[\d\]$/, "").replace(/_(mm|deg)$/, "").replace(/_/g, " ");
  }

  function tag(event, text) {
    let box = byId("pull-tag");
    if (!box) {
      box = document.createElement("div");
      box.id = "pull-tag";
      document.body.appendChild(box);
    }
    box.textContent = text;
    box.hidden = !text;
    if (event) { box.style.left = event.clientX + 14 + "px"; box.style.top = event.clientY - 30 + "px"; }
  }

  /* ---- buttons and keys ---- */

  document.addEventListener("click", (event) => {
    const button = event.target.closest && event.target.closest("button");
    if (!button || button.disabled) return;
    if (button.id === "undo" || button.id === "redo") board.send({ do: button.id }, "rest");
    else if (button.id === "conflict-take") { board.change = Infinity; board.send({ do: "take" }, "rest"); }
    else if (button.id === "conflict-keep") board.send({ do: "keep", edits: board.refused }, "rest");
    else if (button.dataset.view) show(button);
    else if (button.dataset.path) {
      board.then = "/";                       // the page is built when the change has been confirmed
      board.set(button.dataset.path, Number(button.dataset.value), "rest");
    }
    else if (button.dataset.edits) {
      board.then = "/";
      JSON.parse(button.dataset.edits).forEach((edit) => board.set(edit[0], edit[1], "rest"));
    }
    else if (button.id.startsWith("{")) {
      const id = JSON.parse(button.id);
      if (id.type === "add" || id.type === "remove") board.send({ do: id.type, path: id.path }, "rest");
    }
  });

  function show(button) {
    const sheet = byId("sheet");
    sheet.className = "sheet show-" + button.dataset.view;
    document.querySelectorAll("button.view").forEach((b) => b.setAttribute("aria-pressed", String(b === button)));
    setProps("view", { data: button.dataset.view });
  }

  document.addEventListener("keydown", (event) => {
    const typing = event.target.closest && event.target.closest("input, textarea, [contenteditable]");
    if ((event.ctrlKey || event.metaKey) && !typing) {
      const key = event.key.toLowerCase();
      if (key === "z" || key === "y") {
        event.preventDefault();
        const button = byId(key === "y" || event.shiftKey ? "redo" : "undo");
        if (button && !button.disabled) button.click();
      }
    }
    if (event.target.id === "chart-picture" && board.drawn) {
      const steps = { ArrowLeft: -1, ArrowRight: 1, ArrowDown: -1, ArrowUp: 1, PageDown: -5, PageUp: 5, Home: -1e6, End: 1e6 };
      if (event.key in steps) {
        event.preventDefault();
        pointTo((board.position || 0) + steps[event.key]);
      }
    }
  });

  board.theme = function (clicks, now) {
    if (!clicks) return [skip(), skip()];
    const next = now === "dark" ? "light" : "dark";
    document.cookie = "pullward_theme=" + next + "; path=/; max-age=31536000; SameSite=Strict";
    return [next, next === "dark" ? "Light" : "Dark"];
  };

  /* Drawings inside pages arrive as text on their element. */
  new MutationObserver(() => {
    document.querySelectorAll("[data-svg]").forEach((box) => {
      box.innerHTML = box.getAttribute(narrow.matches && box.hasAttribute("data-narrow") ? "data-narrow" : "data-svg");
      box.removeAttribute("data-svg");
    });
    follow();
    reopen();
    caughtUp();
  }).observe(document.documentElement, { childList: true, subtree: true, attributes: true, attributeFilter: ["data-svg"] });

  /* A drawer that was built anew has the same sections open, and the focus where it was. */
  document.addEventListener("toggle", (event) => {
    const section = event.target.dataset && event.target.dataset.section;
    if (section) board.open[section] = event.target.open;
  }, true);

  function reopen() {
    document.querySelectorAll("details[data-section]").forEach((section) => {
      const name = section.dataset.section;
      if (section.seen) return;
      section.seen = true;
      if (name in board.open) section.open = board.open[name];
    });
    if (board.focus && document.activeElement === document.body) {
      const lost = document.getElementById(board.focus);
      if (lost) lost.focus({ preventScroll: true });
    }
  }

  document.addEventListener("focusin", (event) => { board.focus = event.target.closest(".drawer") ? event.target.id : null; });

  /* The link of the page that is shown, and a chart that the keyboard can walk along. */
  function follow() {
    document.querySelectorAll("a.page-link").forEach((link) => {
      const here = link.pathname === location.pathname;
      if (here !== (link.getAttribute("aria-current") === "page")) {
        if (here) link.setAttribute("aria-current", "page"); else link.removeAttribute("aria-current");
      }
    });
    const chart = byId("chart-picture");
    if (chart && !chart.hasAttribute("tabindex")) {
      for (const [name, value] of [["tabindex", "0"], ["role", "slider"], ["aria-label", "Stroke position"],
        ["aria-valuemin", "0"], ["aria-valuemax", "100"], ["aria-valuenow", "50"]]) chart.setAttribute(name, value);
    }
  }

  /* An SVG drawing as a PNG, three times its size, with the board's own font. */
  board.raster = function (sent) {
    if (!sent) return skip();
    fontText().then((font) => {
      const svg = sent.svg.replace(/(<svg[^>]*>)/, "$1<style>" + font + "</style>");
      const image = new Image();
      const address = URL.createObjectURL(new Blob([svg], { type: "image/svg+xml" }));
      image.onload = () => {
        const canvas = document.createElement("canvas");
        canvas.width = 3 * image.width;
        canvas.height = 3 * image.height;
        canvas.getContext("2d").drawImage(image, 0, 0, canvas.width, canvas.height);
        URL.revokeObjectURL(address);
        canvas.toBlob((blob) => {
          const link = document.createElement("a");
          link.href = URL.createObjectURL(blob);
          link.download = sent.name;
          link.click();
          setTimeout(() => URL.revokeObjectURL(link.href), 5000);
        });
      };
      image.src = address;
    });
    return skip();
  };

  let font = null;
  async function fontText() {
    if (font !== null) return font;
    const parts = [["Regular", 400], ["SemiBold", 600]].map(async ([name, weight]) => {
      const bytes = new Uint8Array(await (await fetch("/assets/fonts/PullwardSans-" + name + ".woff2")).arrayBuffer());
      let text = "";
      for (let n = 0; n < bytes.length; n += 8192) text += String.fromCharCode.apply(null, bytes.subarray(n, n + 8192));
      return "@font-face{font-family:'Pullward Sans';font-weight:" + weight + ";src:url(data:font/woff2;base64," + btoa(text) + ")}";
    });
    font = (await Promise.all(parts)).join("");
    return font;
  }

  /* Files that are too large never leave the browser; the page says so. */
  document.addEventListener("change", (event) => {
    if (event.target.type !== "file") return;
    const large = [...event.target.files].filter((file) => file.size > 1000000);
    const says = byId("upload-says");
    if (says && large.length) says.textContent = "Nothing was opened: " + large.map((f) => f.name).join(", ") + " is over 1 MB.";
  }, true);

  board.variant = function (name) {
    if (name && name !== board.seenVariant) {
      if (board.seenVariant !== undefined) { stale(true); say("working it out"); }
      board.seenVariant = name;
    }
    return skip();
  };

  window.dash_clientside = Object.assign({}, window.dash_clientside, {
    board: {
      changed: (...args) => board.changed(...args),
      arrived: (state) => board.arrived(state),
      drew: (drawn) => board.drew(drawn),
      peopleDrew: (drawn) => board.peopleDrew(drawn),
      theme: (clicks, now) => board.theme(clicks, now),
      said: (text) => { if (text) say(text); return skip(); },
      raster: (sent) => board.raster(sent),
      variant: (name) => board.variant(name),
    },
  });
})();
