"""Results of several records side by side."""

from __future__ import annotations

import re
from typing import Any

from django.http import HttpRequest, HttpResponse
from django.shortcuts import render
from django.views.decorators.http import require_GET

from labrecords.errors import Refused
from labrecords.queries.result import Compared, results_together
from labrecords.views.access import signed_in


@signed_in
@require_GET
def together(request: HttpRequest) -> HttpResponse:
    """Mean and differences of the results whose numbers are given, with what they share taken into account."""
    typed = request.GET.get("numbers", "").strip()
    context: dict[str, Any] = {"typed": typed}
    if not typed:
        return render(request, "result/together.html", context)
    numbers = list(dict.fromkeys(part.upper() for part in re.split(r"[\s,;]+", typed) if part))
    try:
        context |= _shown(results_together(numbers))
    except Refused as refusal:
        return render(request, "result/together.html", context | {"refused": refusal.reasons}, status=409)
    return render(request, "result/together.html", context)


def _shown(compared: Compared) -> dict[str, Any]:
    """Each result with its row of correlations; the two means with U for k = 2."""
    together = compared.together
    rows = [
        {"record": record, "calculation": calculation, "correlations": list(row)}
        for record, calculation, row in zip(compared.records, compared.calculations, together.correlation, strict=True)
    ]
    means = [("Plain mean", together.mean), ("Weighted mean", together.weighted)]
    return {
        "compared": compared,
        "rows": rows,
        "means": [
            {"name": name, "value": mean.value, "expanded": 2 * mean.u, "alone": 2 * mean.u_if_independent}
            for name, mean in means
            if mean is not None
        ],
        "judged": list(zip(together.differences, compared.sentences, strict=True)),
    }
