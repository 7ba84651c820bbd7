"""The same entry sent many times at once makes one record; the others are told that it is there."""

from __future__ import annotations

from collections.abc import Callable
from concurrent.futures import ThreadPoolExecutor
from typing import Any

import pytest
from django.db import connection

from labrecords.errors import Refused
from labrecords.models import (
    AuditEvent,
    Batch,
    ControlSample,
    Instrument,
    Method,
    Product,
    ReferenceStandard,
    Sample,
    Substance,
    Titrant,
    TitrantLot,
    User,
)  # fmt: skip
from labrecords.services.batch import record_batch
from labrecords.services.method import record_method
from labrecords.services.product import record_product
from labrecords.services.standard import issue_standard, withdraw_standard
from labrecords.services.user import record_user
from tests.factories.bench import Bench, some_sample, some_version
from tests.factories.people import PASSWORD, signed_by
from tests.factories.products import some_product
from tests.factories.register import (
    days_ago,
    phthalate,
    some_instrument,
    some_lot,
    some_standard,
    some_substance,
    some_titrant,
)

pytestmark = pytest.mark.django_db(transaction=True)
TIMES = 12


def at_once(service: Callable[[], Any]) -> list[str]:
    """Call it many times at once; the outcomes, sorted."""

    def one(_: int) -> str:
        try:
            service()
            return "done"
        except Refused as refusal:
            return refusal.reasons[0]
        finally:
            connection.close()

    with ThreadPoolExecutor(TIMES) as pool:
        return sorted(pool.map(one, range(TIMES)))


def test_record_substance_at_once_makes_one(supervisor: User) -> None:
    outcomes = at_once(lambda: some_substance(supervisor))
    assert outcomes.count("done") == 1
    assert {outcome for outcome in outcomes if outcome != "done"} == {
        "sodium hydroxide is in the register already. Supersede it under another name, or open it."
    }
    assert (Substance.objects.count(), AuditEvent.objects.filter(action="substance.record").count()) == (1, 1)


def test_record_instrument_at_once_makes_one(supervisor: User) -> None:
    assert at_once(lambda: some_instrument(supervisor)).count("done") == 1
    assert Instrument.objects.count() == 1


def test_record_standard_at_once_makes_one(analyst: User, supervisor: User) -> None:
    khp = phthalate(supervisor)
    assert at_once(lambda: some_standard(analyst, khp)).count("done") == 1
    assert ReferenceStandard.objects.count() == 1


def test_record_titrant_and_its_lot_at_once_make_one(analyst: User, supervisor: User) -> None:
    alkali, khp = some_substance(supervisor), phthalate(supervisor)
    assert at_once(lambda: some_titrant(supervisor, alkali, khp)).count("done") == 1
    titrant = Titrant.objects.get()
    assert at_once(lambda: some_lot(titrant, by=analyst)).count("done") == 1
    assert TitrantLot.objects.count() == 1


def test_record_user_at_once_makes_one(administrator: User) -> None:
    said = {"username": "lmarsh", "full_name": "Lena Marsh", "roles": ["analyst"], "password": PASSWORD}
    assert at_once(lambda: record_user(by=administrator, **said)).count("done") == 1
    assert User.objects.filter(username="lmarsh").count() == 1


def test_issue_standard_at_once_is_one_event(analyst: User, supervisor: User) -> None:
    standard = some_standard(analyst, phthalate(supervisor))
    outcomes = at_once(lambda: issue_standard(standard, by=supervisor))
    assert outcomes.count("done") == 1
    assert AuditEvent.objects.filter(action="standard.issue").count() == 1


def test_withdraw_standard_at_once_is_signed_once(bench: Bench) -> None:
    by = bench.supervisor
    outcomes = at_once(lambda: withdraw_standard(bench.standard, by=by, credentials=signed_by(by), reason="recalled"))
    assert outcomes.count("done") == 1
    assert outcomes.count("KHP-26-01 is withdrawn already.") == TIMES - 1


def test_record_method_and_product_at_once_make_one(supervisor: User) -> None:
    assert at_once(lambda: record_method(by=supervisor, code="TA", title="Titratable acidity")).count("done") == 1
    assert at_once(lambda: record_product(by=supervisor, code="TV", name="table vinegar")).count("done") == 1
    assert (Method.objects.count(), Product.objects.count()) == (1, 1)


def test_record_batch_and_control_sample_at_once_make_one(bench: Bench) -> None:
    version = some_version(bench)
    product = some_product(bench, version)
    batch = {"by": bench.analyst, "number": "TV-2611-04", "product": product, "made_on": days_ago(1)}
    assert at_once(lambda: record_batch(**batch)).count("done") == 1
    assert at_once(lambda: some_sample(bench, version)).count("done") == 1
    assert (Batch.objects.count(), Sample.objects.count(), ControlSample.objects.count()) == (1, 1, 1)
