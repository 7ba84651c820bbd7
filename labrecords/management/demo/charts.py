"""The demo's control charts, their limits set from the first weeks."""

from __future__ import annotations

from typing import TYPE_CHECKING

from labrecords.queries.control_chart import known_rules, points_of
from labrecords.services.control_chart import record_chart, set_limits

if TYPE_CHECKING:
    from labrecords.management.demo.history import History

BASELINE = 15


def set_up_charts(history: History) -> None:
    """Charts of both control samples, of each titrant's concentration, and of a blank."""
    lab = history.bench.lab
    by, credentials = lab.people["mokafor"], lab.credentials("mokafor")
    charts = [
        record_chart(by=by, code=code, title=f"{sample.name}, {sample.method.code}", control_sample=sample)
        for code, sample in lab.controls.items()
    ]
    charts += [
        record_chart(by=by, code=f"C-{code}", title=f"Concentration of {titrant.name}", titrant=titrant)
        for code, titrant in lab.titrants.items()
    ]
    charts.append(record_chart(by=by, code="B-TA-VIN", title="Blank of TA-VIN", method=lab.methods["TA-VIN"]))
    for chart in charts:
        points = points_of(chart)
        if len(points) >= BASELINE:
            set_limits(
                chart, by=by, credentials=credentials, baseline=[point.calculation_id for point in points[:BASELINE]],
                excluded={}, rules=known_rules()[:4], reason=f"first {BASELINE} values",
                also=["ewma"],
            )  # fmt: skip
