"""Reading products and their specifications."""

from __future__ import annotations

from typing import Any

from django.db.models import Prefetch, QuerySet

from labrecords.models import Method, Product, Sample, Specification, SpecificationLimit, VersionState


def products() -> QuerySet[Product]:
    """All products with their specifications and limits."""
    limits = SpecificationLimit.objects.select_related("method")
    specifications = Specification.objects.prefetch_related(Prefetch("limits", queryset=limits)).order_by("-number")
    return Product.objects.prefetch_related(Prefetch("specifications", queryset=specifications))


def effective_specification(product: Product) -> Specification | None:
    """The specification version of a product that is effective now."""
    return product.specifications.filter(state=VersionState.EFFECTIVE).first()


def limit_for_sample(sample: Sample, *, method: Method) -> SpecificationLimit | None:
    """The limits that a test of this sample is compared with: those its batch was made under."""
    if sample.batch is None:
        return None
    return sample.batch.specification.limits.select_related("specification__product").filter(method=method).first()


def specification_as_signed(specification: Specification) -> dict[str, Any]:
    """The content of a specification that a signature covers."""
    return {
        "noun": "specification",
        "product": specification.product.code,
        "number": specification.number,
        "reason": specification.reason,
        "limits": [
            {
                "method": limit.method.code,
                "lower": limit.lower,
                "upper": limit.upper,
                "unit": limit.unit,
                "places": limit.places,
                "rounding": limit.rounding,
                "rule": limit.rule,
                "guard_factor": limit.guard_factor,
                **({"figures": limit.figures} if limit.figures else {}),
            }
            for limit in specification.limits.select_related("method").order_by("method__code")
        ],
    }
