"""Starts the server of the screens on this machine alone, and the browser when it answers."""

from __future__ import annotations

import os
import signal
import socket
import subprocess
import sys
import time
import urllib.error
import urllib.request
import webbrowser
from pathlib import Path

from axis.errors import CannotWrite

HOST = "127.0.0.1"
FIRST_PORT, LAST_PORT = 8501, 8540
PATIENCE = 60.0  # [s] until the server has to answer
START = Path(__file__).resolve().with_name("start.py")
# Stated here as well as in .streamlit/config.toml: a file in the folder where the user stands must not undo them.
OPTIONS = {
    "server.address": HOST,
    "server.headless": "true",
    "server.maxUploadSize": "1",
    "server.fileWatcherType": "none",
    "server.showEmailPrompt": "false",
    "browser.gatherUsageStats": "false",
    "client.toolbarMode": "minimal",
    "client.showErrorDetails": "none",
}


def command(port: int) -> list[str]:
    """What starts the server."""
    options = [f"--{name}={value}" for name, value in (OPTIONS | {"server.port": str(port)}).items()]
    return [sys.executable, "-m", "streamlit", "run", str(START), *options]


def environment() -> dict[str, str]:
    """The server serves the package that started it, wherever it is started from."""
    paths = [str(START.parents[2]), os.environ.get("PYTHONPATH", "")]
    return {**os.environ, "PYTHONPATH": os.pathsep.join(path for path in paths if path)}


def free_port(asked: int | None) -> int:
    """The port asked for, or the first that nobody listens on."""
    for port in (asked,) if asked is not None else range(FIRST_PORT, LAST_PORT + 1):
        with socket.socket() as probe:
            try:
                probe.bind((HOST, port))
            except OSError:
                continue
            return port
    tried = f"port {asked}" if asked is not None else f"every port from {FIRST_PORT} to {LAST_PORT}"
    raise CannotWrite(f"{tried} is in use; name another with --port")


def launch(port: int | None = None, open_browser: bool = True) -> int:
    """Serve the screens until they are stopped; returns the server's exit code."""
    chosen = free_port(port)
    address = f"http://{HOST}:{chosen}"
    ended = signal.signal(signal.SIGTERM, _end)  # without it the server would outlive whoever started it
    server = subprocess.Popen(command(chosen), stdout=subprocess.DEVNULL, env=environment())
    try:
        if answers(server, chosen):
            print(f"The screens are at {address}, on this machine only. Ctrl-C ends them.", flush=True)
            if open_browser:
                webbrowser.open(address)
        return server.wait()
    finally:
        signal.signal(signal.SIGTERM, ended)
        if server.poll() is None:
            server.terminate()
            try:
                server.wait(10.0)
            except subprocess.TimeoutExpired:
                server.kill()


def _end(*_: object) -> None:
    raise SystemExit(128 + signal.SIGTERM)


def answers(server: subprocess.Popen[bytes], port: int) -> bool:
    """Wait until the server answers; False where it ended before."""
    deadline = time.monotonic() + PATIENCE
    while server.poll() is None and time.monotonic() < deadline:
        try:
            with urllib.request.urlopen(f"http://{HOST}:{port}/_stcore/health", timeout=2.0) as reply:
                return bool(reply.status == 200)
        except (urllib.error.URLError, OSError):
            time.sleep(0.1)
    return False
