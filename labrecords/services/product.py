"""Products and the versions of their specifications."""

from __future__ import annotations

from collections.abc import Iterable, Mapping
from typing import Any

from django.db import transaction
from django.utils import timezone

from labrecords.errors import refuse_if
from labrecords.models import Meaning, Product, Specification, SpecificationLimit, User, VersionState
from labrecords.queries.product import specification_as_signed
from labrecords.rules.product import (
    objections_to_limits,
    objections_to_making_specification_effective,
    objections_to_recording_product,
    objections_to_specifying,
)  # fmt: skip
from labrecords.services import audit
from labrecords.services.number import reserve_name
from labrecords.services.signature import Credentials, sign


@transaction.atomic(durable=True)
def record_product(*, by: User, code: str, name: str) -> Product:
    """Record a product."""
    reserve_name("product", code)
    refuse_if(objections_to_recording_product(by=by, code=code, name=name))
    with audit.event("product.record", by=by, subject=code):
        return Product.objects.create(code=code, name=name)


@transaction.atomic(durable=True)
def supersede_product(product: Product, *, by: User, code: str, name: str, reason: str) -> Product:
    """Replace a product by another; the old one stays with its batches."""
    product = Product.objects.select_for_update().get(pk=product.pk)
    reserve_name("product", code)
    refuse_if(
        [
            *objections_to_recording_product(by=by, code=code, name=name),
            *([f"{product.code} is superseded already."] if product.superseded_by_id else []),
            *([] if reason.strip() else ["Reason is empty: say why the product is superseded."]),
        ]
    )
    with audit.event("product.supersede", by=by, subject=product.code, reason=reason):
        product.superseded_by = Product.objects.create(code=code, name=name)
        product.save(update_fields=["superseded_by"])
    return product.superseded_by


@transaction.atomic(durable=True)
def record_specification(
    product: Product, *, by: User, reason: str, limits: Iterable[Mapping[str, Any]]
) -> Specification:
    """Record the next version of a product's specification as a draft with its limits."""
    product = Product.objects.select_for_update().get(pk=product.pk)
    rows = list(limits)
    refuse_if([*objections_to_specifying(by=by, reason=reason), *objections_to_limits(rows)])
    last = product.specifications.order_by("-number").first()
    with audit.event("specification.record", by=by, subject=product.code, reason=reason):
        specification = Specification.objects.create(
            product=product, number=last.number + 1 if last else 1, reason=reason
        )
        for row in rows:
            SpecificationLimit.objects.create(specification=specification, **row)
    return specification


@transaction.atomic(durable=True)
def make_specification_effective(specification: Specification, *, by: User, credentials: Credentials) -> Specification:
    """Sign a draft into force; new batches are made under it, old ones keep theirs."""
    specification = (
        Specification.objects.select_for_update(of=("self",)).select_related("product").get(pk=specification.pk)
    )
    refuse_if(objections_to_making_specification_effective(specification, by=by))
    with audit.event("specification.make_effective", by=by, subject=str(specification)) as event:
        for earlier in specification.product.specifications.select_for_update().filter(state=VersionState.EFFECTIVE):
            earlier.state = VersionState.SUPERSEDED
            earlier.save(update_fields=["state"])
        specification.state = VersionState.EFFECTIVE
        specification.effective_from = timezone.localtime(event.at).date()
        specification.save(update_fields=["state", "effective_from"])
        sign(
            Meaning.MADE_EFFECTIVE, by=by, credentials=credentials, noun="specification",
            record_id=specification.pk, number=str(specification), content=specification_as_signed(specification),
            reason=specification.reason, zone=timezone.get_current_timezone_name(),
        )  # fmt: skip
    return specification
