"""Requests and responses as plain values, and errors that have a status."""

from __future__ import annotations

from collections.abc import Iterable, Mapping
from typing import Any
from urllib.parse import parse_qsl

from msgspec import Struct

from headrace.errors import HeadraceError

REASONS = {
    200: "OK",
    204: "No Content",
    301: "Moved Permanently",
    303: "See Other",
    400: "Bad Request",
    403: "Forbidden",
    404: "Not Found",
    405: "Method Not Allowed",
    406: "Not Acceptable",
    413: "Content Too Large",
    415: "Unsupported Media Type",
    500: "Internal Server Error",
    503: "Service Unavailable",
}
_MOST_PARAMETERS = 200


class Response(Struct, frozen=True):
    """status, body and media type; headers besides Content-Type and Content-Length."""

    status: int
    body: bytes = b""
    media: str = "text/plain; charset=utf-8"
    headers: tuple[tuple[str, str], ...] = ()


class HttpError(HeadraceError):
    """An answer that says why there is none. kind: one word for machines."""

    def __init__(self, status: int, kind: str, message: str, headers: Iterable[tuple[str, str]] = ()) -> None:
        super().__init__(message)
        self.status, self.kind, self.headers = status, kind, tuple(headers)


class Request(Struct, frozen=True):
    """A request. path: decoded, without the query string. query: the query string's pairs. headers: lower-case names."""

    method: str
    path: str
    query: tuple[tuple[str, str], ...] = ()
    headers: dict[str, str] = {}
    body: bytes = b""

    @property
    def media(self) -> str:
        """The media type of the body, without parameters, in lower case."""
        return self.headers.get("content-type", "").partition(";")[0].strip().lower()

    @property
    def accept(self) -> str:
        """The Accept header; "" when there is none."""
        return self.headers.get("accept", "")

    def form(self) -> tuple[tuple[str, str], ...]:
        """The pairs of a URL-encoded body. Raises HttpError when it is none."""
        return pairs(self.text())

    def text(self) -> str:
        """The body as text. Raises HttpError when it is not UTF-8."""
        try:
            return self.body.decode("utf-8")
        except UnicodeDecodeError as error:
            raise HttpError(400, "encoding", "the body is not UTF-8") from error

    def first(self, name: str, default: str = "") -> str:
        """The first value of a parameter in the query string."""
        return next((value for key, value in self.query if key == name), default)


def pairs(text: str) -> tuple[tuple[str, str], ...]:
    """The pairs of URL-encoded text. Raises HttpError for bytes that are not UTF-8, and for too many."""
    try:
        return tuple(parse_qsl(text, keep_blank_values=True, errors="strict", max_num_fields=_MOST_PARAMETERS))
    except ValueError as error:
        raise HttpError(400, "parameters", "the parameters can't be read: not UTF-8, or too many") from error


def from_environ(environ: Mapping[str, Any], largest: int) -> Request:
    """A request from a WSGI environment. Raises HttpError when path or parameters are not UTF-8 or the body is too large."""
    headers = {key[5:].lower().replace("_", "-"): str(value) for key, value in environ.items() if key.startswith("HTTP_")}
    headers["content-type"] = str(environ.get("CONTENT_TYPE", ""))
    try:
        path = str(environ.get("PATH_INFO", "/")).encode("latin-1").decode("utf-8")
    except UnicodeError as error:
        raise HttpError(400, "path", "the path is not UTF-8") from error
    body = environ["wsgi.input"].read(largest + 1) if environ.get("CONTENT_LENGTH") not in (None, "", "0") else b""
    if len(body) > largest:
        raise HttpError(413, "size", f"the request has more than {largest} bytes")
    return Request(str(environ["REQUEST_METHOD"]).upper(), path, pairs(str(environ.get("QUERY_STRING", ""))), headers, body)
