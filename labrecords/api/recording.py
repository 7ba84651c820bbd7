"""The way every register of the API goes: a list in pages, or one service call and the record it made."""

from __future__ import annotations

from collections.abc import Callable
from typing import Any

from django.db.models import QuerySet
from rest_framework.exceptions import PermissionDenied
from rest_framework.pagination import PageNumberPagination
from rest_framework.request import Request
from rest_framework.response import Response
from rest_framework.serializers import BaseSerializer

Shape = type[BaseSerializer[Any]]


def listed(request: Request, found: QuerySet[Any], *, shown: Shape) -> Response:
    """One page of a list."""
    pages = PageNumberPagination()
    rows = pages.paginate_queryset(found, request)
    return pages.get_paginated_response(shown(rows, many=True).data)


def recorded(
    request: Request,
    *,
    roles: tuple[str, ...],
    entry: Shape,
    change: Callable[..., Any],
    found: QuerySet[Any],
    shown: Shape,
) -> Response:
    """Check the shape, make the change, answer with the record as the list shows it."""
    if not set(roles) & set(request.user.roles):
        whose = " and ".join(f"{role}s" for role in roles)
        raise PermissionDenied(f"This is for {whose}. You are signed in as {request.user.full_name}.")
    typed = entry(data=request.data)
    typed.is_valid(raise_exception=True)
    record = change(by=request.user, **typed.validated_data)
    return Response(shown(found.get(pk=record.pk)).data, status=201)
