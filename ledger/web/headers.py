"""What every answer tells a browser, whatever the address: what may load, and what may be kept."""

from collections.abc import Callable

from django.conf import settings
from django.http import HttpRequest, HttpResponse

Answer = Callable[[HttpRequest], HttpResponse]

CONTENT_SECURITY_POLICY = "; ".join(
    (
        "default-src 'none'",
        "style-src 'self'",
        "img-src 'self' data:",
        "script-src 'self'",
        "connect-src 'self'",
        "form-action 'self'",
        "frame-ancestors 'none'",
        "base-uri 'none'",
    )
)
ALWAYS = {
    "Content-Security-Policy": CONTENT_SECURITY_POLICY,
    "X-Content-Type-Options": "nosniff",
    "X-Frame-Options": "DENY",
    "Referrer-Policy": "same-origin",
    "Permissions-Policy": "camera=(), geolocation=(), microphone=(), payment=(), usb=()",
    "Cross-Origin-Opener-Policy": "same-origin",
}


def headers(get_response: Answer) -> Answer:
    """Wrap everything else, so that errors and static files carry the headers too."""

    def answer(request: HttpRequest) -> HttpResponse:
        response = get_response(request)
        for name, value in ALWAYS.items():
            response.headers[name] = value
        if not request.path.startswith(f"/{settings.STATIC_URL.strip('/')}/"):
            # What a signed-in person or a device reads is for nobody else's cache.
            response.headers.setdefault("Cache-Control", "private, no-store")
        return response

    return answer
