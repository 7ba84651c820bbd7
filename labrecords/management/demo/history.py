"""Six months of work, day by day, with a few stories to find."""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import dataclass, field
from datetime import date, timedelta

from labrecords.management.demo import stories
from labrecords.management.demo.bench import Bench
from labrecords.management.demo.laboratory import record_standard_lot
from labrecords.management.demo.second_bench import SecondBench
from labrecords.management.demo.work import Team, do_run, prepare_lot, receive, release, standardize
from labrecords.models import Batch, TitrantLot
from labrecords.services.batch import record_sample
from labrecords.services.titrant import expire_lot

LOT_EVERY = {"NaOH-0.1": 14, "HCl-0.1": 20, "AgNO3-0.1": 22}
PREFIX = {"NaOH-0.1": "N", "HCl-0.1": "H", "AgNO3-0.1": "A"}
SIZES = {"TV": "6 000 L", "PV": "2 500 L", "PB": "4 000 L", "DP": "800 kg", "EF": "1 day", "SL": "1 skip"}
TESTS = {"TV": "TA-VIN", "PV": "TA-VIN-C", "PB": "CL-BRN", "DP": "CIT-DSC", "EF": "ALK-EFF", "SL": "CAC-SCL"}
USUAL = {
    "TV": (6.20, 0.045),
    "PV": (5.20, 0.04),
    "PB": (100.2, 1.1),
    "DP": (96.2, 0.6),
    "EF": (205.0, 38.0),
    "SL": (87.5, 2.2),
}
SECOND_BENCH = ("EF", "PB", "SL")  # worked on beside the first, so that both cores fill the demo
DRIFTING_LOT = 9  # the tenth lot of sodium hydroxide takes up carbon dioxide


@dataclass
class History:
    """What stands in the laboratory on the day that is being lived."""

    bench: Bench
    start: date
    end: date
    say: Callable[[str], None]
    lots: dict[str, TitrantLot] = field(default_factory=dict)
    counts: dict[str, int] = field(default_factory=dict)
    standardized: dict[str, date] = field(default_factory=dict)
    runs: int = 0

    def live(self, beside: SecondBench) -> None:
        """Every working day from the first to the last but one; the last is left as a bench in the middle of work."""
        days = [self.start + timedelta(days=n) for n in range((self.end - self.start).days)]
        working = [day for day in days if day.weekday() < 5]
        for position, day in enumerate(working):
            self.bench.clock.to(day, 7, 30)
            team = self.team(position)
            self.standards(day)
            self.titrants(day, team)
            beside.begin(
                self.bench.clock.now,
                position,
                lots={code: lot.pk for code, lot in self.lots.items()},
                true=self.bench.true,
            )
            self.samples(day, position, team, second=False)
            if (self.end - self.start).days >= stories.LEAST_DAYS:
                stories.tell(self, day, team, days_left=len(working) - position)
            self.runs += beside.end()
            if position % 10 == 9:
                self.say(f"{day:%d %b %Y}: {self.runs} runs, {sum(self.counts.values())} titrant lots")

    def team(self, position: int) -> Team:
        """Analysts and supervisors take turns."""
        people = self.bench.lab.people
        analyst = people["icastell" if position % 2 else "tbrandvold"]
        return Team(analyst=analyst, supervisor=people["mokafor" if position % 3 else "phalloran"])

    def standards(self, day: date) -> None:
        """New lots of primary standards as they are needed."""
        plan = [
            ("KHP-1", 0, "0.9998"),
            ("NACL-1", 0, "0.9995"),
            ("KHP-2", 118, "0.9997"),
            ("KHP-3", 146, "0.9998"),
        ]
        for label, after, purity in plan:
            number = f"{label.split('-')[0]}-{self.start:%y}-0{label[-1]}"
            if number not in self.bench.lab.standards and day >= self.start + timedelta(days=after):
                substance = "sodium chloride" if label.startswith("NACL") else "potassium hydrogen phthalate"
                record_standard_lot(self.bench.lab, number, substance, received=day - timedelta(days=2), purity=purity)

    def khp(self) -> str:
        """The newest lot of potassium hydrogen phthalate."""
        return max(number for number in self.bench.lab.standards if number.startswith("KHP"))

    def titrants(self, day: date, team: Team) -> None:
        """Prepare the lots that are due and standardize what must be."""
        for titrant, every in LOT_EVERY.items():
            count = self.counts.get(titrant, 0)
            if day >= self.start + timedelta(days=every * count):
                self.new_lot(titrant, count, day, team)
            elif titrant == "NaOH-0.1" and (day - self.standardized[titrant]).days >= self.interval():
                self.restandardize(titrant, day, team)

    def interval(self) -> int:
        """Days until sodium hydroxide is standardized again; a lot that drifts is watched more closely."""
        return 3 if self.counts["NaOH-0.1"] == DRIFTING_LOT + 1 else 7

    def new_lot(self, titrant: str, count: int, day: date, team: Team) -> None:
        """A fresh bottle with its first standardization."""
        before = self.lots.get(titrant)
        true = 0.1 * (1 + self.bench.noise(0.006))
        number = f"{PREFIX[titrant]}{day:%y}-{101 + sum(self.counts.values())}"
        self.lots[titrant] = prepare_lot(self.bench, titrant, number, by=team.analyst, true=true)
        self.counts[titrant] = count + 1
        self.restandardize(titrant, day, team)
        if before is not None and before.expires_on < day:
            expire_lot(before, by=team.analyst)

    def restandardize(self, titrant: str, day: date, team: Team) -> None:
        """Standardize the lot in use again; the drifting one has lost a little."""
        lot = self.lots[titrant]
        if titrant == "NaOH-0.1" and self.counts[titrant] == DRIFTING_LOT + 1:
            self.bench.true[lot.number] *= 0.9955 if titrant in self.standardized else 1.0
        if titrant == "HCl-0.1":
            standardize(self.bench, lot, team, against=self.lots["NaOH-0.1"])
        else:
            standard = self.khp() if titrant == "NaOH-0.1" else f"NACL-{self.start:%y}-01"
            standardize(self.bench, lot, team, standard=standard)
        self.standardized[titrant] = day

    def samples(self, day: date, position: int, team: Team, *, second: bool) -> None:
        """The day's batches of one bench, and once a week its control sample."""
        wanted = ["EF", *(["TV"] if position % 2 else ["PB"] if position % 4 == 0 else ["DP"])]
        wanted += {0: ["PV"], 2: ["SL"], 3: ["DP"], 4: ["PB"]}.get(day.weekday(), [])
        for product in wanted:
            if (product in SECOND_BENCH) == second:
                self.bench.clock.step(12)
                self.batch(product, day, team)
        if day.weekday() == 1:
            code, method, value = ("CS-BRN", "CL-BRN", 100.4) if second else ("CS-VIN", "TA-VIN", 6.203)
            self.control(code, method, value, day, team)

    def batch(self, product: str, day: date, team: Team) -> Batch:
        """One batch from its receipt to its release."""
        mean, sd = USUAL[product]
        low, high = mean - 2.2 * sd, mean + 2.2 * sd
        content = min(max(mean + self.bench.noise(sd), low), high)
        batch, sample = receive(
            self.bench,
            product,
            self.batch_number(product, day),
            by=team.analyst,
            made_on=day,
            size=SIZES[product],
        )
        do_run(self.bench, sample, TESTS[product], team, content=content, lots=self.lots)
        self.runs += 1
        return release(self.bench, batch, team)

    def control(self, code: str, method: str, value: float, day: date, team: Team) -> None:
        """A control sample, run like any other."""
        sample = record_sample(
            by=team.analyst,
            number=f"{code}-{day:%y%m%d}",
            drawn_at=self.bench.clock.now,
            drawn_by=team.analyst.full_name,
            control_sample=self.bench.lab.controls[code],
        )
        do_run(self.bench, sample, method, team, content=value * (1 + self.bench.noise(0.0012)), lots=self.lots)
        self.runs += 1

    def batch_number(self, product: str, day: date) -> str:
        """Product, year and month, and a count: TV-2611-04."""
        key = f"{product}-{day:%y%m}"
        return f"{key}-{Batch.objects.filter(number__startswith=key).count() + 1:02d}"
