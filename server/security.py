"""What protects a program that serves its own machine from the other pages in the same browser.

Host names other than ours are refused (against a foreign name that points here), changes are
taken from our own pages or from programs only, and every answer says what its page may load.
"""

import logging
from collections.abc import Callable
from urllib.parse import urlsplit

from fastapi import Request, Response
from starlette.exceptions import HTTPException
from starlette.types import ASGIApp, Message, Receive, Scope, Send

# The first hash is of the empty style sheet that plotly fills, the second of its map styles.
CONTENT_SECURITY_POLICY = (
    "default-src 'none'; script-src 'self'; "
    "style-src 'self' 'sha256-47DEQpj8HBSa+/TImW+5JCeuQeRkm5NMpJWZG3hSuFU=' "
    "'sha256-ji27qzEtxXZW+7dun6UwjHXJ18e6WAin1VvNtkzIE/o='; "
    "img-src 'self' data: blob:; connect-src 'self'; font-src 'self'; form-action 'self'; "
    "base-uri 'none'; frame-ancestors 'none'"
)
HEADERS = (
    (b"content-security-policy", CONTENT_SECURITY_POLICY.encode()),
    (b"x-content-type-options", b"nosniff"),
    (b"referrer-policy", b"same-origin"),
    (b"cross-origin-opener-policy", b"same-origin"),
    (b"x-frame-options", b"DENY"),
)
SAFE_METHODS = ("GET", "HEAD", "OPTIONS")
Refuse = Callable[[Request, int, str], Response]

log = logging.getLogger("firmhead")


class Guard:
    """The outermost layer of the application, in front of every route and every error page."""

    def __init__(
        self, app: ASGIApp, *, allowed_hosts: tuple[str, ...], largest_body: int, refuse: Refuse
    ) -> None:
        self.app = app
        self.largest_body = largest_body
        self.allowed_hosts = frozenset(allowed_hosts)
        self.refuse = refuse

    async def __call__(self, scope: Scope, receive: Receive, send: Send) -> None:
        """Answer a request, or refuse it before anything has read it."""
        if scope["type"] != "http":
            await self.app(scope, receive, send)
            return
        started = False
        received = 0

        async def receive_guarded() -> Message:
            nonlocal received
            message = await receive()
            received += len(message.get("body", b""))
            if received > self.largest_body:
                raise HTTPException(413, self._too_large())
            return message

        async def send_guarded(message: Message) -> None:
            nonlocal started
            if message["type"] == "http.response.start":
                started = True
                given = list(message.get("headers", []))
                names = {name.lower() for name, _ in given}
                extra = [pair for pair in HEADERS if pair[0] not in names]
                if b"cache-control" not in names:
                    # a page that is shown again must ask whether the station has changed
                    extra.append((b"cache-control", b"no-cache"))
                message["headers"] = [*given, *extra]
            await send(message)

        request = Request(scope)
        refused = self._refusal(request)
        if refused is not None:
            await self.refuse(request, *refused)(scope, receive, send_guarded)
            return
        try:
            await self.app(scope, receive_guarded, send_guarded)
        except Exception:
            log.exception("%s %s could not be answered", scope["method"], scope["path"])
            if started:
                raise
            sentence = (
                "This is a fault of the program, not of your entries. "
                "Nothing that was saved is lost."
            )
            await self.refuse(request, 500, sentence)(scope, receive, send_guarded)

    def _refusal(self, request: Request) -> tuple[int, str] | None:
        host = request.headers.get("host", "")
        if _host_name(host) not in self.allowed_hosts:
            return 400, f"This program does not answer to the name “{host[:60]}”."
        length = request.headers.get("content-length", "")
        if length.isdigit() and int(length) > self.largest_body:
            return 413, self._too_large()
        if request.method in SAFE_METHODS or _is_from_here(request, host):
            return None
        return 403, (
            "A change is taken from this program's own pages only; another program sends JSON, "
            "with Content-Type: application/json."
        )

    def _too_large(self) -> str:
        return f"At most {self.largest_body // 1_000_000} MB can be sent at once."


def _host_name(host: str) -> str:
    if host.startswith("["):
        return host.partition("]")[0].lower() + "]"
    return host.partition(":")[0].lower()


def _is_from_here(request: Request, host: str) -> bool:
    headers = request.headers
    site = headers.get("sec-fetch-site")
    if site is not None:
        return site == "same-origin"
    origin = headers.get("origin")
    if origin is not None:
        return urlsplit(origin).netloc == host
    # Neither header: no page of a browser of today. What follows cannot be sent across sites
    # without the browser asking first, and that is never granted.
    media_type = headers.get("content-type", "").partition(";")[0].strip().lower()
    return (
        "hx-request" in headers
        or media_type == "application/json"
        or request.method in ("PUT", "DELETE")
    )
