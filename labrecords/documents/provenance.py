"""The lineage of a result as W3C PROV-JSON: an open standard that other software reads.

References
----------
W3C PROV-DM (Recommendation, 2013); PROV-JSON (W3C Member Submission, 2013).
"""

from __future__ import annotations

from collections.abc import Mapping, Sequence
from typing import Any

from labrecords.models import Run, Signature, UsedInstrument
from labrecords.queries.lineage import ChainLink

PREFIX = "lab"
RELATIONS = ("used", "wasGeneratedBy", "wasAssociatedWith", "wasDerivedFrom", "wasAttributedTo")


def provenance_of_run(
    run: Run,
    links: Sequence[ChainLink],
    *,
    instruments: Sequence[UsedInstrument] = (),
    signatures: Sequence[Signature] = (),
) -> dict[str, Any]:
    """Entities, activities and agents of a run and of everything above it."""
    document: dict[str, Any] = {
        "prefix": {PREFIX: "urn:labrecords:"},
        "entity": {},
        "activity": {},
        "agent": {},
    }
    document |= {relation: {} for relation in RELATIONS}
    result, activity = _result(document, run), _name("run", run.number)
    before = {"titrant": (result, activity), "excess solution": (result, activity)}
    for link in links:
        before[link.via] = _link(document, link, *before[link.via])
    for used in instruments:
        _instrument(document, used)
    for signature in signatures:
        _signature(document, signature)
    return {part: content for part, content in document.items() if content}


def _result(document: dict[str, Any], run: Run) -> str:
    calculation, result, activity = run.calculation, _name("result", run.number), _name("run", run.number)
    _entity(
        document, result, f"result of {run.number}", state=run.state,
        value=calculation and calculation.value,
        expandedUncertainty=calculation and calculation.expanded_uncertainty,
        coverageFactor=calculation and calculation.coverage_factor, unit=calculation and calculation.unit,
        outcome=calculation and calculation.outcome, inputsSha256=calculation and calculation.inputs_sha256,
        engineVersion=calculation and calculation.engine_version,
    )  # fmt: skip
    _activity(document, "run", run.number, by=run.started_by.full_name, at=run.started_at.isoformat())
    _relate(document, "wasGeneratedBy", entity=result, activity=activity)
    _relate(document, "used", activity=activity, entity=_sample(document, run))
    method = _name("method", str(run.method_version))
    _entity(document, method, f"method {run.method_version}")
    _relate(document, "used", activity=activity, entity=method)
    if run.specification_limit:
        limits = _name("specification", str(run.specification_limit.specification))
        _entity(document, limits, f"specification {run.specification_limit.specification}")
        _relate(document, "used", activity=activity, entity=limits)
    return result


def _link(document: dict[str, Any], link: ChainLink, derived: str, user: str) -> tuple[str, str]:
    concentration, activity = _name("concentration", link.number), _name("standardization", link.number)
    _entity(
        document, concentration, f"concentration of lot {link.lot}", lot=link.lot, state=link.state,
        value=link.value, expandedUncertainty=link.expanded_uncertainty, unit="mol/L",
    )  # fmt: skip
    _activity(document, "standardization", link.number, by=link.started_by, at=link.started_at.isoformat())
    _relate(document, "used", activity=user, entity=concentration)
    _relate(document, "wasGeneratedBy", entity=concentration, activity=activity)
    _relate(document, "wasDerivedFrom", generatedEntity=derived, usedEntity=concentration)
    if link.standard:
        standard = _name("standard", link.standard)
        _entity(
            document, standard, f"{link.substance} {link.standard}", purity=str(link.purity),
            certificate=link.certificate, certificateSha256=link.certificate_sha256,
        )  # fmt: skip
        _relate(document, "used", activity=activity, entity=standard)
        _relate(document, "wasDerivedFrom", generatedEntity=concentration, usedEntity=standard)
    return concentration, activity


def _sample(document: dict[str, Any], run: Run) -> str:
    name, batch = _name("sample", run.sample.number), run.sample.batch
    _entity(document, name, f"sample {run.sample.number}", batch=batch and batch.number)
    return name


def _instrument(document: dict[str, Any], used: UsedInstrument) -> None:
    kind, record = ("run", used.run) if used.run else ("standardization", used.standardization)
    calibration = used.calibration
    name = _name("calibration", f"{used.instrument.identifier}/{calibration.pk}")
    _entity(
        document, name, f"{used.part} {used.instrument.identifier}, calibrated {calibration.calibrated_on}",
        instrument=used.instrument.identifier, validUntil=calibration.due_on.isoformat(),
    )  # fmt: skip
    _relate(document, "used", activity=_name(kind, str(record)), entity=name)


def _signature(document: dict[str, Any], signature: Signature) -> None:
    """A signed statement is an entity of its own, attributed to the person who signed it."""
    name, agent = _name("signature", str(signature.pk)), _agent(document, signature.printed_name)
    _entity(
        document, name, f"{signature.record_number}: {signature.meaning} {signature.printed_name}",
        contentSha256=signature.content_sha256, signedAt=signature.signed_at.isoformat(),
        reason=signature.reason,
    )  # fmt: skip
    _relate(document, "wasAttributedTo", entity=name, agent=agent)
    signing, at = _name("signing", str(signature.pk)), signature.signed_at.isoformat()
    _activity(document, "signing", str(signature.pk), by=signature.printed_name, at=at)
    _relate(document, "used", activity=signing, entity=_signed(signature))
    _relate(document, "wasGeneratedBy", entity=name, activity=signing)


def _signed(signature: Signature) -> str:
    return _name("result" if signature.noun == "run" else "concentration", signature.record_number)


def _entity(document: dict[str, Any], name: str, label: str, **told: Any) -> None:
    """PROV-JSON knows no null: what is not known is left out."""
    known = {f"{PREFIX}:{key}": value for key, value in told.items() if value not in (None, "")}
    document["entity"][name] = {"prov:label": label, **known}


def _activity(document: dict[str, Any], kind: str, number: str, *, by: str, at: str) -> None:
    activity = _name(kind, number)
    document["activity"][activity] = {"prov:startTime": at, "prov:label": f"{kind} {number}"}
    _relate(document, "wasAssociatedWith", activity=activity, agent=_agent(document, by))


def _agent(document: dict[str, Any], full_name: str) -> str:
    agent = _name("person", full_name)
    document["agent"][agent] = {
        "prov:type": {"$": "prov:Person", "type": "xsd:QName"},
        "prov:label": full_name,
    }
    return agent


def _relate(document: dict[str, Any], relation: str, **ends: str) -> None:
    rows: dict[str, Mapping[str, str]] = document[relation]
    told = {f"prov:{end}": name for end, name in ends.items()}
    if told not in rows.values():
        rows[f"_:{relation}{len(rows) + 1}"] = told


def _name(kind: str, number: str) -> str:
    return f"{PREFIX}:{kind}/{number.replace(' ', '_')}"
