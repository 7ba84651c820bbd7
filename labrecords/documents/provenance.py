"""The lineage of a result as W3C PROV-JSON: an open standard that other software reads.

References
----------
W3C PROV-DM (Recommendation, 2013); PROV-JSON (W3C Member Submission, 2013).
"""

from __future__ import annotations

from collections.abc import Sequence
from typing import Any

from labrecords.models import Run
from labrecords.queries.lineage import ChainLink

PREFIX = "lab"


def provenance_of_run(run: Run, links: Sequence[ChainLink]) -> dict[str, Any]:
    """Entities, activities and agents of a run and of everything above it."""
    document: dict[str, Any] = {
        "prefix": {PREFIX: "urn:labrecords:"},
        "entity": {}, "activity": {}, "agent": {}, "used": {}, "wasGeneratedBy": {}, "wasAssociatedWith": {},
        "wasDerivedFrom": {},
    }  # fmt: skip
    calculation = run.calculation
    result = _name("result", run.number)
    document["entity"][result] = {
        "prov:label": f"result of {run.number}",
        f"{PREFIX}:value": calculation.value if calculation else None,
        f"{PREFIX}:expandedUncertainty": calculation.expanded_uncertainty if calculation else None,
        f"{PREFIX}:unit": calculation.unit if calculation else None,
        f"{PREFIX}:inputsSha256": calculation.inputs_sha256 if calculation else None,
    }
    _activity(document, "run", run.number, by=run.started_by.full_name, at=run.started_at.isoformat())
    document["wasGeneratedBy"]["_:g0"] = {"prov:entity": result, "prov:activity": _name("run", run.number)}
    _relate(document, "used", activity=_name("run", run.number), entity=_sample(document, run))
    before = {"titrant": (result, _name("run", run.number)), "excess solution": (result, _name("run", run.number))}
    for link in links:
        before[link.via] = _link(document, link, *before[link.via])
    return document


def _link(document: dict[str, Any], link: ChainLink, derived: str, user: str) -> tuple[str, str]:
    concentration, activity = _name("concentration", link.number), _name("standardization", link.number)
    document["entity"][concentration] = {
        "prov:label": f"concentration of lot {link.lot}",
        f"{PREFIX}:value": link.value,
        f"{PREFIX}:expandedUncertainty": link.expanded_uncertainty,
        f"{PREFIX}:unit": "mol/L",
    }
    _activity(document, "standardization", link.number, by=link.started_by, at=link.started_at.isoformat())
    _relate(document, "used", activity=user, entity=concentration)
    _relate(document, "wasGeneratedBy", entity=concentration, activity=activity)
    _relate(document, "wasDerivedFrom", generatedEntity=derived, usedEntity=concentration)
    if link.standard:
        standard = _name("standard", link.standard)
        document["entity"][standard] = {
            "prov:label": f"{link.substance} {link.standard}",
            f"{PREFIX}:purity": str(link.purity),
            f"{PREFIX}:certificateSha256": link.certificate_sha256,
        }
        _relate(document, "used", activity=activity, entity=standard)
        _relate(document, "wasDerivedFrom", generatedEntity=concentration, usedEntity=standard)
    return concentration, activity


def _sample(document: dict[str, Any], run: Run) -> str:
    name = _name("sample", run.sample.number)
    batch = run.sample.batch
    document["entity"][name] = {"prov:label": f"sample {run.sample.number}", f"{PREFIX}:batch": batch.number if batch else None}
    return name


def _activity(document: dict[str, Any], kind: str, number: str, *, by: str, at: str) -> None:
    activity, agent = _name(kind, number), _name("person", by)
    document["activity"][activity] = {"prov:startTime": at, "prov:label": f"{kind} {number}"}
    document["agent"][agent] = {"prov:type": "prov:Person", "prov:label": by}
    _relate(document, "wasAssociatedWith", activity=activity, agent=agent)


def _relate(document: dict[str, Any], relation: str, **ends: str) -> None:
    rows = document[relation]
    rows[f"_:{relation}{len(rows) + 1}"] = {f"prov:{end}": name for end, name in ends.items()}


def _name(kind: str, number: str) -> str:
    return f"{PREFIX}:{kind}/{number.replace(' ', '_')}"
