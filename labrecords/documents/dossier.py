"""The dossier of a result: everything it rests on in one file, which anybody can check without this site.

Signed contents and calculation inputs are in it byte for byte, so that their SHA-256 is the one that was signed;
``sha256sum -c SHA256SUMS`` checks the rest.
"""

from __future__ import annotations

import hashlib
import io
import json
import re
import zipfile
from collections.abc import Iterable, Sequence

from labrecords.documents.provenance import provenance_of_run
from labrecords.documents.table import csv_lines
from labrecords.models import Calculation, Run, Signature, Standardization, StoredFile
from labrecords.queries.history import sentences_about
from labrecords.queries.lineage import ChainLink, chain_up, instruments_on_chain, signatures_on_chain
from labrecords.queries.replicate import replicates_of

LONG_AGO = (1980, 1, 1, 0, 0, 0)  # the same records always give the same bytes
TRAIL = ("record", "event", "time (UTC)", "simulated clock", "person", "what", "changes", "reason")
README = """Dossier of the result of run {number}

provenance.json   the chain from the result to the certificates, W3C PROV-JSON
trail.csv         who did what and why, on the run and on each standardization above it
signatures/       the content of each signature, exactly as it was signed; its SHA-256 is in the file's name
calculations/     inputs and outputs of each calculation, and the version of the engine in the outputs
certificates/     certificates of reference standards and calibrations, as they arrived
curves/           recorded curves, as they arrived
SHA256SUMS        check all files with: sha256sum -c SHA256SUMS

The chain, from the result upwards:
{chain}
"""


def dossier_of_run(run: Run) -> bytes:
    """A ZIP file of the whole chain of one run."""
    links = chain_up(run_id=run.pk)
    above = Standardization.objects.filter(pk__in=[link.standardization_id for link in links]).order_by("-started_at")
    records: list[Run | Standardization] = [run, *above]
    signatures = list(signatures_on_chain(run, links))
    files = {
        "README.txt": _readme(run, links),
        "provenance.json": _provenance(run, links, signatures),
        "trail.csv": "".join(csv_lines(TRAIL, _trail(records))).encode(),
        **_signatures(signatures),
        **_calculations(records),
        **_stored("certificates", _certificates(run, links)),
        **_stored("curves", _curves(records)),
    }
    sums = "".join(f"{hashlib.sha256(content).hexdigest()}  {name}\n" for name, content in files.items())
    return _zipped({**files, "SHA256SUMS": sums.encode()})


def _readme(run: Run, links: Sequence[ChainLink]) -> bytes:
    lines = [f"  run {run.number}, sample {run.sample.number}, {run.method_version}, {run.state}"]
    for link in links:
        against = f"{link.substance} {link.standard}, {link.certificate}" if link.standard else "the next line"
        lines.append(f"  {link.via}: standardization {link.number} of lot {link.lot}, {link.state}, against {against}")
    return README.format(number=run.number, chain="\n".join(lines)).encode()


def _provenance(run: Run, links: Sequence[ChainLink], signatures: Sequence[Signature]) -> bytes:
    document = provenance_of_run(run, links, instruments=instruments_on_chain(run, links), signatures=signatures)
    return json.dumps(document, indent=1, ensure_ascii=False).encode()


def _trail(records: Iterable[Run | Standardization]) -> Iterable[Sequence[object]]:
    for record in records:
        for line in sentences_about(record, parts=replicates_of(record)):
            clock = "yes" if line.is_simulated else "no"
            yield (
                record.number, line.event_id, line.at.isoformat(), clock, line.actor, line.sentence,
                "; ".join(line.details), line.reason,
            )  # fmt: skip


def _signatures(signatures: Sequence[Signature]) -> dict[str, bytes]:
    named = ((f"{_safe(item.record_number)}-{_safe(item.meaning)}", item) for item in signatures)
    return {f"signatures/{name}-{item.content_sha256}.json": item.content.encode() for name, item in named}


def _calculations(records: Iterable[Run | Standardization]) -> dict[str, bytes]:
    files: dict[str, bytes] = {}
    for record in records:
        for item in Calculation.objects.filter(**{record._meta.model_name or "run": record}).order_by("number"):
            name = f"calculations/{_safe(record.number)}-{item.number}"
            files[f"{name}-inputs.json"] = item.inputs.encode()
            files[f"{name}-outputs.json"] = json.dumps(item.outputs, indent=1, sort_keys=True).encode()
    return files


def _certificates(run: Run, links: Sequence[ChainLink]) -> list[StoredFile]:
    ids = {link.certificate_id for link in links} | {
        used.calibration.certificate_id for used in instruments_on_chain(run, links)
    }
    return list(StoredFile.objects.filter(pk__in=[key for key in ids if key]).order_by("pk"))


def _curves(records: Iterable[Run | Standardization]) -> list[StoredFile]:
    ids = [item.curve.file_id for record in records for item in replicates_of(record) if item.curve]
    return list(StoredFile.objects.filter(pk__in=ids).order_by("pk"))


def _stored(folder: str, files: Iterable[StoredFile]) -> dict[str, bytes]:
    """The number in front keeps two files of one name apart."""
    return {f"{folder}/{file.pk}-{_safe(file.name)}": bytes(file.content) for file in files}


def _safe(name: str) -> str:
    """A name that leads into no other folder on any system."""
    return re.sub(r"[^\w.+-]", "_", name, flags=re.ASCII).lstrip(".") or "file"


def _zipped(files: dict[str, bytes]) -> bytes:
    out = io.BytesIO()
    with zipfile.ZipFile(out, "w", zipfile.ZIP_DEFLATED) as archive:
        for name, content in files.items():
            entry = zipfile.ZipInfo(name, date_time=LONG_AGO)
            entry.compress_type, entry.external_attr = zipfile.ZIP_DEFLATED, 0o644 << 16
            archive.writestr(entry, content)
    return out.getvalue()
