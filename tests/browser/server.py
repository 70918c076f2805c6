"""JupyterLab on a loopback port, with a configuration of its own."""

from __future__ import annotations

import contextlib
import json
import os
import secrets
import signal
import socket
import subprocess
import sys
import time
import urllib.request
from pathlib import Path
from typing import Any

ROOT = Path(__file__).resolve().parents[2]
SETTINGS = {
    # windowing off: every cell is in the page, also those out of sight
    "@jupyterlab/notebook-extension:tracker": {"windowingMode": "none"},
    "@jupyterlab/apputils-extension:notification": {"fetchNews": "false", "checkForUpdates": False},
    "@jupyterlab/docmanager-extension:plugin": {"autosave": False},
}


def free_port() -> int:
    """A free TCP port of the loopback interface."""
    with contextlib.closing(socket.socket()) as s:
        s.bind(("127.0.0.1", 0))
        return int(s.getsockname()[1])


class Server:
    """A JupyterLab server with a private configuration; notebooks live in ``root``."""

    def __init__(self, folder: Path, environment: dict[str, str] | None = None) -> None:
        self.root = folder / "notebooks"
        self.token, port = secrets.token_hex(16), free_port()
        self.base = f"http://127.0.0.1:{port}"
        places = {name: folder / name for name in ("config", "data", "runtime", "settings", "workspaces", "ipython")}
        for place in (self.root, *places.values()):
            place.mkdir(parents=True)
        self.settings = places["settings"]
        for plugin, values in SETTINGS.items():
            self.configure(plugin, values)
        variables = {
            **os.environ,
            "JUPYTER_CONFIG_DIR": str(places["config"]),
            "JUPYTER_DATA_DIR": str(places["data"]),
            "JUPYTER_RUNTIME_DIR": str(places["runtime"]),
            "JUPYTERLAB_SETTINGS_DIR": str(places["settings"]),
            "JUPYTERLAB_WORKSPACES_DIR": str(places["workspaces"]),
            "IPYTHONDIR": str(places["ipython"]),
            "JUPYTER_PLATFORM_DIRS": "1",
            "PYDEVD_DISABLE_FILE_VALIDATION": "1",  # or a kernel that starts anew warns of frozen modules
            "PYTHONPATH": os.pathsep.join(filter(None, [str(ROOT), os.environ.get("PYTHONPATH", "")])),
            **(environment or {}),
        }
        command = [
            sys.executable, "-m", "jupyterlab", "--allow-root", "--expose-app-in-browser",
            "--ServerApp.ip=127.0.0.1", f"--ServerApp.port={port}", "--ServerApp.port_retries=0",
            f"--IdentityProvider.token={self.token}", "--ServerApp.open_browser=False",
            f"--ServerApp.root_dir={self.root}", "--LabApp.news_url=None",
        ]  # fmt: skip
        self.log = (folder / "server.log").open("w")
        self.process = subprocess.Popen(
            command, cwd=self.root, env=variables, stdout=self.log, stderr=subprocess.STDOUT,
            start_new_session=True,
        )  # fmt: skip
        try:
            self._await()
        except BaseException:
            self.stop()
            raise

    def configure(self, plugin: str, values: dict[str, Any]) -> None:
        """Write one plugin's settings; a page opened afterwards follows them."""
        package, name = plugin.rsplit(":", 1)
        path = self.settings / package / f"{name}.jupyterlab-settings"
        path.parent.mkdir(parents=True, exist_ok=True)
        path.write_text(json.dumps(values))

    def _await(self, seconds: float = 90) -> None:
        end = time.monotonic() + seconds
        while time.monotonic() < end:
            if self.process.poll() is not None:
                raise RuntimeError(f"JupyterLab ended at once; its words are in {self.log.name}")
            with contextlib.suppress(OSError):
                urllib.request.urlopen(f"{self.base}/api/status?token={self.token}", timeout=2).close()
                return
            time.sleep(0.2)
        raise TimeoutError("JupyterLab did not answer")

    def stop(self) -> None:
        """End the server, which ends its kernels."""
        if self.process.poll() is None:
            self.process.send_signal(signal.SIGTERM)
            try:
                self.process.wait(15)
            except subprocess.TimeoutExpired:
                self.process.kill()
        self.log.close()
