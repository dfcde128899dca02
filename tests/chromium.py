"""Headless Chromium driven over its DevTools protocol, on the loopback alone."""

from __future__ import annotations

import base64
import itertools
import json
import shutil
import subprocess
import tempfile
import time
from collections.abc import Iterator
from contextlib import contextmanager
from pathlib import Path
from typing import Any
from urllib.request import urlopen

import websocket

BROWSERS = ("chromium", "chromium-browser", "google-chrome", "google-chrome-stable")
QUIET = (
    "--headless=new",
    "--no-sandbox",
    "--disable-gpu",
    "--disable-quic",
    "--no-first-run",
    "--disable-background-networking",
    "--disable-component-update",
    "--disable-sync",
    "--disable-default-apps",
    "--disable-dev-shm-usage",
    "--host-resolver-rules=MAP * ~NOTFOUND",
    "--remote-debugging-port=0",
    "--remote-allow-origins=*",
)
PATIENCE = 60.0


def find_browser() -> str | None:
    """Path of a Chromium on this machine."""
    return next((path for name in BROWSERS if (path := shutil.which(name))), None)


class Page:
    """One page: sends commands, and keeps what the page logged and asked of the network."""

    def __init__(self, address: str) -> None:
        self._socket = websocket.create_connection(address, timeout=PATIENCE)
        self._ids = itertools.count(1)
        self.requests: list[str] = []
        self.errors: list[str] = []
        for domain in ("Page", "Runtime", "Network", "Log", "Security"):
            self.send(f"{domain}.enable")

    def close(self) -> None:
        self._socket.close()

    def send(self, method: str, **parameters: Any) -> dict[str, Any]:
        """Send a command and return its result, noting the events that come before it."""
        number = next(self._ids)
        self._socket.send(json.dumps({"id": number, "method": method, "params": parameters}))
        while True:
            message = json.loads(self._socket.recv())
            if message.get("id") == number:
                if "error" in message:
                    raise RuntimeError(f"{method}: {message['error']}")
                result: dict[str, Any] = message["result"]
                return result
            self._note(message)

    def _note(self, message: dict[str, Any]) -> None:
        told = message.get("params", {})
        match message.get("method"):
            case "Network.requestWillBeSent":
                self.requests.append(told["request"]["url"])
            case "Runtime.exceptionThrown":
                self.errors.append(json.dumps(told["exceptionDetails"]))
            case "Runtime.consoleAPICalled" if told["type"] in {"error", "warning", "assert"}:
                self.errors.append(json.dumps(told["args"]))
            case "Log.entryAdded" if told["entry"]["level"] in {"error", "warning"}:
                self.errors.append(json.dumps(told["entry"]))

    def open(self, path: Path, fragment: str = "") -> float:
        """Open a file, wait until it is laid out, and return the seconds that it took."""
        started = time.perf_counter()
        self.send("Page.navigate", url=path.as_uri() + fragment)
        self.wait("document.readyState === 'complete'")
        self.run("new Promise(r => requestAnimationFrame(() => requestAnimationFrame(r)))")
        return time.perf_counter() - started

    def run(self, script: str) -> Any:
        """Evaluate an expression in the page, awaiting it where it is a promise."""
        answer = self.send(
            "Runtime.evaluate", expression=script, awaitPromise=True, returnByValue=True,
            userGesture=True,
        )  # fmt: skip
        if "exceptionDetails" in answer:
            raise RuntimeError(json.dumps(answer["exceptionDetails"]))
        return answer["result"].get("value")

    def wait(self, condition: str) -> None:
        """Wait until an expression is true in the page."""
        end = time.monotonic() + PATIENCE
        while time.monotonic() < end:
            if self.run(f"Boolean({condition})"):
                return
            time.sleep(0.02)
        raise TimeoutError(condition)

    def click(self, selector: str) -> None:
        """Press and release the mouse in the middle of an element, as a person would."""
        x, y = self.run(
            f"(() => {{ const e = document.querySelector({json.dumps(selector)});"
            "e.scrollIntoView({block: 'center', behavior: 'instant'});"
            "const b = e.getBoundingClientRect();"
            "return [b.x + b.width / 2, b.y + b.height / 2]; })()"
        )
        for kind in ("mousePressed", "mouseReleased"):
            self.send("Input.dispatchMouseEvent", type=kind, x=x, y=y, button="left", clickCount=1)

    def press(self, key: str) -> None:
        """Press and release a key."""
        text = {"text": "\r"} if key == "Enter" else {}
        code = {"Enter": 13, "Escape": 27, "Tab": 9}.get(key, 0)
        common = {"key": key, "code": key, "windowsVirtualKeyCode": code}
        self.send("Input.dispatchKeyEvent", type="keyDown", **common, **text)
        self.send("Input.dispatchKeyEvent", type="keyUp", **common)

    def fill(self, selector: str, text: str) -> None:
        """Type into a field, or choose in a list."""
        self.run(
            f"(() => {{ const e = document.querySelector({json.dumps(selector)});"
            f"e.value = {json.dumps(text)};"
            "e.dispatchEvent(new Event('input', {bubbles: true})); })()"
        )

    def size(self, width: int, height: int) -> None:
        """Set the size of the window."""
        self.send(
            "Emulation.setDeviceMetricsOverride", width=width, height=height,
            deviceScaleFactor=1, mobile=False,
        )  # fmt: skip

    def pdf(self) -> bytes:
        """The page as it prints."""
        printed = self.send("Page.printToPDF", printBackground=True, preferCSSPageSize=True)
        return base64.b64decode(printed["data"])

    def picture(self, top: int = 0, height: int | None = None) -> bytes:
        """The page as it looks, from a height down."""
        width, whole = self.run(
            "[document.documentElement.clientWidth, document.body.scrollHeight]"
        )
        clip = {"x": 0, "y": top, "width": width, "height": height or whole, "scale": 1}
        shot = self.send("Page.captureScreenshot", clip=clip, captureBeyondViewport=True)
        return base64.b64decode(shot["data"])


@contextmanager
def browser(path: str) -> Iterator[Page]:
    """Start a browser with a fresh profile, give its page, and stop it."""
    with tempfile.TemporaryDirectory(ignore_cleanup_errors=True) as profile:
        process = subprocess.Popen(
            [path, *QUIET, f"--user-data-dir={profile}", "about:blank"],
            stdout=subprocess.DEVNULL,
            stderr=subprocess.DEVNULL,
        )
        try:
            page = Page(_page_address(Path(profile), process))
            try:
                yield page
            finally:
                page.close()
        finally:
            process.terminate()
            process.wait(timeout=PATIENCE)


def _page_address(profile: Path, process: subprocess.Popen[bytes]) -> str:
    port = _port(profile, process)
    with urlopen(f"http://127.0.0.1:{port}/json/list", timeout=PATIENCE) as answer:
        targets = json.loads(answer.read())
    return next(t["webSocketDebuggerUrl"] for t in targets if t["type"] == "page")


def _port(profile: Path, process: subprocess.Popen[bytes]) -> int:
    """The port that the browser chose, which it writes into its profile."""
    told = profile / "DevToolsActivePort"
    end = time.monotonic() + PATIENCE
    while time.monotonic() < end:
        if process.poll() is not None:
            raise RuntimeError(f"the browser ended with status {process.returncode}")
        if told.is_file() and (lines := told.read_text().splitlines()):
            return int(lines[0])
        time.sleep(0.05)
    raise TimeoutError("the browser did not start")
