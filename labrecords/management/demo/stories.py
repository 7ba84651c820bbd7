"""What an auditor may find in the demo: an overrun, results out of specification, a standard withdrawn, a drift."""

from __future__ import annotations

from datetime import date
from typing import TYPE_CHECKING

from labrecords.management.demo.work import Team, begin_run, do_run, receive, release, titrate_run
from labrecords.models import Conclusion, Investigation, Question, Run, TitrantLot, User
from labrecords.rules.calculation import objections_to_latest_calculation
from labrecords.rules.investigation import CHECKLIST
from labrecords.services.batch import reject_batch
from labrecords.services.investigation import assess_investigation, close_investigation, plan_retests
from labrecords.services.question import answer_question
from labrecords.services.replicate import exclude_replicate
from labrecords.services.run import approve_run, submit_run
from labrecords.services.standard import withdraw_standard
from labrecords.services.titrant import withdraw_lot

if TYPE_CHECKING:
    from labrecords.management.demo.history import History

LEAST_DAYS = 180  # a shorter history has no room for the stories
DAYS_BEFORE_END = {
    100: "overrun",
    82: "cause_found",
    51: "confirmed",
    16: "drift_noticed",
    9: "standard_withdrawn",
}


def tell(history: History, day: date, team: Team, *, days_left: int) -> None:
    """Tell the story of a working day, if it has one."""
    name = DAYS_BEFORE_END.get(days_left)
    if name is not None:
        globals()[name](history, day, team)


def overrun(history: History, day: date, team: Team) -> None:
    """A titration runs past its endpoint; it is excluded with its cause and another is made."""
    bench = history.bench
    batch, sample = receive(bench, "TV", history.batch_number("TV", day), by=team.analyst, made_on=day, size="6 000 L")
    run = begin_run(bench, sample, "TA-VIN", by=team.analyst, lots=history.lots)
    lot = history.lots["NaOH-0.1"].number
    first = bench.rows(run, "sample")[0]
    bench.titrate(
        first,
        6.21 * 10 / 60.052 * 2 / bench.true[lot] + 0.9,
        by=team.analyst,
        amount="10",
        burette=("B-07", 50.0),
    )
    exclude_replicate(
        first,
        by=team.analyst,
        cause="overrun",
        sentence="The tap was closed late, the solution was deep magenta.",
    )
    bench.another(run, by=team.analyst)
    for blank in bench.rows(run, "blank"):
        bench.titrate(blank, 0.03, by=team.analyst, amount=None, burette=("B-07", 50.0))
    for row in [item for item in bench.rows(run, "sample") if not item.is_excluded]:
        bench.titrate(
            row,
            6.21 * 10 / 60.052 * 2 / bench.true[lot] + 0.03,
            by=team.analyst,
            amount="10",
            burette=("B-07", 50.0),
        )
    bench.compute(run)
    _finish(history, run, team)
    release(bench, batch, team)


def cause_found(history: History, day: date, team: Team) -> None:
    """Out of specification; the wrong pipette is found; the run is void and the test repeated."""
    bench, supervisor = history.bench, _other(history, team)
    batch, sample = receive(bench, "TV", history.batch_number("TV", day), by=team.analyst, made_on=day, size="6 000 L")
    run = do_run(bench, sample, "TA-VIN", team, content=5.55, lots=history.lots)
    investigation = Investigation.objects.get(run=run)
    _assess(
        history,
        investigation,
        by=supervisor,
        instruments=("no", "The aliquot was taken with a 25 mL pipette that had been filled to an old mark."),
    )
    close_investigation(
        investigation, by=supervisor, credentials=bench.lab.credentials(supervisor.username),
        conclusion=Conclusion.ASSIGNABLE_CAUSE, cause="The aliquot pipette was filled to a wrong mark.",
        text=("The pipette and the bench note agree: the aliquot was "
"about ten per cent short. The run is void and repeated."),
    )  # fmt: skip
    bench.clock.step(30)
    again = do_run(bench, sample, "TA-VIN", team, content=6.19, lots=history.lots)
    history.runs += 2
    if again.state == "approved":
        release(bench, batch, Team(team.analyst, supervisor))


def confirmed(history: History, day: date, team: Team) -> None:
    """Out of specification; no laboratory error; the planned retests confirm it; the batch is rejected."""
    bench, supervisor = history.bench, _other(history, team)
    credentials = bench.lab.credentials(supervisor.username)
    batch, sample = receive(bench, "DP", history.batch_number("DP", day), by=team.analyst, made_on=day, size="800 kg")
    run = do_run(bench, sample, "CIT-DSC", team, content=92.3, lots=history.lots)
    investigation = Investigation.objects.get(run=run)
    _assess(history, investigation, by=supervisor)
    plan_retests(
        investigation, by=supervisor, credentials=credentials, retests=2,
        plan=("Two retests from the same container by the other analyst; "
"the result is confirmed when either is below the limit."),
    )  # fmt: skip
    other = history.bench.lab.people["tbrandvold" if team.analyst.username == "icastell" else "icastell"]
    for content in (92.2, 92.4):
        investigation.refresh_from_db()
        retest = do_run(
            bench,
            sample,
            "CIT-DSC",
            Team(other, supervisor),
            content=content,
            lots=history.lots,
            retest_for=investigation,
        )
        approve_run(retest, by=supervisor, credentials=credentials)
        history.runs += 1
    close_investigation(
        investigation, by=supervisor, credentials=credentials, conclusion=Conclusion.CONFIRMED,
        text="No laboratory error was found and both planned retests are below the limit. The result stands.",
    )  # fmt: skip
    approve_run(Run.objects.get(pk=run.pk), by=supervisor, credentials=credentials)
    reject_batch(
        batch,
        by=supervisor,
        credentials=credentials,
        reason="Citric acid is below 94.0 %, confirmed by two retests.",
    )
    history.runs += 1


def drift_noticed(history: History, day: date, team: Team) -> None:
    """The drifting lot is taken out of use; what rests on it is not doubtful, for it was restandardized."""
    supervisor = history.bench.lab.people["mokafor"]
    drifting = sorted(lot for lot in history.bench.true if lot.startswith("N"))[9]
    lot = TitrantLot.objects.get(number=drifting)
    if history.lots["NaOH-0.1"].pk == lot.pk or lot.state != "in use":
        return
    withdraw_lot(
        lot,
        by=supervisor,
        credentials=history.bench.lab.credentials("mokafor"),
        is_doubtful=False,
        reason=(
            "Its concentration fell week by week: the soda-lime tube was spent. Each week had its own standardization."
        ),
    )


def standard_withdrawn(history: History, day: date, team: Team) -> None:
    """The producer withdraws a lot of the primary standard; what rests on it is in question, some is re-evaluated."""
    bench, supervisor = history.bench, history.bench.lab.people["mokafor"]
    credentials = bench.lab.credentials("mokafor")
    standard = bench.lab.standards[f"KHP-{history.start:%y}-02"]
    withdraw_standard(
        standard,
        by=supervisor,
        credentials=credentials,
        reason="The producer reports moisture in part of this lot.",
    )
    for question in Question.objects.filter(answered_at__isnull=True).order_by("id")[:12]:
        bench.clock.step(4)
        answer_question(
            question, by=supervisor, credentials=credentials,
            answer=("The bottle was dried at 120 °C before use, and "
"control results of these days lie within their limits."),
        )  # fmt: skip


def _finish(history: History, run: Run, team: Team) -> None:
    bench = history.bench
    while objections_to_latest_calculation(run):
        row = bench.another(run, by=team.analyst)
        lot = history.lots["NaOH-0.1"].number
        bench.titrate(
            row,
            6.21 * 10 / 60.052 * 2 / bench.true[lot] + 0.03,
            by=team.analyst,
            amount="10",
            burette=("B-07", 50.0),
        )
        bench.compute(run)
    submit_run(run, by=team.analyst, credentials=bench.lab.credentials(team.analyst.username))
    bench.clock.step(20)
    approve_run(run, by=team.supervisor, credentials=bench.lab.credentials(team.supervisor.username))
    history.runs += 1


def _assess(
    history: History, investigation: Investigation, *, by: User, instruments: tuple[str, str] = ("yes", "")
) -> None:
    history.bench.clock.step(45)
    checklist = {key: {"answer": "yes", "note": ""} for key in CHECKLIST}
    checklist["instruments"] = {"answer": instruments[0], "note": instruments[1]}
    assess_investigation(
        investigation, by=by, credentials=history.bench.lab.credentials(by.username), checklist=checklist,
        assessment="Sheet, bench note, glassware and the analyst's account were compared on the same day.",
    )  # fmt: skip
    investigation.refresh_from_db()


def _other(history: History, team: Team) -> User:
    return history.bench.lab.people["phalloran" if team.supervisor.username == "mokafor" else "mokafor"]


def today(history: History, day: date) -> None:
    """The morning that is left in the middle of work: samples wait, a run is open, one waits for review."""
    bench, people = history.bench, history.bench.lab.people
    team = Team(people["icastell"], people["mokafor"])
    history.titrants(day, team)
    for product, urgent in (("TV", True), ("EF", False), ("PB", False)):
        bench.clock.step(7)
        receive(
            bench,
            product,
            history.batch_number(product, day),
            by=team.analyst,
            made_on=day,
            size="",
            urgent=urgent,
        )
    _, sample = receive(bench, "DP", history.batch_number("DP", day), by=team.analyst, made_on=day, size="800 kg")
    do_run(bench, sample, "CIT-DSC", team, content=96.0, lots=history.lots, approve=False)
    _, sample = receive(bench, "TV", history.batch_number("TV", day), by=team.analyst, made_on=day, size="6 000 L")
    do_run(bench, sample, "TA-VIN", team, content=6.62, lots=history.lots)
    _, sample = receive(bench, "TV", history.batch_number("TV", day), by=team.analyst, made_on=day, size="6 000 L")
    run = begin_run(bench, sample, "TA-VIN", by=team.analyst, lots=history.lots)
    for row in bench.rows(run, "sample")[:1]:
        bench.titrate(row, 20.7, by=team.analyst, amount="10", burette=("B-07", 50.0))
    bench.compute(run)
    history.runs += 3


__all__ = ["tell", "titrate_run", "today"]
