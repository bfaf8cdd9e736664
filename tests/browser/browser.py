"""A headless chromium spoken to over a pipe by its DevTools protocol: pages opened, measured and printed."""

from __future__ import annotations

import base64
import json
import os
import select
import shutil
import subprocess
import time
from collections.abc import Iterator
from contextlib import contextmanager
from pathlib import Path
from typing import Any

FLAGS = (
    "--headless", "--no-sandbox", "--disable-gpu", "--no-first-run", "--disable-background-networking",
    "--disable-component-update", "--disable-sync", "--disable-dev-shm-usage", "--disable-extensions",
    "--hide-scrollbars", "--remote-debugging-pipe",
)  # fmt: skip
PATIENCE = 60.0
"""Seconds to wait for an answer."""


class Browser:
    """One running browser."""

    def __init__(self, writes: int, reads: int) -> None:
        self.writes, self.reads = writes, reads
        self.waiting = b""
        self.last = 0
        self.events: list[dict[str, Any]] = []

    def ask(self, method: str, session: str | None = None, **parameters: Any) -> dict[str, Any]:
        """Send a command and give its answer; events that come before it are kept."""
        self.last += 1
        message = {"id": self.last, "method": method, "params": parameters}
        if session:
            message["sessionId"] = session
        os.write(self.writes, json.dumps(message).encode() + b"\0")
        while True:
            found = self._next()
            if found.get("id") == self.last:
                assert "error" not in found, f"{method}: {found['error']}"
                return found["result"]
            self.events.append(found)

    def wait_for(self, method: str, session: str) -> None:
        """Wait until an event has come."""
        while not any(one.get("method") == method and one.get("sessionId") == session for one in self.events):
            self.events.append(self._next())

    def _next(self) -> dict[str, Any]:
        end = time.monotonic() + PATIENCE
        while b"\0" not in self.waiting:
            ready, _, _ = select.select([self.reads], [], [], max(end - time.monotonic(), 0.0))
            assert ready, "the browser does not answer"
            more = os.read(self.reads, 1 << 20)
            assert more, "the browser has ended"
            self.waiting += more
        message, _, self.waiting = self.waiting.partition(b"\0")
        return json.loads(message)


class Page:
    """One page, open at some width."""

    def __init__(self, browser: Browser, address: str, width: int) -> None:
        self.browser = browser
        target = browser.ask("Target.createTarget", url="about:blank")["targetId"]
        self.session = browser.ask("Target.attachToTarget", targetId=target, flatten=True)["sessionId"]
        for domain in ("Page", "Runtime", "Log", "Network"):
            self.ask(f"{domain}.enable")
        self.ask("Emulation.setDeviceMetricsOverride", width=width, height=900, deviceScaleFactor=1, mobile=False)
        self.ask("Page.navigate", url=address)
        browser.wait_for("Page.loadEventFired", self.session)
        self.ask("Runtime.evaluate", expression="document.fonts.ready.then(() => 1)", awaitPromise=True)

    def ask(self, method: str, **parameters: Any) -> dict[str, Any]:
        """Send a command to this page."""
        return self.browser.ask(method, self.session, **parameters)

    def value(self, expression: str) -> Any:
        """What an expression gives in the page."""
        answer = self.ask("Runtime.evaluate", expression=expression, returnByValue=True)
        assert "exceptionDetails" not in answer, answer
        return answer["result"].get("value")

    def happened(self, *methods: str) -> list[dict[str, Any]]:
        """Events of these kinds in this page so far."""
        own = [one for one in self.browser.events if one.get("sessionId") == self.session]
        return [one["params"] for one in own if one["method"] in methods]

    @property
    def complaints(self) -> list[Any]:
        """Errors and warnings of the console, exceptions, and dialogs opened."""
        logged = [one for one in self.happened("Log.entryAdded") if one["entry"]["level"] in ("error", "warning")]
        said = [one for one in self.happened("Runtime.consoleAPICalled") if one["type"] in ("error", "warning")]
        return logged + said + self.happened("Runtime.exceptionThrown", "Page.javascriptDialogOpening")

    @property
    def asked_for(self) -> list[str]:
        """Every address the page was loaded from or loads."""
        return [one["request"]["url"] for one in self.happened("Network.requestWillBeSent")]

    def pdf(self) -> bytes:
        """The page as it prints."""
        answer = self.ask("Page.printToPDF", preferCSSPageSize=True, printBackground=True, displayHeaderFooter=False)
        return base64.b64decode(answer["data"])

    def picture(self) -> bytes:
        """The whole page as it looks, PNG."""
        return base64.b64decode(self.ask("Page.captureScreenshot", captureBeyondViewport=True)["data"])

    def close(self) -> None:
        """Close it."""
        self.ask("Page.close")


@contextmanager
def running(profile: Path) -> Iterator[Browser]:
    """Start a browser with a profile of its own; it is ended with the block."""
    program = shutil.which("chromium")
    assert program, "chromium is not installed: apt-get install --no-install-recommends chromium"
    (its_in, writes), (reads, its_out) = os.pipe(), os.pipe()

    def move() -> None:
        # the browser reads from 3 and writes to 4; the copies keep one move from closing the other
        first, second = os.dup(its_in), os.dup(its_out)
        os.dup2(first, 3)
        os.dup2(second, 4)

    command = [program, *FLAGS, f"--user-data-dir={profile}"]
    process = subprocess.Popen(
        command, preexec_fn=move, close_fds=False, stdout=subprocess.DEVNULL, stderr=subprocess.DEVNULL
    )
    os.close(its_in)
    os.close(its_out)
    try:
        yield Browser(writes, reads)
    finally:
        os.close(writes)
        os.close(reads)
        process.terminate()
        process.wait(PATIENCE)
