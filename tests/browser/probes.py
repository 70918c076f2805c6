"""Scripts that a test puts into the page: they measure, and hear what JupyterLab hides."""

# One probe a page: `arm` waits for the first user event, then follows the changes inside `watch`.
PROBE_JS = r"""
(() => {
  if (window.__probe) return;
  const P = window.__probe = {};
  const EVENTS = ['keydown', 'pointerdown', 'input', 'change', 'click'];
  P.arm = watch => {
    P.t0 = P.first = P.last = P.paint = null;
    const begin = () => { P.t0 ??= performance.now(); };
    EVENTS.forEach(n => window.addEventListener(n, begin, {capture: true}));
    const element = n => n.nodeType === 1 ? n : n.parentElement;
    const touches = m => element(m.target)?.closest(watch) ||
      [...m.addedNodes].some(n => n.nodeType === 1 && (n.matches(watch) || n.querySelector(watch)));
    const observer = new MutationObserver(list => {
      if (P.t0 === null || !list.some(touches)) return;
      P.last = performance.now();
      P.first ??= P.last;
      requestAnimationFrame(() => {                 // the frame that shows the change ...
        const after = new MessageChannel();         // ... and the first task after it was painted
        after.port1.onmessage = () => { P.paint = performance.now(); };
        after.port2.postMessage(0);
      });
    });
    observer.observe(document.body, {subtree: true, childList: true, attributes: true, characterData: true});
    P.stop = () => {
      observer.disconnect();
      EVENTS.forEach(n => window.removeEventListener(n, begin, {capture: true}));
      return P.paint === null ? null : P.paint - P.t0;
    };
  };
  P.quiet = ms => P.last !== null && P.paint >= P.last && performance.now() - P.last > ms;
})();
"""

# Errors that the kernel publishes outside any cell, that is, from widget callbacks.
SPY_JS = r"""
() => {
  const context = window.jupyterapp?.shell.currentWidget?.sessionContext;
  if (window.__spy) return true;
  if (!context?.session?.kernel) return false;
  const spy = window.__spy = {errors: [], stderr: []};
  const hook = kernel => kernel.iopubMessage.connect((_, m) => {
    const parent = m.parent_header?.msg_type, text = m.content;
    if (m.header.msg_type === 'error' && parent !== 'execute_request')
      spy.errors.push(`${text.ename}: ${text.evalue}`);
    if (m.header.msg_type === 'stream' && text.name === 'stderr' && parent !== 'execute_request')
      spy.stderr.push(text.text);
  });
  hook(context.session.kernel);
  context.kernelChanged.connect((_, change) => { if (change.newValue) hook(change.newValue); });
  return true;
}
"""

CELLS_JS = r"""
() => window.jupyterapp.shell.currentWidget.content.widgets.map((cell, i) => ({
  i, id: cell.model.id, type: cell.model.type, count: cell.model.executionCount ?? null,
  source: cell.model.sharedModel.getSource(), outputs: cell.model.outputs?.toJSON() ?? []}))
"""
