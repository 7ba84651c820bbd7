"""What rests on what: walked by recursive SQL, up to certificates and down to batches."""

from __future__ import annotations

from django.db import connection

DOWN_FROM_STANDARDIZATIONS = """
WITH RECURSIVE resting (id) AS (
    SELECT id FROM labrecords_standardization WHERE id = ANY (%s)
    UNION
    SELECT below.id FROM labrecords_standardization AS below JOIN resting ON below.against_id = resting.id
)
"""


def standardizations_resting_on(ids: list[int]) -> list[int]:
    """The given standardizations and every one that rests on them through other titrants."""
    with connection.cursor() as cursor:
        cursor.execute(DOWN_FROM_STANDARDIZATIONS + "SELECT id FROM resting ORDER BY id", [ids])
        return [row[0] for row in cursor.fetchall()]


def runs_resting_on(ids: list[int]) -> list[int]:
    """Every run whose titrant or excess solution has its concentration, at any remove, from these."""
    with connection.cursor() as cursor:
        cursor.execute(
            DOWN_FROM_STANDARDIZATIONS
            + "SELECT run.id FROM labrecords_run AS run WHERE run.standardization_id IN (SELECT id FROM resting)"
            " OR run.excess_standardization_id IN (SELECT id FROM resting) ORDER BY run.id",
            [ids],
        )
        return [row[0] for row in cursor.fetchall()]
