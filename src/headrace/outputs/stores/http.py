"""Requests to a store, with limits."""

from __future__ import annotations

import base64
import time
import urllib.error
import urllib.request
from collections.abc import Mapping
from email.message import Message
from http.client import HTTPException
from typing import IO, Any

from msgspec import Struct

from headrace.errors import HeadraceError
from headrace.outputs.stores.address import Address

_CHUNK = 1 << 16


class StoreError(HeadraceError):
    """A store that can't be reached, or refuses. status: its HTTP status, 0 without one."""

    def __init__(self, message: str, status: int = 0, hint: str = "") -> None:
        super().__init__(message, hint, {"status": status})
        self.status = status


class TimeLimitError(StoreError):
    """A store that took too long."""


class SizeLimitError(StoreError):
    """A store's answer that is too large."""


class Answer(Struct, frozen=True):
    """A store's answer. headers: lower-case names."""

    status: int
    body: bytes
    headers: dict[str, str]

    @property
    def media(self) -> str:
        """The media type without parameters."""
        return self.headers.get("content-type", "").partition(";")[0].strip().lower()


class _NoRedirects(urllib.request.HTTPRedirectHandler):
    """A store that sends us elsewhere is an error: nothing of ours goes to an address that nobody named."""

    def redirect_request(self, req: Any, fp: IO[bytes], code: int, msg: str, headers: Message, newurl: str) -> None:
        return None


def send(
    address: Address,
    method: str,
    url: str,
    headers: Mapping[str, str],
    body: bytes | None = None,
    seconds: float = 60.0,
    largest: int = 1 << 31,
) -> Answer:
    """Send a request and give the whole answer. Raises StoreError, TimeLimitError, SizeLimitError."""
    request = urllib.request.Request(url, data=body, headers=dict(headers), method=method)
    deadline = time.monotonic() + seconds
    try:
        if address.user:
            _log_in(address, request)
        with _opener().open(request, timeout=seconds) as response:
            return Answer(response.status, _read(response, deadline, largest), _lower(response.headers))
    except urllib.error.HTTPError as error:
        with error:
            said = error.read(2000).decode("utf-8", "replace")
        raise _refused(error.code, said) from error
    except TimeoutError as error:
        raise TimeLimitError(f"the store took longer than {seconds:g} seconds") from error
    except urllib.error.URLError as error:
        if isinstance(error.reason, TimeoutError):
            raise TimeLimitError(f"the store took longer than {seconds:g} seconds") from error
        raise StoreError(f"the store at {url} can't be reached: {error.reason}") from error
    except (HTTPException, OSError) as error:
        raise StoreError(f"the store at {url} broke off: {error}") from error


def _opener() -> urllib.request.OpenerDirector:
    """An opener without proxies and redirects."""
    return urllib.request.build_opener(urllib.request.ProxyHandler({}), _NoRedirects())


def _log_in(address: Address, request: urllib.request.Request) -> None:
    """Add the Authorization that the server asks for. It is asked first, with an empty request: some servers close the
    connection on a large body that comes without one."""
    try:
        with _opener().open(urllib.request.Request(request.full_url, method="GET"), timeout=30):
            return  # it asks for none
    except urllib.error.HTTPError as error:
        with error:
            if error.code != 401:
                return
            scheme, _, challenge = str(error.headers.get("WWW-Authenticate", "")).partition(" ")
    passwords = urllib.request.HTTPPasswordMgrWithDefaultRealm()
    passwords.add_password(None, request.full_url, address.user, address.password)
    if scheme.lower() == "digest":
        handler = urllib.request.HTTPDigestAuthHandler(passwords)
        asked = urllib.request.parse_keqv_list(list(filter(None, urllib.request.parse_http_list(challenge))))
        said = handler.get_authorization(request, asked)
        if said:
            request.add_unredirected_header("Authorization", f"Digest {said}")
    else:
        token = base64.b64encode(f"{address.user}:{address.password}".encode()).decode()
        request.add_unredirected_header("Authorization", f"Basic {token}")


def _read(response: Any, deadline: float, largest: int) -> bytes:
    parts: list[bytes] = []
    size = 0
    while piece := response.read1(_CHUNK):
        size += len(piece)
        if size > largest:
            raise SizeLimitError(f"the store's answer is larger than {largest} bytes")
        if time.monotonic() > deadline:
            raise TimeLimitError("the store took longer than the time limit")
        parts.append(piece)
    expected = response.headers.get("Content-Length")
    if expected is not None and expected.isdigit() and int(expected) != size:
        raise StoreError("the store broke off in the middle of its answer")
    return b"".join(parts)


def _lower(headers: Any) -> dict[str, str]:
    return {name.lower(): value for name, value in headers.items()}


def _refused(status: int, said: str) -> StoreError:
    hint = "HEADRACE_STORE_USER and HEADRACE_STORE_PASSWORD log in" if status in (401, 403) else ""
    if 300 <= status < 400:
        return StoreError("the store sends elsewhere, which is not followed", status, "give the address that it sends to")
    words = " ".join(said.split())[:300]
    return StoreError(f"the store answered {status}" + (f": {words}" if words and "<" not in words else ""), status, hint)
