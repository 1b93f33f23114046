"""A database that does not answer: come again, and no more than that."""

import pytest
from django.db import InterfaceError, OperationalError
from django.http import HttpRequest, HttpResponse
from django.test import Client
from django.urls import path


def _database(request: HttpRequest) -> HttpResponse:
    raise OperationalError("connection to server at 10.0.0.7 failed")


def _connection(request: HttpRequest) -> HttpResponse:
    raise InterfaceError("connection is closed")


urlpatterns = [path("page", _database), path("api/v1/thing", _connection)]
pytestmark = pytest.mark.urls(__name__)


def test_a_page_says_so_in_words() -> None:
    response = Client().get("/page")
    assert (response.status_code, response.headers["Retry-After"]) == (503, "10")
    assert response.content.decode().startswith("The book cannot be reached just now.")
    assert b"10.0.0.7" not in response.content


def test_the_api_says_so_as_a_problem() -> None:
    response = Client().get("/api/v1/thing")
    assert response.headers["Content-Type"] == "application/problem+json"
    assert response.headers["Retry-After"] == "10"
    assert response.json()["status"] == response.status_code == 503
