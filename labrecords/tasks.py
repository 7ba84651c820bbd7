"""What the worker does: ids in, one call, nothing else."""

from __future__ import annotations

from celery import shared_task

from labrecords.services import calculation, monte_carlo, seal


@shared_task(name="labrecords.tasks.compute_request")
def compute_request(request_id: int) -> None:
    """Compute one waiting request."""
    if calculation.claim_request(request_id):
        calculation.record_calculation(request_id)


@shared_task(name="labrecords.tasks.sweep_waiting")
def sweep_waiting() -> None:
    """Compute what a lost message left waiting."""
    for request_id in calculation.overdue_requests():
        compute_request.delay(request_id=request_id)
    for check_id in monte_carlo.overdue_checks():
        check_by_monte_carlo.delay(check_id=check_id)


@shared_task(name="labrecords.tasks.check_by_monte_carlo")
def check_by_monte_carlo(check_id: int) -> None:
    """Check one result by drawing its inputs."""
    monte_carlo.do_check(check_id)


@shared_task(name="labrecords.tasks.seal_trail")
def seal_trail() -> None:
    """Seal the events that are new."""
    seal.seal_trail()
