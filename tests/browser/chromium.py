"""A headless Chromium at the other end of its own debugging socket, just enough to look at a page.

The protocol is the one that the browser itself documents; nothing here leaves the machine.
"""

from __future__ import annotations

import base64
import json
import subprocess
import tempfile
import time
from collections.abc import Iterator
from contextlib import contextmanager
from pathlib import Path
from typing import Any

import websocket

from plumbfall.report.browser import QUIET, find_browser

PATIENCE = 60.0  # seconds; a loaded machine is slow to start a browser


class Tab:
    """One tab: what it was told, what it said, what it asked of the network."""

    def __init__(self, socket: websocket.WebSocket) -> None:
        self._socket = socket
        self._number = 0
        self.events: list[dict[str, Any]] = []
        for domain in ("Page", "Runtime", "Log", "Network", "Accessibility"):
            self.ask(f"{domain}.enable")

    def ask(self, method: str, **parameters: Any) -> dict[str, Any]:
        """Send a command and return its result; events that come before it are kept."""
        self._number += 1
        self._socket.send(json.dumps({"id": self._number, "method": method, "params": parameters}))
        while True:
            message = json.loads(self._socket.recv())
            if message.get("id") == self._number:
                assert "error" not in message, message
                return dict(message["result"])
            self.events.append(message)

    def open(self, page: Path, *, width: int, height: int = 900, dark: bool = False) -> None:
        """Load a file at a width in CSS pixels and wait until it has loaded."""
        self.ask(
            "Emulation.setDeviceMetricsOverride",
            width=width,
            height=height,
            deviceScaleFactor=1,
            mobile=width < 600,
        )
        scheme = {"name": "prefers-color-scheme", "value": "dark" if dark else "light"}
        self.ask("Emulation.setEmulatedMedia", features=[scheme])
        self.events.clear()
        self.ask("Page.navigate", url=page.as_uri())
        limit = time.monotonic() + PATIENCE
        while not any(event.get("method") == "Page.loadEventFired" for event in self.events):
            assert time.monotonic() < limit, "the page does not load"
            self.ask("Runtime.evaluate", expression="0")

    def value(self, expression: str) -> Any:
        """Return what a JavaScript expression gives; ours, not the page's, which has none."""
        found = self.ask("Runtime.evaluate", expression=expression, returnByValue=True)
        assert "exceptionDetails" not in found, found
        return found["result"].get("value")

    def complaints(self) -> list[str]:
        """Return errors and warnings of the console, policy violations among them."""
        said = []
        for event in self.events:
            if event["method"] == "Log.entryAdded":
                entry = event["params"]["entry"]
                if entry["level"] in ("warning", "error"):
                    said.append(entry["text"])
            elif event["method"] in ("Runtime.exceptionThrown", "Runtime.consoleAPICalled"):
                said.append(json.dumps(event["params"]))
            elif event["method"] == "Page.javascriptDialogOpening":
                said.append("a dialogue")
        return said

    def requests(self) -> list[str]:
        """Return the addresses that were asked for."""
        return [
            event["params"]["request"]["url"]
            for event in self.events
            if event["method"] == "Network.requestWillBeSent"
        ]

    def picture(self) -> bytes:
        """Return a PNG of the whole page."""
        shot = self.ask("Page.captureScreenshot", captureBeyondViewport=True)
        return base64.b64decode(shot["data"])


@contextmanager
def chromium() -> Iterator[Tab]:
    """Start a browser with a profile of its own, and end it."""
    with tempfile.TemporaryDirectory(ignore_cleanup_errors=True) as folder:
        profile = Path(folder)
        process = subprocess.Popen(
            [
                find_browser(),
                *QUIET,
                "--no-sandbox",  # the pages are our own, and containers allow no other way
                "--remote-debugging-port=0",
                f"--user-data-dir={profile}",
                "about:blank",
            ],
            stdout=subprocess.DEVNULL,
            stderr=subprocess.DEVNULL,
        )
        try:
            socket = websocket.create_connection(
                _tab_address(profile), suppress_origin=True, timeout=PATIENCE
            )
            try:
                yield Tab(socket)
            finally:
                socket.close()
        finally:
            process.terminate()
            process.wait(PATIENCE)


def _tab_address(profile: Path) -> str:
    """Wait for the browser to say where it listens, and return the address of its first tab."""
    import urllib.request

    limit = time.monotonic() + PATIENCE
    while time.monotonic() < limit:
        try:
            port = (profile / "DevToolsActivePort").read_text("utf-8").splitlines()[0]
            with urllib.request.urlopen(f"http://127.0.0.1:{port}/json/list") as listed:
                tabs = [tab for tab in json.load(listed) if tab["type"] == "page"]
            if tabs:
                return str(tabs[0]["webSocketDebuggerUrl"])
        except (OSError, IndexError):
            pass
        time.sleep(0.1)
    raise AssertionError("the browser does not start")
