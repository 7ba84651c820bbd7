"""Whether the newest calculation of a record may be signed."""

from __future__ import annotations

from labrecords.canonical import canonical_json, sha256_of
from labrecords.models import Run, Standardization
from labrecords.queries.calculation import latest_calculation, latest_request
from labrecords.queries.preview import inputs_for


def objections_to_latest_calculation(record: Run | Standardization) -> list[str]:
    """It must exist, be of exactly the present readings, and be acceptable by the method's rule."""
    request = latest_request(record)
    if request is not None and request.state == "waiting":
        return [f"{record.number} is waiting for the worker. Sign when the result has arrived."]
    if request is not None and request.state == "failed":
        return [f"{record.number} could not be computed: {request.problem}"]
    latest = latest_calculation(record)
    if latest is None:
        return [f"{record.number} has no result yet. Enter the readings; the worker computes them."]
    if sha256_of(canonical_json(inputs_for(record))) != latest.inputs_sha256:
        return [f"The result of {record.number} is older than its readings. Wait for the worker."]
    if not latest.is_acceptable:
        reasons: list[str] = latest.outputs["reasons"]
        return reasons or [f"The replicates of {record.number} do not meet the rule. Add another."]
    return []
