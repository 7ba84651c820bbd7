"""The register's front page."""

from __future__ import annotations

from django.http import HttpRequest, HttpResponse
from django.shortcuts import render
from django.views.decorators.http import require_GET

from labrecords.queries.register import counts
from labrecords.views.access import signed_in

PLACES = [
    ("titrant_lot", "Titrant lots", "bottles and tanks with their concentrations"),
    ("titrant", "Titrants", "kinds of solution and how they are standardized"),
    ("standard", "Reference standards", "lots of primary standards with their certificates"),
    ("instrument", "Instruments", "glassware, balances, electrodes and their calibrations"),
    ("substance", "Substances", "formulas, molar masses, hazards"),
    ("method", "Methods", "recipes and their versions"),
    ("product", "Products", "what is made, and its specifications"),
    ("control_sample", "Control samples", "stable materials that watch the methods"),
    ("user", "People", "accounts and roles"),
]


@signed_in
@require_GET
def home(request: HttpRequest) -> HttpResponse:
    """Every register with the count of its entries."""
    known = counts()
    places = [
        {"name": f"{noun}-list", "label": label, "words": words, "count": known[noun]} for noun, label, words in PLACES
    ]
    return render(request, "register/home.html", {"places": places})
