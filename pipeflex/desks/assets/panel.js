// A panel draws a tree of parts and keeps it up to date in place: what has the keyboard keeps it.
// Each maker below returns {el, update(spec)}; `tell(event, content)` reports to the part of that key.
const PREFIX = `pf${Math.random().toString(36).slice(2)}`;
let count = 0;
const fresh = () => `${PREFIX}-${++count}`;

function h(tag, attributes, ...children) {
  const el = document.createElement(tag);
  for (const [name, value] of Object.entries(attributes)) el.setAttribute(name, value);
  el.append(...children);
  return el;
}

// Text is only ever text. Unchanged text is left alone, so that it is not announced again.
function put(el, text) {
  if (el.textContent !== text) el.textContent = text;
}

function attribute(el, name, value) {
  if (value === null || value === undefined || value === false) el.removeAttribute(name);
  else if (el.getAttribute(name) !== String(value)) el.setAttribute(name, value);
}

// What entries and choices share: label, help, echo, error, the look of a demo value, reports of focus.
function field(control, kind, tell, ...inBox) {
  const id = fresh();
  const label = h("label", {for: id});
  const demo = h("span", {class: "pf-demo-mark", id: `${id}-demo`});
  const box = h("span", {class: "pf-box"}, control, demo, ...inBox);
  const tail = h("span", {class: "pf-tail", id: `${id}-tail`});
  const help = h("span", {class: "pf-unseen", id: `${id}-help`});
  const error = h("div", {class: "pf-error", id: `${id}-error`, role: "alert"});
  control.id = id;
  control.setAttribute("aria-describedby", `${id}-error ${id}-tail ${id}-demo ${id}-help`);
  control.addEventListener("focus", () => tell("focus", {focused: true}));
  control.addEventListener("blur", () => tell("focus", {focused: false}));
  const el = h("div", {class: `pf-field pf-${kind}`}, label, box, tail, help, error);
  const update = spec => {
    put(label, spec.label);
    label.classList.toggle("pf-unseen", spec.bare);
    el.classList.toggle("pf-bare", spec.bare);
    put(help, [spec.unit, spec.help].filter(Boolean).join(". "));
    attribute(el, "title", spec.help || null);
    put(error, spec.error);
    put(tail, spec.echo);
    put(demo, spec.demo && !spec.error ? "demo value" : "");
    el.classList.toggle("pf-demo", spec.demo);
    attribute(control, "aria-invalid", spec.error ? "true" : null);
    control.disabled = spec.disabled;
  };
  return {el, update};
}

function entry(tell) {
  const input = h("input", {type: "text", autocomplete: "off", spellcheck: "false"});
  const unit = h("span", {class: "pf-unit", "aria-hidden": "true"});
  const up = h("button", {type: "button", tabindex: "-1"}, "\u25b4");
  const down = h("button", {type: "button", tabindex: "-1"}, "\u25be");
  const arrows = h("span", {class: "pf-arrows", "aria-hidden": "true"}, up, down);
  const base = field(input, "entry", tell, unit, arrows);
  let spec = {}, typed = false, waiting = 0, away = false;

  const showUnit = () => {                          // beside a bare number only
    put(unit, /[^\d.,+\-\s]/.test(input.value) || !input.value ? "" : spec.unit);
  };
  const commit = () => { typed = false; tell("commit", {text: input.value}); };
  const step = n => {                               // one message under way, the rest are added up
    if (typed) commit();
    waiting += n;
    if (away || !waiting) return;
    away = true;
    tell("step", {steps: waiting});
    waiting = 0;
  };
  const restore = () => {
    input.value = spec.good;
    typed = false;
    showUnit();
    if (spec.error) tell("restore", {});
  };

  input.addEventListener("input", () => { typed = true; showUnit(); });
  input.addEventListener("blur", () => { if (typed) commit(); });
  input.addEventListener("keydown", event => {
    if (event.isComposing || event.ctrlKey || event.altKey || event.metaKey) return;
    const direction = {ArrowUp: 1, ArrowDown: -1}[event.key];
    if (event.key === "Enter" && (typed || spec.demo || spec.error)) commit();
    else if (event.key === "Escape") restore();
    else if (direction && spec.steps) {
      event.preventDefault();
      step(direction * (event.shiftKey ? 10 : 1));
    }
  });
  for (const [arrow, n] of [[up, 1], [down, -1]]) {
    arrow.addEventListener("pointerdown", event => { event.preventDefault(); input.focus(); });
    arrow.addEventListener("click", event => step(n * (event.shiftKey ? 10 : 1)));
  }

  const update = next => {
    const told = next.text !== spec.text || (spec.error && !next.error);
    const typing = typed && document.activeElement === input;
    spec = next;
    base.update(spec);
    arrows.hidden = !spec.steps;
    if (told && !typing && input.value !== spec.text) {
      input.value = spec.text;
      typed = false;
    }
    showUnit();
  };
  const done = () => { away = false; if (waiting) step(0); };
  return {el: base.el, update, done};
}

function choice(tell) {
  const select = h("select", {});
  const base = field(select, "choice", tell);
  let options = "";
  select.addEventListener("change", () => tell("commit", {text: select.value}));
  const update = spec => {
    base.update(spec);
    const wanted = JSON.stringify(spec.options);
    if (wanted !== options) {
      options = wanted;
      select.replaceChildren(...spec.options.map(([value, text]) => new Option(text, value)));
    }
    select.value = spec.text;
  };
  return {el: base.el, update};
}

// A button that may not act now stays where the keyboard can find it, and says so.
function button(tell) {
  const el = h("button", {type: "button", class: "pf-button"});
  let spec = {};
  el.addEventListener("click", () => { if (!spec.disabled) tell("click", {}); });
  const update = next => {
    spec = next;
    put(el, spec.text);
    attribute(el, "title", spec.help || null);
    attribute(el, "aria-label", spec.label || null);
    attribute(el, "aria-pressed", spec.pressed === null ? null : String(spec.pressed));
    attribute(el, "aria-disabled", spec.disabled || null);
  };
  return {el, update};
}

function headline() {
  const verdict = h("b", {class: "pf-verdict"});
  const mark = h("span", {class: "pf-mark", "aria-hidden": "true"});
  const detail = h("span", {}), aside = h("span", {class: "pf-aside"});
  const lines = h("div", {class: "pf-lines"});
  const status = h("span", {class: "pf-unseen", role: "status"});
  const el = h("div", {class: "pf-headline"}, h("div", {class: "pf-first"}, mark, verdict, detail, aside), lines, status);
  let said = null;
  const update = spec => {
    put(mark, spec.mark);
    put(verdict, spec.verdict && `${spec.verdict}.`);
    put(detail, spec.detail);
    put(aside, spec.aside);
    while (lines.children.length < spec.lines.length) lines.append(h("div", {}));
    while (lines.children.length > spec.lines.length) lines.lastChild.remove();
    spec.lines.forEach((line, i) => put(lines.children[i], line));
    if (spec.verdict && spec.verdict !== said) {      // none: the verdict is being worked out
      put(status, `${spec.verdict}. ${spec.detail}`);
      said = spec.verdict;
    }
  };
  return {el, update};
}

function heading() {
  const el = h("div", {class: "pf-heading", role: "heading", "aria-level": "3"});
  return {el, update: spec => put(el, spec.text)};
}

// "files:NAME" is a file beside the notebook, as the server hands it out: the page's own address is another.
function address(link) {
  if (!link.startsWith("files:")) return link;
  const [, base, folder] = location.pathname.match(/^(.*?)\/(?:lab|doc|notebooks)(?:\/workspaces\/[^/]+)?(?:\/tree)?\/(.*?)[^/]*$/) ?? [];
  return base === undefined ? null : `${base}/files/${folder}${encodeURI(link.slice(6))}`;
}

function note() {
  const text = h("span", {}), link = h("a", {target: "_blank", rel: "noopener"});
  const el = h("div", {class: "pf-note"}, text, " ", link);
  const update = spec => {
    put(text, spec.text);
    put(link, spec.link ? spec.link_text || spec.link : "");
    attribute(link, "href", address(spec.link) || null);
    attribute(el, "role", spec.announced ? "status" : null);
  };
  return {el, update};
}

function row(tell, build) {
  const el = h("div", {class: "pf-row"});
  return {el, update: spec => build(el, spec.parts)};
}

function foldLine(spec, title, summary) {
  put(title, spec.title);
  put(summary, spec.summary && `: ${spec.summary}`);
}

function fold(tell, build) {
  const title = h("b", {}), summary = h("span", {});
  const inside = h("div", {class: "pf-inside"});
  const el = h("details", {class: "pf-fold"}, h("summary", {}, title, summary), inside);
  let spec = {};
  el.addEventListener("toggle", () => { if (el.open !== spec.open) tell("toggle", {open: el.open}); });
  const update = next => {
    if (next.open !== spec.open) el.open = next.open;
    spec = next;
    foldLine(spec, title, summary);
    build(inside, spec.parts);
  };
  return {el, update};
}

function band(tell) {
  const title = h("b", {}), summary = h("span", {});
  const el = h("button", {type: "button", class: "pf-band"}, title, summary);
  let spec = {};
  el.addEventListener("click", () => tell("toggle", {open: !spec.open}));
  const update = next => {
    spec = next;
    foldLine(spec, title, summary);
    el.setAttribute("aria-expanded", spec.open);
  };
  return {el, update};
}

const MAKERS = {entry, choice, button, headline, heading, note, row, fold, band};

function render({model, el}) {
  const nodes = new Map();
  const parts = h("div", {class: "pf-parts"});
  const trouble = h("div", {class: "pf-error pf-trouble", role: "alert"});
  el.classList.add("pf-panel");
  el.append(parts, trouble);

  const node = spec => {
    if (!nodes.has(spec.key)) {
      const tell = (event, content) => model.send({part: spec.key, event, ...content});
      nodes.set(spec.key, MAKERS[spec.kind](tell, build));
    }
    return nodes.get(spec.key);
  };
  let seen = new Set();
  const build = (parent, specs) => {
    const wanted = specs.map(spec => {
      seen.add(spec.key);
      const made = node(spec);
      made.update(spec);
      made.el.hidden = spec.hidden;
      return made.el;
    });
    const same = wanted.length === parent.children.length && wanted.every((e, i) => e === parent.children[i]);
    if (same) return;
    const focus = document.activeElement;
    parent.replaceChildren(...wanted);
    if (parent.contains(focus)) focus.focus({preventScroll: true});
  };
  const update = () => {
    seen = new Set();
    build(parts, model.get("tree"));
    for (const key of nodes.keys()) if (!seen.has(key)) nodes.delete(key);
    put(trouble, model.get("trouble"));
  };
  const done = content => nodes.get(content.done)?.done?.();

  model.on("change:tree change:trouble", update);
  model.on("msg:custom", done);
  update();
  return () => {
    model.off("change:tree change:trouble", update);
    model.off("msg:custom", done);
    nodes.clear();
    el.replaceChildren();
  };
}

export default {render};
