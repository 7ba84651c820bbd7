"""Sheets with two endpoints and with a temperature: what is read has its cell, what is told is there."""

from __future__ import annotations

from decimal import Decimal as D

import pytest

from labrecords.errors import Refused
from labrecords.models import Replicate, Run
from labrecords.services.method import record_version
from labrecords.services.product import record_product, record_specification
from labrecords.services.replicate import record_readings
from labrecords.services.run import submit_run
from tests.factories.bench import Bench, approved_standardization, compute, set_up_bench, some_version, started_run
from tests.factories.people import signed_by
from tests.factories.products import some_batch, some_product, submitted_run_of

pytestmark = pytest.mark.django_db

MASS = {"substance": "acetic acid", "formula": "C2H4O2", "molar_mass": "60.052", "u": "0.001"}
PARTS = [
    {"name": "stronger acid", "takes": "first", "ratio": "1", **MASS},
    {"name": "weaker acid", "takes": "second less first", "ratio": "1", **MASS},
]


@pytest.fixture
def bench(analyst, supervisor) -> Bench:
    bench = set_up_bench(analyst, supervisor)
    approved_standardization(bench)
    return bench


@pytest.fixture
def run(bench) -> Run:
    return started_run(bench, parts=PARTS, temperature_correction=True, temperature_within=D("0.5"))


def read(run: Run, *, by, first: str | None = "4.00", temperature: str | None = "22.0") -> None:
    for row in run.replicates.filter(kind="sample"):
        values = {"amount": D("10.00"), "start": D("0.00"), "end": D("12.30")}
        values |= {"first_end": D(first)} if first else {}
        values |= {"temperature": D(temperature)} if temperature else {}
        record_readings(row, by=by, values=values)
    for row in run.replicates.filter(kind="blank"):
        record_readings(row, by=by, values={"start": D("0.00"), "end": D("0.05"), "temperature": D("22.0")})


def test_sheet_has_a_cell_for_each_reading(client, run, analyst) -> None:
    client.force_login(analyst)
    page = client.get(f"/runs/{run.number}/").content.decode()
    row = run.replicates.filter(kind="sample")[0]
    assert "First endpoint, mL" in page
    assert "Second endpoint, mL" in page
    assert f'name="first_end-{row.pk}"' in page
    assert f'name="temperature-{row.pk}"' in page


def test_two_endpoints_become_two_results_with_their_uncertainty(client, run, analyst) -> None:
    read(run, by=analyst)
    compute(run)
    outputs = run.calculations.get().outputs
    stronger, weaker = (part["value"] for part in outputs["parts"])
    # The first 4.00 mL of 12.25 mL net belong to the stronger acid, and the whole is both.
    assert stronger / (stronger + weaker) == pytest.approx(3.98 / 12.23, rel=0.01)
    assert stronger + weaker == pytest.approx(outputs["value"], rel=0.01)
    assert all(part["U"] > 0 for part in outputs["parts"])
    client.force_login(analyst)
    assert "Weaker acid" in client.get(f"/runs/{run.number}/").content.decode()


def test_cells_are_kept_one_by_one(client, run, analyst) -> None:
    client.force_login(analyst)
    row = run.replicates.filter(kind="sample")[0]
    for field, typed in (("first_end", "4,00"), ("temperature", "22.0")):
        assert client.post(f"/replicates/{row.pk}/{field}/", {f"{field}-{row.pk}": typed}).status_code == 200
    row = Replicate.objects.get(pk=row.pk)
    assert (str(row.first_end), str(row.temperature)) == ("4.00", "22.0")


@pytest.mark.parametrize(
    ("field", "typed", "remark"),
    [
        ("amount", "17.00", "Sample amount is 17.00 mL, more than 50 % away from the usual 10 mL."),
        ("temperature", "33.0", "a laboratory is usually at 15 to 30"),
        ("end", "12.3", "End is 12.3 mL with one decimal; the burette is read to 2."),
        ("amount", "10.00", ""),
    ],
)
def test_unusual_reading_is_kept_with_a_remark(client, run, analyst, field, typed, remark) -> None:
    client.force_login(analyst)
    row = run.replicates.filter(kind="sample")[0]
    answer = client.post(f"/replicates/{row.pk}/{field}/", {f"{field}-{row.pk}": typed})
    assert answer.status_code == 200
    assert remark in answer.json()["remark"]
    assert bool(remark) == bool(answer.json()["remark"])


def test_submitting_without_the_first_endpoint_is_refused(run, analyst) -> None:
    read(run, by=analyst, first=None)
    compute(run)
    with pytest.raises(Refused, match="need the first and the second"):
        submit_run(run, by=analyst, credentials=signed_by(analyst))


def test_submitting_without_the_temperature_is_refused(run, analyst) -> None:
    read(run, by=analyst, temperature=None)
    compute(run)
    with pytest.raises(Refused, match="temperature of titration 1, titration 2, titration 3 is not entered"):
        submit_run(run, by=analyst, credentials=signed_by(analyst))


def test_first_endpoint_lies_between_start_and_end(run, analyst) -> None:
    row = run.replicates.filter(kind="sample")[0]
    record_readings(row, by=analyst, values={"start": D("1.00"), "end": D("9.00")})
    for typed, sentence in (("0.50", "First endpoint is 0.50 mL, below the start"), ("9.50", "End is 9.00 mL, below")):
        with pytest.raises(Refused, match=sentence):
            record_readings(row, by=analyst, values={"first_end": D(typed)})


@pytest.mark.parametrize(
    ("recipe", "sentence"),
    [
        ({"parts": [{**PARTS[0], "takes": "third"}]}, "stronger acid takes 'third': one of first, second"),
        ({"parts": [{**PARTS[0], "ratio": "0"}]}, "Ratio is 0"),
        ({"parts": PARTS, "titration": "blank_difference"}, "need a direct titration"),
        ({"temperature_within": D(40)}, "Temperature known within is 40 °C"),
        ({"sample_density": D("1.2")}, "this sample is by volume"),
        ({"sample_density": D(1630)}, "Is it in kg/m³"),
        ({"loss_u": D(-1)}, "u of the loss on drying"),
        ({"agreement_limit": D(0)}, "Families may differ by 0"),
    ],
)
def test_recipe_that_does_not_hang_together_is_refused(bench, supervisor, recipe, sentence) -> None:
    version = some_version(bench)
    kept = {
        field.name: getattr(version, field.name)
        for field in version._meta.fields
        if field.name not in ("id", "method", "number", "state", "effective_from", "reason")
    }
    with pytest.raises(Refused, match=sentence):
        record_version(version.method, by=supervisor, reason="try", **kept | recipe)


def test_method_is_recorded_with_lines_of_parts(client, bench, supervisor) -> None:
    version = some_version(bench)
    client.force_login(supervisor)
    typed = {
        "reason": "two acids", "titrant": version.titrant_id, "expressed_as": version.expressed_as_id,
        "titration": "direct", "ratio": "1", "sample_by": "volume", "sample_amount": "10", "endpoint": "indicator",
        "indicator": "two of them", "endpoints_expected": "1", "endpoint_chosen": "1", "blanks_needed": "0",
        "replicates_needed": "3", "policy": "all", "limit": "1", "limit_kind": "rsd_percent", "agreement_limit": "3",
        "quantity": "mass_concentration", "unit": "g/L", "places": "2", "basis": "as_is", "coverage": "k2",
        "temperature_within": "4",
        "parts": "stronger; first; acetic acid; 1\nweaker; second less first; acetic acid; 1",
    }  # fmt: skip
    address = f"/methods/{version.method.code}/versions/record/"
    assert client.post(address, typed | {"parts": "stronger; first"}).status_code == 400
    wrong = client.post(address, typed | {"parts": "stronger; first; unobtainium; 1"})
    assert "unobtainium” is no substance of the register" in wrong.content.decode()
    assert client.post(address, typed).status_code == 302
    newest = version.method.versions.order_by("-number")[0]
    assert [part["takes"] for part in newest.parts] == ["first", "second less first"]
    page = client.get(address).content.decode()
    assert "weaker; second less first; acetic acid; 1" in page


def test_result_is_rounded_to_significant_figures(bench, supervisor) -> None:
    version = some_version(bench)
    product = record_product(by=supervisor, code="LY", name="lye")
    row = {"method": version.method, "lower": D("0.70"), "upper": None, "unit": version.unit, "places": 2,
           "rounding": "half_up", "rule": "simple", "guard_factor": D(1)}  # fmt: skip
    with pytest.raises(Refused, match="significant figures are 0"):
        record_specification(product, by=supervisor, reason="try", limits=[{**row, "figures": 0}])
    sold = some_product(bench, version, figures=1)
    run = submitted_run_of(bench, some_batch(bench, sold), version)
    verdict = run.calculation.outputs["verdict"]
    assert verdict["rounded"] == "0.7"
    assert run.calculation.value == pytest.approx(0.735, abs=0.01)


def test_drift_is_read_and_taken_off_each_titre(client, bench, analyst) -> None:
    run = started_run(bench, drift_u=D("1"), blanks_needed=0)
    client.force_login(analyst)
    row = run.replicates.filter(kind="sample")[0]
    page = client.get(f"/runs/{run.number}/").content.decode()
    assert f'name="drift-{row.pk}"' in page
    assert "Duration, min" in page
    for item in run.replicates.filter(kind="sample"):
        record_readings(
            item, by=analyst,
            values={"amount": D("10.00"), "start": D("0.00"), "end": D("12.30"), "drift": D("20"), "minutes": D("5")},
        )  # fmt: skip
    compute(run)
    outputs = run.calculations.get().outputs
    assert [line["titre"] for line in outputs["titrations"]] == pytest.approx([12.20] * 3)
    assert any(line["key"] == "drift" for line in outputs["budget"])
