"""JupyterLab in a real browser, driven with the real keyboard and mouse.

A `Server` runs JupyterLab on a free loopback port with a token and configuration folders of its own; a
`Lab` is one notebook open in one page of a headless Chromium.  Every request beyond the loopback
interface is blocked *and* recorded, and `Lab.problems` collects what JupyterLab hides: errors raised in
widget callbacks, console errors, failed widget models.  Times run from the user's event (capture phase,
before any handler) to the frame that paints the change.
"""

from __future__ import annotations

import contextlib
import json
import re
import shutil
import statistics
import time
from collections.abc import Callable, Iterable
from dataclasses import dataclass, field
from pathlib import Path
from typing import Any

import nbformat
from playwright.sync_api import Browser, Locator, Page, Route
from playwright.sync_api import TimeoutError as Overdue

from .probes import CELLS_JS, PROBE_JS, SPY_JS
from .server import Server

CHROMIUM_ARGS = [
    "--no-sandbox",
    "--disable-dev-shm-usage",
    "--disable-gpu",
    "--force-color-profile=srgb",
    "--enable-precise-memory-info",
]

HELD_JS = "(e => e.matches('input, select') ? e.value : e.innerText ?? e.textContent)"
NOTEBOOK_JS = "const panel = window.jupyterapp.shell.currentWidget, notebook = panel.content;"


def write_notebook(path: Path, *cells: str) -> Path:
    """Write a notebook of code cells, so that a test can say what it opens."""
    notebook = nbformat.v4.new_notebook(cells=[nbformat.v4.new_code_cell(c) for c in cells])
    notebook.metadata.kernelspec = {"name": "python3", "display_name": "Python 3", "language": "python"}
    nbformat.write(notebook, path)
    return path


@dataclass
class Lab:
    """One notebook, open in one page; made by the ``open_notebook`` fixture."""

    page: Page
    server: Server
    name: str
    allowed: str = ""
    """Pattern of the problems that a test provokes on purpose."""
    console: list[str] = field(default_factory=list)
    blocked: list[str] = field(default_factory=list)

    @classmethod
    def open(
        cls,
        browser: Browser,
        server: Server,
        notebook: Path,
        companions: Iterable[Path] = (),
        *,
        viewport: tuple[int, int] = (1280, 800),
        dark: bool = False,
        run: bool = True,
    ) -> Lab:
        """Copy the notebook and its companion files to the server, open it, run it all."""
        for source in (notebook, *companions):
            copy = shutil.copytree if source.is_dir() else shutil.copy
            copy(source, server.root / source.name)
        theme = "JupyterLab Dark" if dark else "JupyterLab Light"
        server.configure("@jupyterlab/apputils-extension:themes", {"theme": theme})
        size = {"width": viewport[0], "height": viewport[1]}
        lab = cls(browser.new_context(viewport=size, accept_downloads=True).new_page(), server, notebook.name)
        lab._listen()
        lab._open()
        if run:
            lab.run_all()
        return lab

    def _listen(self) -> None:
        page = self.page
        page.on("console", lambda m: self.console.append(m.text[:600]) if m.type == "error" else None)
        page.on("pageerror", lambda e: self.console.append(str(e)[:600]))
        page.route(re.compile(r"^https?://(?!127\.0\.0\.1[:/])"), self._block)
        page.add_init_script(PROBE_JS)
        page.set_default_timeout(10_000)

    def _block(self, route: Route) -> None:
        self.blocked.append(route.request.url[:200])
        route.abort()

    def _open(self) -> None:
        self.page.goto(
            f"{self.server.base}/lab/tree/{self.name}?token={self.server.token}&reset",
            wait_until="domcontentloaded",
        )
        self.page.wait_for_function("() => window.jupyterapp?.shell.currentWidget?.content?.widgets", timeout=90_000)
        self.page.evaluate(
            f"async () => {{ {NOTEBOOK_JS} await panel.context.ready; await panel.sessionContext.ready; }}"
        )
        self.page.evaluate("() => window.jupyterapp.shell.collapseLeft()")
        self._await_idle(90)
        self.page.wait_for_function(SPY_JS, timeout=30_000)

    def _await_idle(self, seconds: float) -> None:
        self.page.wait_for_function(
            f"() => {{ {NOTEBOOK_JS} return panel.sessionContext.session?.kernel?.status === 'idle'; }}",
            timeout=seconds * 1000,
        )

    # ---- the notebook

    def run_all(self, seconds: float = 300, *, restart: bool = False) -> float:
        """Run every cell, wait until the kernel and the widgets rest; the time taken [s]."""
        begun = time.monotonic()
        if restart:
            self.page.evaluate(f"async () => {{ {NOTEBOOK_JS} await panel.sessionContext.session.kernel.restart(); }}")
            self._await_idle(60)
        self.command("notebook:run-all-cells", seconds)
        self._await_idle(seconds)
        self.settle()
        return time.monotonic() - begun

    def command(self, name: str, seconds: float = 60) -> None:
        """Carry out one of JupyterLab's own commands and wait for its end."""
        self.page.evaluate(
            """name => { window.__done = false;
            window.jupyterapp.commands.execute(name).finally(() => { window.__done = true; }); }""",
            name,
        )
        self.page.wait_for_function("() => window.__done", timeout=seconds * 1000)

    def settle(self, quiet: float = 0.6, seconds: float = 60) -> None:
        """Wait until no widget is loading and none was added for ``quiet`` seconds."""
        last, since, end = None, time.monotonic(), time.monotonic() + seconds
        while time.monotonic() < end:
            now = self.page.evaluate(
                """() => [document.querySelectorAll('.jupyter-widgets').length,
                document.querySelectorAll('svg, canvas').length,
                (document.body.innerText.match(/Loading widget/g) || []).length]"""
            )
            if now != last:
                last, since = now, time.monotonic()
            if now[2] == 0 and time.monotonic() - since > quiet:
                return
            time.sleep(0.1)
        raise TimeoutError("the widgets did not come to rest")

    def cells(self) -> list[dict[str, Any]]:
        """Index, id, type, execution count, source and outputs of every cell."""
        return list(self.page.evaluate(CELLS_JS))

    def state(self) -> tuple[Any, ...]:
        """All that a stray one-letter command could change: cells, selection, mode, cell in hand."""
        cells = tuple((c["id"], c["type"], c["count"], c["source"], len(c["outputs"])) for c in self.cells())
        rest = self.page.evaluate(
            f"""() => {{ {NOTEBOOK_JS}
            return [notebook.mode, notebook.activeCellIndex, notebook.selectedCells.length,
              panel.sessionContext.session.kernel.id, window.jupyterapp.shell.currentWidget.id,
              document.querySelectorAll('.lm-Menu, .jp-Dialog').length,
              notebook.widgets.map(c => [c.inputHidden ?? null, c.outputHidden ?? null])]; }}"""
        )
        return (*cells, json.dumps(rest))

    def commands(self) -> list[str]:
        """JupyterLab's commands that were carried out since this was last asked for."""
        return list(
            self.page.evaluate(
                """() => { if (!window.__carried) { window.__carried = [];
                window.jupyterapp.commands.commandExecuted.connect((_, c) => window.__carried.push(c.id)); }
                return window.__carried.splice(0); }"""
            )
        )

    def bindings(self) -> dict[str, list[str]]:
        """JupyterLab's commands with a key that acts on the element in focus: id -> keys, as for `press`."""
        return dict(
            self.page.evaluate(
                """() => { const e = document.activeElement, named = {Ctrl: 'Control', Accel: 'Control'};
                const acts = selector => { try { return e.closest(selector) !== null; } catch { return false; } };
                const press = stroke => stroke.split(' ').map(k => named[k] ?? (k.length > 1 ? k : k.toLowerCase()));
                return window.jupyterapp.commands.keyBindings.filter(b => acts(b.selector))
                  .map(b => [b.command, b.keys.map(k => press(k).join('+'))]); }"""
            )
        )

    def save(self) -> Path:
        """Save with JupyterLab's command; the file as saved."""
        self.command("docmanager:save")
        return self.saved()

    def saved(self) -> Path:
        """The notebook's file, once nothing is left to be saved."""
        self.page.wait_for_function("() => !window.jupyterapp.shell.currentWidget.context.model.dirty")
        path = self.server.root / self.name
        end = time.monotonic() + 5
        while not path.read_text() and time.monotonic() < end:  # it is written in two strokes
            time.sleep(0.05)
        return path

    # ---- hands and eyes

    def find(self, label: str) -> Locator:
        """The control with that accessible name (or, after ``css:``, that selector)."""
        if label.startswith("css:"):
            return self.page.locator(label[4:]).first
        return self.page.get_by_label(label, exact=True).first

    def type(self, label: str, text: str, end: str = "Enter") -> None:
        """Replace the text of an entry the way people do, and end with that key."""
        self.find(label).focus()
        self.page.keyboard.press("Control+a")
        self.page.keyboard.type(text)
        if end:
            self.page.keyboard.press(end)

    def press(self, label: str, *keys: str) -> None:
        """Focus a control, then press keys."""
        self.find(label).focus()
        for key in keys:
            self.page.keyboard.press(key)

    def pick(self, label: str, option: str) -> None:
        """Choose from a list by its visible text."""
        self.find(label).select_option(label=option)

    def click(self, name: str) -> None:
        """Click the button of that name."""
        self.page.get_by_role("button", name=name, exact=True).first.click()

    def expect(self, css: str, text: str, seconds: float = 20) -> None:
        """Fail unless an element of that selector comes to hold the text."""
        try:
            self.page.wait_for_function(
                f"([css, text]) => [...document.querySelectorAll(css)].map({HELD_JS}).some(t => t.includes(text))",
                arg=[css, text],
                timeout=seconds * 1000,
                polling=50,
            )
        except Overdue:
            held = self.page.eval_on_selector_all(css, f"all => all.map({HELD_JS})")
            raise AssertionError(f"no {css!r} holds {text!r}; they hold {held}") from None

    def focus_path(self, tabs: int) -> list[str]:
        """Press Tab so often; the accessible name (or text) of what each press reaches."""
        names = []
        for _ in range(tabs):
            self.page.keyboard.press("Tab")
            names.append(
                self.page.evaluate(
                    """() => { const e = document.activeElement;
                    return e.labels?.[0]?.textContent || e.getAttribute('aria-label') || e.innerText || e.tagName; }"""
                )
            )
        return names

    def shot(self, path: Path) -> Path:
        """Save a picture of the whole notebook: the page is made as high as its cells."""
        size = self.page.viewport_size or {"width": 1280, "height": 800}
        bottom = self.page.evaluate(
            f"""() => {{ {NOTEBOOK_JS}
            const outer = document.querySelector('.jp-WindowedPanel-outer');
            outer.scrollTop = 0;
            return notebook.widgets.at(-1).node.getBoundingClientRect().bottom; }}"""
        )
        self.page.set_viewport_size({**size, "height": int(min(max(bottom + 90, 300), 12_000))})
        self.page.wait_for_timeout(400)
        self.page.screenshot(path=str(path))
        self.page.set_viewport_size(size)
        self.page.wait_for_timeout(200)
        return path

    # ---- measures

    def paint_ms(self, act: Callable[[], object], watch: str = ".js-plotly-plot", quiet: int = 150) -> float:
        """Time from the first user event of ``act`` to the last painted change in ``watch`` [ms]."""
        self.page.evaluate("watch => window.__probe.arm(watch)", watch)
        try:
            act()
            self.page.wait_for_function("ms => window.__probe.quiet(ms)", arg=quiet, polling=30)
        finally:
            taken = self.page.evaluate("() => window.__probe.stop()")
        return float(taken)

    def median_paint_ms(self, act: Callable[[], object], times: int = 15, **how: Any) -> float:
        """Median of `paint_ms` over repeats of one act, after one that is not counted [ms]."""
        self.paint_ms(act, **how)
        return statistics.median(self.paint_ms(act, **how) for _ in range(times))

    def heap_mb(self) -> float:
        """JavaScript heap in use after a collection [MB]."""
        session = self.page.context.new_cdp_session(self.page)
        for _ in range(3):  # weak references fall in later rounds
            session.send("HeapProfiler.collectGarbage")
            self.page.wait_for_timeout(100)
        used = session.send("Runtime.getHeapUsage")["usedSize"]
        session.detach()
        return float(used) / 1e6

    def leak_mb(self, reruns: int = 5) -> float:
        """Heap that one more run of all cells leaves behind [MB].

        The first runs do not count: in them the browser compiles the code that became hot.
        """
        for _ in range(5):
            self.run_all()
        before = self.heap_mb()
        for _ in range(reruns):
            self.run_all()
        return (self.heap_mb() - before) / reruns

    def problems(self) -> list[str]:
        """Everything that went wrong since the page was opened, less what the test allowed.

        "No such comm" is JupyterLab asking a fresh kernel for widgets that it does not have.
        """
        spy = self.page.evaluate("() => window.__spy")
        broken = self.page.evaluate(
            r"""() => document.body.innerText.match(
            /Error displaying widget[^\n]*|\[Open Browser Console[^\n]*|Failed to load model class[^\n]*/g) || []"""
        )
        raised = [
            f"cell {c['i']}: {o['ename']}: {o['evalue']}"
            for c in self.cells()
            for o in c["outputs"]
            if o["output_type"] == "error"
        ]
        found = [
            *raised,
            *(f"callback: {e}" for e in spy["errors"]),
            *(f"stderr of a callback: {e}" for e in spy["stderr"] if not e.startswith("No such comm")),
            *(f"widget: {e}" for e in broken),
            *(f"console: {e}" for e in self.console),
            *(f"blocked: {e}" for e in self.blocked),
        ]
        return [p for p in found if not (self.allowed and re.search(self.allowed, p))]

    def close(self) -> None:
        """End the kernel and close the page."""
        with contextlib.suppress(Exception):
            self.page.evaluate(f"async () => {{ {NOTEBOOK_JS} await panel.sessionContext.shutdown(); }}")
        self.page.context.close()


BASELINE_CELLS = (
    """\
import ipywidgets as widgets
from pipeflex.desks.view import PictureView

def scene(height):
    across = [i / 50 for i in range(200)]
    line = {"type": "scatter", "x": across, "y": [height * x * (4 - x) for x in across],
            "mode": "lines", "line": {"color": "ribbon"}}
    return {"data": [line], "layout": {"yaxis": {"range": [0, 50]}}}

slider = widgets.FloatSlider(value=1, min=0, max=10, step=0.1, description="Height")
view = PictureView(scene=scene(slider.value), description="a parabola")
slider.observe(lambda change: view.set_trait("scene", scene(change["new"])), "value")
display(widgets.VBox([slider, view]))
""",
)


def baseline_ms(lab: Lab, times: int = 15) -> float:
    """Median time to paint of the bare stack: one slider moving one trace [ms].

    The notebook must hold `BASELINE_CELLS`.  Compare with it as a ratio, in the same run: the machine
    and its load then fall out.
    """
    handle = lab.find("css:.noUi-handle")
    handle.focus()
    taken = lab.median_paint_ms(lambda: lab.page.keyboard.press("ArrowRight"), times)
    print(f"bare stack, slider to painted frame: median {taken:.0f} ms")
    return taken
