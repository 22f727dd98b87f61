"""A real browser, driven through a pipe by its own protocol."""

from __future__ import annotations

import base64
import json
import os
import select
import shutil
import subprocess
import time
from pathlib import Path
from typing import Any

NAMES = ("chromium", "chromium-browser", "google-chrome")
PATIENCE = 30.0
KEYS = {"Enter": 13, "Escape": 27, "Tab": 9}


class Browser:
    """One page in a browser without a window; its profile is made in ``home``."""

    def __init__(self, home: Path) -> None:
        program = next((found for name in NAMES if (found := shutil.which(name))), None)
        assert program, "a Chromium is needed for these tests"
        read_there, self._write = os.pipe()
        self._read, write_there = os.pipe()
        flags = "--headless --no-sandbox --disable-gpu --remote-debugging-pipe --no-first-run"
        command = f'exec "$0" {flags} --user-data-dir="$1" 3<&{read_there} 4>&{write_there}'
        self._process = subprocess.Popen(
            ["bash", "-c", command, program, str(home)],
            pass_fds=(read_there, write_there),
            stdout=subprocess.DEVNULL,
            stderr=subprocess.DEVNULL,
        )
        os.close(read_there)
        os.close(write_there)
        self._count = 0
        self._kept = b""
        self._session = ""
        self.events: list[dict[str, Any]] = []
        target = self.call("Target.createTarget", url="about:blank")["targetId"]
        self._session = self.call("Target.attachToTarget", targetId=target, flatten=True)["sessionId"]
        for domain in ("Page", "Runtime", "Log", "Network"):
            self.call(f"{domain}.enable")

    def close(self) -> None:
        self._process.terminate()
        self._process.wait(PATIENCE)
        os.close(self._read)
        os.close(self._write)

    def call(self, method: str, **params: Any) -> dict[str, Any]:  # noqa: ANN401
        self._count += 1
        message = {"id": self._count, "method": method, "params": params}
        if self._session:
            message["sessionId"] = self._session
        os.write(self._write, json.dumps(message).encode() + b"\0")
        while (heard := self._next()).get("id") != self._count:
            self.events.append(heard)
        assert "error" not in heard, heard
        return dict(heard["result"])

    def _next(self) -> dict[str, Any]:
        while b"\0" not in self._kept:
            assert select.select([self._read], [], [], PATIENCE)[0], "the browser does not answer"
            self._kept += os.read(self._read, 1 << 20)
        first, _, self._kept = self._kept.partition(b"\0")
        return dict(json.loads(first))

    def open(self, page: Path, hash_: str = "", width: int = 1280, height: int = 900) -> None:
        self.call("Emulation.setDeviceMetricsOverride", width=width, height=height, deviceScaleFactor=1, mobile=False)
        self.call("Page.navigate", url="about:blank")
        self.call("Page.navigate", url=page.as_uri() + hash_)
        self.wait(f"document.readyState === 'complete' && location.href.startsWith({json.dumps(page.as_uri())})")
        self.do("document.fonts.ready.then(() => true)")

    def do(self, expression: str) -> Any:  # noqa: ANN401
        found = self.call("Runtime.evaluate", expression=expression, returnByValue=True, awaitPromise=True)
        assert "exceptionDetails" not in found, found["exceptionDetails"]
        return found["result"].get("value")

    def wait(self, expression: str) -> None:
        end = time.monotonic() + PATIENCE
        while not self.do(expression):
            assert time.monotonic() < end, f"never true: {expression}"
            time.sleep(0.03)

    def key(self, name: str) -> None:
        for kind in ("keyDown", "keyUp"):
            text = "\r" if name == "Enter" and kind == "keyDown" else ""
            self.call("Input.dispatchKeyEvent", type=kind, key=name, windowsVirtualKeyCode=KEYS[name], text=text)

    def click(self, selector: str) -> None:
        at = self.do(
            f"(() => {{ const e = document.querySelector({json.dumps(selector)}); "
            "e.scrollIntoView({block: 'center'}); "
            "const b = e.getBoundingClientRect(); return [b.x + b.width / 2, b.y + b.height / 2] })()"
        )
        for kind in ("mousePressed", "mouseReleased"):
            self.call("Input.dispatchMouseEvent", type=kind, x=at[0], y=at[1], button="left", clickCount=1)

    def picture(self) -> bytes:
        return base64.b64decode(self.call("Page.captureScreenshot")["data"])

    def complaints(self) -> list[str]:
        """Return what went wrong on the page, and every address that it asked for."""
        said = []
        for event in self.events:
            params = event.get("params", {})
            if event.get("method") == "Runtime.exceptionThrown":
                said.append(params["exceptionDetails"]["text"])
            elif event.get("method") == "Log.entryAdded":
                said.append(params["entry"]["text"])
            elif event.get("method") == "Network.requestWillBeSent":
                address = params["request"]["url"]
                said += [] if address.startswith(("file:", "data:", "about:")) else [address]
        return said
