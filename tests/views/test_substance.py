"""Pages of substances, and what all pages of the registers share."""

from __future__ import annotations

import pytest

from labrecords.models import Substance, User
from tests.factories.register import some_substance
from tests.support.trail import all_records, one_event

pytestmark = pytest.mark.django_db
TYPED = {"name": "silver nitrate", "formula": "AgNO3", "hazards": ["oxidizer", "stains"], "density": "4,35"}


def test_home_counts_every_register(client, supervisor: User) -> None:
    some_substance(supervisor)
    client.force_login(supervisor)
    page = client.get("/register/").content.decode()
    for place in (
        "substances",
        "instruments",
        "standards",
        "titrants",
        "lots",
        "methods",
        "products",
        "people",
    ):
        assert f'href="/{place}/"' in page


def test_record_shows_the_substance_it_recorded(client, supervisor: User) -> None:
    client.force_login(supervisor)
    with one_event("substance.record"):
        answer = client.post("/substances/record/", TYPED, follow=True)
    page = answer.content.decode()
    assert "169.87" in page  # g/mol, from memory of the label
    assert "Oxidizer: keep it away from organic matter" in page
    assert "recorded substance silver nitrate" in page


def test_record_keeps_what_was_typed_when_refused(client, supervisor: User) -> None:
    some_substance(supervisor, name="silver nitrate", formula="AgNO3")
    client.force_login(supervisor)
    before = all_records()
    answer = client.post("/substances/record/", TYPED)
    assert answer.status_code == 409
    assert "silver nitrate is in the register already" in answer.content.decode()
    assert 'value="AgNO3"' in answer.content.decode()
    assert all_records() == before


def test_record_names_the_field_that_is_wrong(client, supervisor: User) -> None:
    client.force_login(supervisor)
    answer = client.post("/substances/record/", TYPED | {"density": "heavy"})
    assert answer.status_code == 400
    assert "Density, g/cm³ is “heavy”, which is not a number" in answer.content.decode()


def test_record_escapes_what_was_typed(client, supervisor: User) -> None:
    client.force_login(supervisor)
    client.post("/substances/record/", TYPED | {"name": "<script>alert(1)</script>"})
    page = client.get("/substances/").content.decode()
    assert "<script>alert(1)" not in page
    assert "&lt;script&gt;alert(1)" in page


def test_supersede_keeps_the_old_page(client, supervisor: User) -> None:
    old = some_substance(supervisor)
    client.force_login(supervisor)
    address = f"/substances/{old.pk}/supersede/"
    assert 'value="NaOH"' in client.get(address).content.decode()
    typed = {"name": "sodium hydroxide pellets", "formula": "NaOH", "reason": "bought as pellets"}
    with one_event("substance.supersede"):
        assert client.post(address, typed).status_code == 302
    page = client.get(f"/substances/{old.pk}/").content.decode()
    assert "sodium hydroxide pellets" in page
    assert "<q>bought as pellets</q>" in page
    assert f'href="{address}"' not in page


def test_detail_of_no_substance_is_not_found(client, supervisor: User) -> None:
    client.force_login(supervisor)
    assert client.get("/substances/999/").status_code == 404


def test_list_pages_and_asks_the_same_queries_for_one_and_for_many(
    client, supervisor: User, django_assert_num_queries
) -> None:
    some_substance(supervisor)
    client.force_login(supervisor)
    with django_assert_num_queries(6):  # session, person, count, rows, and two counts of what waits for review
        client.get("/substances/")
    for number in range(60):
        some_substance(supervisor, name=f"salt {number:02d}", formula="NaCl")
    with django_assert_num_queries(6):
        page = client.get("/substances/").content.decode()
    assert "1 to 50 of 61" in page
    assert "51 to 61 of 61" in client.get("/substances/", {"page": "2"}).content.decode()


def test_list_says_what_will_appear_when_it_is_empty(client, auditor: User) -> None:
    client.force_login(auditor)
    assert not Substance.objects.exists()
    page = client.get("/substances/").content.decode()
    assert "Record the first one; its molar mass comes from its formula." in page
    assert 'href="/substances/record/"' not in page
