// A picture: plotly draws a whole scene at every change, and never a mixture of two.
const CONFIG = {
  displayModeBar: false, displaylogo: false, showSendToCloud: false, responsive: false, doubleClick: "reset",
};
const FONT = '-apple-system, "Segoe UI", "Liberation Sans", Arial, sans-serif';

// plotly looks what is under the pointer at most every 50 ms; what a quick hand clicked is known after that.
const HOVER_MS = 60;

// One plotly.js a page and version, whatever the number of pictures and of runs of their cell.
const page = (window.__pipeflex_plotly__ ??= {loaded: {}, asking: null});

async function load(code) {
  const parts = ["const module = {exports: {}};\n", code, "\nexport default module.exports;"];
  const url = URL.createObjectURL(new Blob(parts, {type: "text/javascript"}));
  const before = window.Plotly;                     // the bundle also sets a global: not ours to leave
  const loaded = (await import(url)).default;
  if (before) window.Plotly = before; else delete window.Plotly;
  URL.revokeObjectURL(url);
  return loaded;
}

function ask(model, version, signal) {
  return new Promise((resolve, reject) => {
    const heard = (content, [code]) => {
      model.off("msg:custom", heard);
      if (content.fault) reject(new Error(content.fault));
      else load(code).then(loaded => { page.loaded[version] = loaded; }).then(resolve, reject);
    };
    signal.addEventListener("abort", resolve);      // gone before the answer: the next picture asks
    model.on("msg:custom", heard);
    model.send({wants: "plotly"});
  });
}

async function plotly(model, signal) {
  const version = model.get("_plotly");
  while (!page.loaded[version] && !signal.aborted) {
    page.asking ??= ask(model, version, signal).finally(() => { page.asking = null; });
    await page.asking;
  }
  return page.loaded[version];
}

const isDark = () => document.body.dataset.jpThemeLight === "false";

// A colour is a role ("ink"), or a role and its opacity ("ribbon/0.3"), or a colour.
function paint(text, roles) {
  const [role, opacity] = text.split("/");
  const colour = roles[role]?.[isDark() ? 1 : 0];
  if (!colour) return text;
  const byte = Math.round(255 * (opacity ?? 1)).toString(16).padStart(2, "0");
  return colour + (byte === "ff" ? "" : byte);
}

function painted(value, roles, key = "") {
  if (typeof value === "string") return /color(scale)?$/i.test(key) ? paint(value, roles) : value;
  if (Array.isArray(value)) return value.map(v => painted(v, roles, key));
  if (value === null || typeof value !== "object") return value;
  return Object.fromEntries(Object.entries(value).map(([k, v]) => [k, painted(v, roles, k)]));
}

function layoutOf(scene, width, height) {
  const given = scene.layout ?? {};
  return {
    paper_bgcolor: "paper", plot_bgcolor: "paper", margin: {l: 48, r: 12, t: 12, b: 40},
    hovermode: "closest", showlegend: false, clickanywhere: true, ...given,
    font: {family: FONT, size: 12, color: "ink", ...given.font}, width, height,
  };
}

async function render({model, el}) {
  const gone = new AbortController();
  const mark = document.createElement("p");
  mark.className = "pf-stale-mark";
  const picture = document.createElement("div");
  picture.setAttribute("role", "img");
  el.classList.add("pf-picture");
  el.append(mark, picture);

  let Plotly = null, under = null, drawn = 0;       // the mark under the pointer; the width drawn at
  const draw = () => {
    const width = drawn = Math.floor(el.clientWidth);
    if (!Plotly || !width) return;                  // out of sight: drawn when it comes to light
    if (model.get("width") !== width) {             // a desk may lay its picture out anew for it
      model.set("width", width);
      model.save_changes();
    }
    const scene = model.get("scene"), roles = model.get("colours"), first = !picture.data;
    const layout = layoutOf(scene, width, model.get("height"));
    new Promise(resolve => {
      resolve(Plotly.react(picture, painted(scene.data ?? [], roles), painted(layout, roles), CONFIG));
      if (!first) return;
      picture.on("plotly_hover", ({points}) => { under = points[0]; });
      picture.on("plotly_unhover", () => { under = null; });
      picture.on("plotly_click", ({event}) => setTimeout(clicked, HOVER_MS, event));
    }).catch(failed);
  };
  const failed = error => {
    mark.textContent = `cannot be drawn: ${error.message}`;
    mark.hidden = false;
    throw error;
  };
  const clicked = event => {
    if (!Plotly) return;
    const {left, top} = picture.querySelector(".nsewdrag").getBoundingClientRect();
    const {xaxis, yaxis} = picture._fullLayout;
    const at = {x: xaxis.p2d(event.clientX - left), y: yaxis.p2d(event.clientY - top)};
    const met = {trace: under?.data.name ?? null, customdata: under?.customdata ?? null};
    model.set("clicked", {...at, ...met, count: (model.get("clicked").count ?? 0) + 1});
    model.save_changes();
  };
  const describe = () => {
    const stale = model.get("stale"), words = model.get("stale_words");
    mark.textContent = words;
    mark.hidden = !stale;
    el.classList.toggle("pf-stale", stale);
    picture.setAttribute("aria-label", model.get("description"));
  };
  const size = () => { picture.style.height = `${model.get("height")}px`; draw(); };

  model.on("change:scene change:colours", draw);
  model.on("change:height", size);
  model.on("change:description change:stale change:stale_words", describe);
  const resized = new ResizeObserver(() => { if (Math.floor(el.clientWidth) !== drawn) draw(); });
  resized.observe(el);
  // a frame later: while JupyterLab changes its theme, nothing has a width
  const themed = new MutationObserver(() => requestAnimationFrame(draw));
  themed.observe(document.body, {attributeFilter: ["data-jp-theme-light"]});
  describe();
  size();
  plotly(model, gone.signal).then(loaded => {
    if (gone.signal.aborted) return;
    Plotly = loaded;
    draw();
  }).catch(failed);

  return () => {
    gone.abort();
    resized.disconnect();
    themed.disconnect();
    model.off("change:scene change:colours", draw);
    model.off("change:height", size);
    model.off("change:description change:stale change:stale_words", describe);
    Plotly?.purge(picture);
    Plotly = null;
    el.replaceChildren();
  };
}

export default {render};
