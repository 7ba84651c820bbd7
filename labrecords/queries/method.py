"""Reading methods and their versions."""

from __future__ import annotations

from typing import Any

from django.db.models import Prefetch, QuerySet
from django.forms.models import model_to_dict

from labrecords.models import Method, MethodVersion, VersionState


def methods() -> QuerySet[Method]:
    """All methods with their versions, newest version first."""
    versions = MethodVersion.objects.select_related("titrant", "expressed_as").order_by("-number")
    return Method.objects.prefetch_related(Prefetch("versions", queryset=versions))


def effective_version(method: Method) -> MethodVersion | None:
    """The version of a method that is effective now."""
    return method.versions.select_related("titrant", "expressed_as", "excess_titrant", "method").filter(
        state=VersionState.EFFECTIVE
    ).first()  # fmt: skip


def effective_versions() -> QuerySet[MethodVersion]:
    """Every effective method version, by code."""
    return (
        MethodVersion.objects.filter(state=VersionState.EFFECTIVE)
        .select_related("method", "titrant", "expressed_as", "excess_titrant")
        .order_by("method__code")
    )


def as_signed(version: MethodVersion) -> dict[str, Any]:
    """The content of a method version that a signature covers: every column of the recipe."""
    recipe = model_to_dict(version)
    return {
        "noun": "method_version",
        **recipe,
        "method": version.method.code,
        "titrant": version.titrant.code,
        "expressed_as": version.expressed_as.name,
        "excess_titrant": version.excess_titrant.code if version.excess_titrant else None,
    }
