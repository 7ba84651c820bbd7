"""How the API says no: a refusal is 409 with its sentences, a shape error is 400."""

from __future__ import annotations

from typing import Any

from rest_framework import status
from rest_framework.response import Response
from rest_framework.views import exception_handler

from labrecords.errors import Refused


def answer(problem: Exception, context: dict[str, Any]) -> Response | None:
    """The response to an exception, or None for the framework's own."""
    if isinstance(problem, Refused):
        return Response({"reasons": list(problem.reasons)}, status=status.HTTP_409_CONFLICT)
    return exception_handler(problem, context)
