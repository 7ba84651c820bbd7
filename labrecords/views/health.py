"""Is the site able to work?"""

from __future__ import annotations

from django.db import DatabaseError, connection
from django.db.migrations.executor import MigrationExecutor
from django.http import HttpRequest, JsonResponse
from django.views.decorators.http import require_GET


@require_GET
def check(request: HttpRequest) -> JsonResponse:
    """200 when the database answers and every migration is applied; 503 with a word otherwise."""
    try:
        executor = MigrationExecutor(connection)
        waiting = executor.migration_plan(executor.loader.graph.leaf_nodes())
    except DatabaseError:
        return JsonResponse({"database": "does not answer"}, status=503)
    if waiting:
        return JsonResponse({"database": "ok", "migrations": f"{len(waiting)} not applied"}, status=503)
    return JsonResponse({"database": "ok", "migrations": "applied"})
