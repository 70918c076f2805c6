// JupyterLab looks up its one-letter commands from the element that has the keyboard, upwards, and stops at
// one that carries ATTRIBUTE. It looks in the capture phase on the document, so the mark is set one step
// earlier, on the window: then no command sees a key that was struck inside a desk, and the control itself
// still receives it. (On the desk's box alone the mark comes too late: several commands match the focused
// element itself.) Saving stays JupyterLab's.
const ATTRIBUTE = "data-lm-suppress-shortcuts";
const INSTALLED = "__pipeflex_keys__";

function marked(event) {
  if (!event.target.closest?.(".pipeflex-desk")) return;
  const saves = (event.ctrlKey || event.metaKey) && !event.altKey && event.key.toLowerCase() === "s";
  event.target.toggleAttribute(ATTRIBUTE, !saves);
}

// A click beside the controls leaves the keyboard inside the desk too.
function held(event) {
  const desk = event.target.closest?.(".pipeflex-desk");
  if (desk && !desk.hasAttribute("tabindex")) desk.tabIndex = -1;
}

function initialize() {
  if (window[INSTALLED]) return;
  window[INSTALLED] = true;
  window.addEventListener("keydown", marked, {capture: true});
  window.addEventListener("pointerdown", held, {capture: true});
}

// The desk's name for screen readers: the box around this guard is known once it stands in the page.
function render({model, el}) {
  el.hidden = true;
  const name = () => {
    const desk = el.closest(".pipeflex-desk");
    desk?.setAttribute("role", "group");
    desk?.setAttribute("aria-label", model.get("label"));
  };
  requestAnimationFrame(name);
  model.on("change:label", name);
}

export default {initialize, render};
