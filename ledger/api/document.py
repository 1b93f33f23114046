"""Where the OpenAPI document is read; apart from its making, which the framework loads first."""

from drf_spectacular.views import SpectacularJSONAPIView


class Document(SpectacularJSONAPIView):
    """The document itself, for everybody."""

    authentication_classes = ()
    permission_classes = ()
