"""Products and the versions of their specifications."""

from __future__ import annotations

from typing import Any

from django.http import HttpRequest, HttpResponse
from django.shortcuts import get_object_or_404, redirect, render
from django.views.decorators.http import require_GET, require_http_methods, require_POST

from labrecords.errors import Refused
from labrecords.forms.batch import LimitRows, ProductForm, SpecificationForm, SupersedingProductForm
from labrecords.models import Product, Specification
from labrecords.queries.capability import FEWEST
from labrecords.queries.history import sentences_about
from labrecords.queries.product import effective_specification, products
from labrecords.queries.risk import risks_of
from labrecords.services import product as service
from labrecords.views.access import for_roles, signed_in
from labrecords.views.recording import recorded
from labrecords.views.sheet import typed_credentials


@signed_in
@require_GET
def list(request: HttpRequest) -> HttpResponse:
    """All products with their limits."""
    return render(request, "product/list.html", {"products": products()})


@signed_in
@require_GET
def detail(request: HttpRequest, code: str) -> HttpResponse:
    """One product with the limits of each version."""
    return render(request, "product/detail.html", _context(code))


@for_roles("supervisor")
@require_http_methods(["GET", "POST"])
def record(request: HttpRequest) -> HttpResponse:
    """Record a product."""
    return recorded(
        request,
        ProductForm(request.POST or None),
        template="register/record.html",
        change=service.record_product,
        to=lambda product: ("product-specify", product.code),
        context={"title": "Record a product", "back": "product-list"},
    )


@for_roles("supervisor")
@require_http_methods(["GET", "POST"])
def supersede(request: HttpRequest, code: str) -> HttpResponse:
    """Record the product that takes another's place; the old one stays with its batches."""
    product = get_object_or_404(Product, code=code)

    def change(**clean: Any) -> Product:
        return service.supersede_product(product, **clean)

    form = SupersedingProductForm(request.POST or None, initial={"name": product.name})
    context = {"title": f"Supersede {product.name}", "back": "product-list"}
    to = lambda new: ("product-specify", new.code)  # noqa: E731
    return recorded(request, form, template="register/record.html", change=change, to=to, context=context)


@for_roles("supervisor")
@require_http_methods(["GET", "POST"])
def specify(request: HttpRequest, code: str) -> HttpResponse:
    """Record the next version of a product's specification with its limits, as a draft."""
    product = get_object_or_404(Product, code=code)
    rows = LimitRows(request.POST or None, prefix="limit")

    def change(*, by: Any, reason: str) -> Specification:
        if not rows.is_valid():
            raise Refused(
                [
                    f"Row {n}: {error}"
                    for n, form in enumerate(rows, 1)
                    for errors in form.errors.values()
                    for error in errors
                ]
            )
        limits = [form.cleaned_data for form in rows if form.cleaned_data.get("method")]
        return service.record_specification(product, by=by, reason=reason, limits=limits)

    context = {"title": f"{product.name}: next specification", "product": product, "rows": rows}
    to = lambda _: ("product-detail", code)  # noqa: E731
    form = SpecificationForm(request.POST or None)
    return recorded(request, form, template="product/specify.html", change=change, to=to, context=context)


@for_roles("supervisor")
@require_POST
def make_effective(request: HttpRequest, pk: int) -> HttpResponse:
    """Sign a draft into force."""
    specification = get_object_or_404(Specification.objects.select_related("product"), pk=pk)
    code = specification.product.code
    try:
        credentials, _ = typed_credentials(request.POST)
        service.make_specification_effective(specification, by=request.user, credentials=credentials)
    except Refused as refusal:
        return render(request, "product/detail.html", _context(code) | {"refused": refusal.reasons}, status=409)
    return redirect("product-detail", code)


def _context(code: str) -> dict[str, Any]:
    product = get_object_or_404(products(), code=code)
    effective = effective_specification(product)
    return {
        "product": product,
        "risks": risks_of(effective) if effective else [],
        "fewest": FEWEST,
        "specifications": product.specifications.all(),
        "history": sentences_about(product, parts=product.specifications.all()),
    }
