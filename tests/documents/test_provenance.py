"""PROV-JSON: the names and the shape are those of the W3C member submission of 24 April 2013."""

from __future__ import annotations

import json
from datetime import datetime
from typing import Any

import pytest

from labrecords.documents.provenance import provenance_of_run
from labrecords.models import Run
from labrecords.queries.lineage import chain_up, instruments_on_chain, signatures_on_chain
from tests.factories.bench import Bench, approved_run, approved_standardization, started_run

pytestmark = pytest.mark.django_db
# PROV-JSON, section 3: the attributes that each relation takes, and the kind of record each names.
ENDS = {
    "used": {"prov:activity": "activity", "prov:entity": "entity"},
    "wasGeneratedBy": {"prov:entity": "entity", "prov:activity": "activity"},
    "wasAssociatedWith": {"prov:activity": "activity", "prov:agent": "agent"},
    "wasDerivedFrom": {"prov:generatedEntity": "entity", "prov:usedEntity": "entity"},
    "wasAttributedTo": {"prov:entity": "entity", "prov:agent": "agent"},
}


def document_of(run: Run) -> dict[str, Any]:
    links = chain_up(run_id=run.pk)
    document = provenance_of_run(
        run, links, instruments=instruments_on_chain(run, links), signatures=signatures_on_chain(run, links)
    )
    return json.loads(json.dumps(document))


@pytest.fixture
def run(bench: Bench) -> Run:
    approved_standardization(bench)
    return approved_run(bench)


def test_provenance_relations_name_records_of_the_document(run: Run) -> None:
    document = document_of(run)
    for relation, ends in ENDS.items():
        for row in document[relation].values():
            assert row.keys() == ends.keys()
            assert all(row[end] in document[kind] for end, kind in ends.items())


def test_provenance_holds_nothing_that_is_unknown(bench: Bench) -> None:
    approved_standardization(bench)
    document = document_of(started_run(bench))
    assert "null" not in json.dumps(document)
    assert "lab:value" not in next(iter(document["entity"].values()))


def test_provenance_derives_the_result_from_the_standard(run: Run, bench: Bench) -> None:
    document, reached = document_of(run), {f"lab:result/{run.number}"}
    derived = [tuple(row.values()) for row in document["wasDerivedFrom"].values()]
    for _ in derived:
        reached |= {used for generated, used in derived if generated in reached}
    standard = f"lab:standard/{bench.standard.number}"
    assert standard in reached
    assert document["entity"][standard]["lab:certificateSha256"] == bench.standard.certificate.sha256


def test_provenance_names_who_did_it_and_who_signed(run: Run, bench: Bench) -> None:
    document = document_of(run)
    people = {f"lab:person/{user.full_name.replace(' ', '_')}" for user in (bench.analyst, bench.supervisor)}
    assert set(document["agent"]) == people
    assert {row["prov:agent"] for row in document["wasAttributedTo"].values()} == people


def test_provenance_moments_say_their_zone(run: Run) -> None:
    for activity in document_of(run)["activity"].values():
        assert datetime.fromisoformat(activity["prov:startTime"]).tzinfo is not None


def test_provenance_names_each_calibration_once(run: Run) -> None:
    calibrations = [name for name in document_of(run)["entity"] if name.startswith("lab:calibration/")]
    assert sorted(name.split("/")[1] for name in calibrations) == ["B-07", "P-10", "W-01"]
