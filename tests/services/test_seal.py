"""The seal over the trail: the tree of RFC 9162, section 2.1.1, its marks and its anchors."""

from __future__ import annotations

import hashlib
import hmac
from datetime import UTC, datetime
from pathlib import Path

import pytest
from django.db import DatabaseError, connection, transaction
from hypothesis import given
from hypothesis import strategies as st

from labrecords.models import AuditCheckpoint, AuditEvent, AuditLeaf, User
from labrecords.queries.seal import leaf_hash, mark, root_hash
from labrecords.services import audit, seal
from labrecords.services.seal import anchor, seal_trail

# SHA-256 of nothing: FIPS 180-4, and RFC 9162 section 2.1.1 says that it is the hash of an empty list.
EMPTY = "e3b0c44298fc1c149afbf4c8996fb92427ae41e4649b934ca495991b7852b855"


def tree_hash(leaves: list[bytes]) -> bytes:
    """RFC 9162, section 2.1.1, as it is written: split at the largest power of two below n, and recurse."""
    if not leaves:
        return hashlib.sha256(b"").digest()
    if len(leaves) == 1:
        return leaves[0]
    k = 1
    while k * 2 < len(leaves):
        k *= 2
    return hashlib.sha256(b"\x01" + tree_hash(leaves[:k]) + tree_hash(leaves[k:])).digest()


@pytest.fixture(autouse=True)
def _anchor_file(settings, tmp_path: Path) -> None:
    settings.ANCHOR_FILE = tmp_path / "data" / "anchors.txt"


def test_root_hash_of_an_empty_tree_is_the_hash_of_nothing() -> None:
    assert root_hash([]).hex() == EMPTY


def test_root_hash_of_one_leaf_is_the_leaf() -> None:
    """Of no data: the first test vector that Certificate Transparency logs share (from memory)."""
    leaf = hashlib.sha256(b"\x00").digest()
    assert leaf.hex() == "6e340b9cffb37a989ca544e6bb780a2c78901d3fb33738768511a30617afa01d"
    assert root_hash([leaf]) == leaf


@pytest.mark.parametrize("count", range(34))
def test_root_hash_is_that_of_the_definition(count: int) -> None:
    leaves = [hashlib.sha256(bytes([0, place])).digest() for place in range(count)]
    assert root_hash(leaves) == tree_hash(leaves)


@given(st.lists(st.binary(min_size=32, max_size=32), max_size=80))
def test_root_hash_of_any_leaves_is_that_of_the_definition(leaves: list[bytes]) -> None:
    assert root_hash(leaves) == tree_hash(leaves)


def test_mark_is_an_hmac_over_size_root_and_microseconds(settings) -> None:
    settings.SEALING_KEY = "a key"
    moment = datetime(2026, 11, 24, 9, 42, 16, 123456, tzinfo=UTC)
    micro = 1_795_513_336_123_456  # `date -u -d '2026-11-24 09:42:16' +%s` and the microseconds behind
    text = f"3 {EMPTY} {micro}".encode()
    assert mark(3, bytes.fromhex(EMPTY), moment) == hmac.digest(b"a key", text, "sha256")


@pytest.mark.django_db
def test_seal_trail_gives_every_event_the_next_place(analyst: User) -> None:
    checkpoint = seal_trail()
    assert checkpoint is not None
    events = list(AuditEvent.objects.order_by("id"))
    assert checkpoint.tree_size == len(events)
    assert list(AuditLeaf.objects.values_list("position", "event_id")) == [
        (place, event.pk) for place, event in enumerate(events)
    ]
    assert bytes(checkpoint.root_hash) == tree_hash([leaf_hash(event) for event in events])


@pytest.mark.django_db
def test_seal_trail_has_nothing_to_do_twice(analyst: User) -> None:
    assert seal_trail() is not None
    assert seal_trail() is None
    assert AuditCheckpoint.objects.count() == 1


@pytest.mark.django_db
def test_seal_trail_grows_the_tree_without_touching_what_is_sealed(analyst: User) -> None:
    seal_trail()
    before = [bytes(leaf.leaf_hash) for leaf in AuditLeaf.objects.all()]
    with audit.event("x.y", by=analyst):
        pass
    checkpoint = seal_trail()
    assert checkpoint is not None
    after = [bytes(leaf.leaf_hash) for leaf in AuditLeaf.objects.all()]
    assert after[:-1] == before
    assert bytes(checkpoint.root_hash) == tree_hash(after)


@pytest.mark.django_db
def test_seal_trail_seals_so_many_at_a_time(analyst: User, monkeypatch: pytest.MonkeyPatch) -> None:
    monkeypatch.setattr(seal, "MOST_EVENTS", 1)
    sizes = []
    while checkpoint := seal_trail():
        sizes.append(checkpoint.tree_size)
    assert sizes == list(range(1, AuditEvent.objects.count() + 1))


@pytest.mark.django_db
def test_leaf_hash_covers_every_change_of_its_event(analyst: User, as_enemy) -> None:
    event = AuditEvent.objects.get(changes__record_key=str(analyst.pk))
    before = leaf_hash(event)
    as_enemy('UPDATE labrecords_auditchange SET after = after || \'{"full_name": "x"}\'')
    assert leaf_hash(AuditEvent.objects.get(pk=event.pk)) != before


@pytest.mark.parametrize("table", ["auditleaf", "auditcheckpoint"])
@pytest.mark.django_db
def test_what_is_sealed_is_never_changed_by_the_site(analyst: User, table: str) -> None:
    seal_trail()
    for verb in (f"DELETE FROM labrecords_{table}", f"UPDATE labrecords_{table} SET id = 0"):
        with pytest.raises(DatabaseError), transaction.atomic(), connection.cursor() as cursor:
            cursor.execute(verb)


@pytest.mark.django_db
def test_anchor_is_a_line_of_size_root_time_and_mark(analyst: User, settings) -> None:
    checkpoint = seal_trail()
    assert checkpoint is not None
    anchor(checkpoint)
    anchor(checkpoint)
    first, second = settings.ANCHOR_FILE.read_text().splitlines()
    assert first == second
    size, root, moment, seal_mark = first.split()
    assert (int(size), bytes.fromhex(root)) == (checkpoint.tree_size, bytes(checkpoint.root_hash))
    assert datetime.fromisoformat(moment) == checkpoint.written_at
    assert bytes.fromhex(seal_mark) == bytes(checkpoint.mark)


@pytest.mark.django_db(transaction=True)
def test_seal_trail_anchors_after_the_checkpoint_is_safe(analyst: User, settings) -> None:
    checkpoint = seal_trail()
    assert checkpoint is not None
    assert settings.ANCHOR_FILE.read_text().startswith(f"{checkpoint.tree_size} ")
    assert settings.ANCHOR_FILE.stat().st_mode & 0o007 == 0


@pytest.mark.django_db(transaction=True)
def test_seal_trail_leaves_the_work_to_one_sealer(analyst: User) -> None:
    other = connection.copy()
    try:
        with other.cursor() as cursor:
            cursor.execute("SELECT pg_advisory_lock(%s)", [seal.LOCK])
            assert seal_trail() is None
            cursor.execute("SELECT pg_advisory_unlock(%s)", [seal.LOCK])
        assert seal_trail() is not None
    finally:
        other.close()
