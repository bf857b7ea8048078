"""Two other people's SPARQL servers, started and stopped by the tests on 127.0.0.1, each with a folder of its own."""

from __future__ import annotations

import http.client
import socket
import subprocess
import time
from collections.abc import Iterator
from contextlib import contextmanager
from pathlib import Path

from .needs import program

VIRTUOSO = """[Database]
DatabaseFile = {folder}/v.db
ErrorLogFile = {folder}/v.log
LockFile = {folder}/v.lck
TransactionFile = {folder}/v.trx
xa_persistent_file = {folder}/v.pxa
[TempDatabase]
DatabaseFile = {folder}/t.db
TransactionFile = {folder}/t.trx
[Parameters]
ServerPort = 127.0.0.1:{sql}
DirsAllowed = {folder}
NumberOfBuffers = 4000
MaxDirtyBuffers = 3000
ServerThreads = 20
CheckpointInterval = 0
[HTTPServer]
ServerPort = 127.0.0.1:{port}
ServerThreads = 8
[SPARQL]
ResultSetMaxRows = {rows}
MaxQueryExecutionTime = 30
"""


def free_port() -> int:
    """A port that nobody listens on now."""
    with socket.socket() as probe:
        probe.bind(("127.0.0.1", 0))
        return int(probe.getsockname()[1])


@contextmanager
def oxigraph(folder: Path) -> Iterator[str]:
    """The Oxigraph server; gives the address of its query endpoint."""
    port = free_port()
    command = [
        program("oxigraph", "the package oxigraph"),
        "serve",
        "--location",
        str(folder / "ox"),
        "--bind",
        f"127.0.0.1:{port}",
    ]
    with _running(command, folder, port):
        yield f"http://127.0.0.1:{port}/query"


@contextmanager
def virtuoso(folder: Path, rows: int = 1_000_000) -> Iterator[str]:
    """The Virtuoso server; gives the address of its query endpoint. rows: where it cuts answers."""
    port, sql = free_port(), free_port()
    ini = folder / "v.ini"
    ini.write_text(VIRTUOSO.format(folder=folder, port=port, sql=sql, rows=rows))
    command = [program("virtuoso-t", "the Debian package virtuoso-opensource-7-bin"), "-f", "-c", str(ini)]
    with _running(command, folder, port):
        yield f"http://127.0.0.1:{port}/sparql"


@contextmanager
def _running(command: list[str], folder: Path, port: int) -> Iterator[None]:
    with open(folder / "server.log", "wb") as log, subprocess.Popen(command, stdout=log, stderr=log, cwd=folder) as process:
        try:
            _wait(process, port, folder)
            yield
        finally:
            process.terminate()
            try:
                process.wait(10)
            except subprocess.TimeoutExpired:
                process.kill()


def _wait(process: subprocess.Popen[bytes], port: int, folder: Path) -> None:
    deadline = time.monotonic() + 90
    while time.monotonic() < deadline:
        if process.poll() is not None:
            break
        link = http.client.HTTPConnection("127.0.0.1", port, timeout=5)
        try:
            link.request("GET", "/")
            link.getresponse().read()
            return
        except (OSError, http.client.HTTPException):
            time.sleep(0.1)
        finally:
            link.close()
    raise RuntimeError(f"{process.args} did not start: {(folder / 'server.log').read_text()[-500:]}")
