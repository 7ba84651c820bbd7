"""Test methods and their versions: recorded as drafts, made effective by signature, then frozen."""

from __future__ import annotations

from datetime import date
from typing import Any

from django.db import transaction
from django.utils import timezone

from labrecords.errors import refuse_if
from labrecords.models import Meaning, Method, MethodVersion, User, VersionState
from labrecords.queries.method import as_signed
from labrecords.rules.method import (
    objections_to_making_effective,
    objections_to_recording_method,
    objections_to_recording_version,
)  # fmt: skip
from labrecords.services import audit
from labrecords.services.number import reserve_name
from labrecords.services.signature import Credentials, sign


@transaction.atomic(durable=True)
def record_method(*, by: User, code: str, title: str) -> Method:
    """Record a test; its recipe comes with its first version."""
    reserve_name("method", code)
    refuse_if(objections_to_recording_method(by=by, code=code, title=title))
    with audit.event("method.record", by=by, subject=code):
        return Method.objects.create(code=code, title=title)


@transaction.atomic(durable=True)
def record_version(method: Method, *, by: User, reason: str, **recipe: Any) -> MethodVersion:
    """Record the next version of a method as a draft, with the reason for it."""
    method = Method.objects.select_for_update().get(pk=method.pk)
    last = method.versions.order_by("-number").first()
    version = MethodVersion(method=method, number=last.number + 1 if last else 1, reason=reason, **recipe)
    refuse_if(objections_to_recording_version(version, by=by))
    with audit.event("method_version.record", by=by, subject=str(version), reason=reason):
        version.save()
    return version


@transaction.atomic(durable=True)
def correct_version(version: MethodVersion, *, by: User, reason: str, **recipe: Any) -> MethodVersion:
    """Change a draft; an effective version never changes."""
    version = MethodVersion.objects.select_for_update(of=("self",)).select_related("method").get(pk=version.pk)
    for name, value in recipe.items():
        setattr(version, name, value)
    version.reason = reason
    refuse_if(objections_to_recording_version(version, by=by))
    with audit.event("method_version.correct", by=by, subject=str(version), reason=reason):
        version.save()
    return version


@transaction.atomic(durable=True)
def make_version_effective(version: MethodVersion, *, by: User, credentials: Credentials) -> MethodVersion:
    """Sign a draft into force; the version before it is superseded in the same transaction."""
    version = MethodVersion.objects.select_for_update(of=("self",)).select_related("method").get(pk=version.pk)
    refuse_if(objections_to_making_effective(version, by=by))
    with audit.event("method_version.make_effective", by=by, subject=str(version)) as event:
        for earlier in version.method.versions.select_for_update().filter(state=VersionState.EFFECTIVE):
            earlier.state = VersionState.SUPERSEDED
            earlier.save(update_fields=["state"])
        version.state, version.effective_from = VersionState.EFFECTIVE, _day(event.at)
        version.save(update_fields=["state", "effective_from"])
        sign(
            Meaning.MADE_EFFECTIVE, by=by, credentials=credentials, noun="method_version", record_id=version.pk,
            number=str(version), content=as_signed(version), reason=version.reason,
            zone=timezone.get_current_timezone_name(),
        )  # fmt: skip
    return version


def _day(moment: Any) -> date:
    return timezone.localtime(moment).date()
