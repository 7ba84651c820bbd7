"""Simulated titrations at the bench: what balance, burette and electrode would show, recorded by the services."""

from __future__ import annotations

import csv
import io
from dataclasses import dataclass, field
from decimal import Decimal as D
from typing import Any

import numpy as np

from analysis.simulate import grid, simulate_curve
from analysis.system import System
from labrecords.imports.curve import curve_fields, extract_curve
from labrecords.imports.mapping import propose_mapping
from labrecords.imports.table import read_table
from labrecords.management.demo.chemistry import ACETIC, CHLORIDE, EFFLUENT
from labrecords.management.demo.clock import Clock
from labrecords.management.demo.laboratory import Laboratory
from labrecords.models import Replicate, Run, Standardization, User
from labrecords.queries.calculation import latest_request
from labrecords.queries.replicate import replicates_of
from labrecords.services.calculation import claim_request, record_calculation
from labrecords.services.replicate import add_replicate, attach_curve, record_readings

KHP, NACL, CITRIC, CACO3, ACETIC_ACID = 204.222, 58.440, 192.123, 100.086, 60.052
CARBONATE_SHARE = 0.4  # of the effluent's alkalinity


@dataclass
class Bench:
    """One bench with its generator and the true concentration of every lot, which nobody in the lab knows."""

    lab: Laboratory
    clock: Clock
    generator: np.random.Generator
    true: dict[str, float] = field(default_factory=dict)

    def noise(self, sd: float) -> float:
        """One normal deviation."""
        return float(self.generator.normal(0.0, sd))

    def titrate(
        self, replicate: Replicate, titre: float, *, by: User, amount: str | None, burette: tuple[str, float]
    ) -> None:
        """Read the burette before and after, to its resolution, and keep the row."""
        identifier, capacity = burette
        resolution = float(self.lab.instruments[identifier].resolution)
        start = round(abs(self.noise(0.2)) / resolution) * resolution if titre < capacity - 1 else 0.0
        end = start + max(titre + self.noise(0.012), 0.0)
        places = len(str(self.lab.instruments[identifier].resolution.normalize()).partition(".")[2])
        places = max(places, 2)
        values: dict[str, Any] = {
            "start": D(f"{start:.{places}f}"),
            "end": D(f"{round(end / resolution) * resolution:.{places}f}"),
        }
        if amount is not None:
            values["amount"] = D(amount)
        if replicate.owner.rule.temperature_correction:
            values["temperature"] = D(f"{20.8 + self.noise(0.4):.1f}")
        self.clock.step(6)
        record_readings(replicate, by=by, values=values)

    def attach(
        self,
        replicate: Replicate,
        volume: np.ndarray,
        reading: np.ndarray,
        *,
        by: User,
        amount: str,
        header: tuple[str, str],
    ) -> None:
        """Write the instrument's file and keep it with the titration."""
        content = curve_file(volume, reading, header=header, comma=bool(self.generator.random() < 0.4))
        name = f"{replicate.owner.number}-{replicate.number}.csv"
        table = read_table(content, name=name)
        mapping = propose_mapping(table, wanted=header[1].split(" ")[0])
        curve = extract_curve(table, mapping=mapping)
        self.clock.step(9)
        record_readings(replicate, by=by, values={"amount": D(amount)})
        attach_curve(
            replicate, by=by, name=name, media_type="text/csv", content=content,
            curve=curve_fields(table, mapping=mapping, curve=curve),
        )  # fmt: skip

    def compute(self, record: Run | Standardization) -> None:
        """Do what the worker does."""
        request = latest_request(record)
        if request is not None and claim_request(request.pk):
            record_calculation(request.pk)

    def rows(self, record: Run | Standardization, kind: str) -> list[Replicate]:
        """The empty rows of a sheet."""
        return [item for item in replicates_of(record) if item.kind == kind]

    def another(self, record: Run | Standardization, *, by: User) -> Replicate:
        """One more titration."""
        return add_replicate(record, by=by, kind="sample")

    def weighed(self, nominal: float, *, sd: float = 0.03) -> float:
        """A mass about a nominal one, to 0.1 mg."""
        return round(nominal * (1 + self.noise(sd)), 4)

    def vinegar_curve(self, content: float, titrant: str) -> tuple[np.ndarray, np.ndarray]:
        """pH curve of 2 mL of vinegar [g/100 mL]."""
        amount = content * 10 / ACETIC_ACID * 2.0
        system = System.from_json(ACETIC | {"titrant_concentration": self.true[titrant], "sample_volume": 60.0})
        near = amount / self.true[titrant]
        volume = grid(end=near * 1.5, near=near, coarse=0.5, fine=0.1)
        return volume, simulate_curve(
            system, amounts=np.array([amount]), volumes=volume, generator=self.generator, noise=0.006,
            offset=self.noise(0.015), slope=0.99,
        )  # fmt: skip

    def effluent_curve(self, alkalinity: float, titrant: str) -> tuple[np.ndarray, np.ndarray]:
        """pH curve of 100 mL of effluent [mg/L as CaCO3]."""
        amount = alkalinity / CACO3 / 1000 * 2 * 100
        system = System.from_json(EFFLUENT | {"titrant_concentration": self.true[titrant], "sample_volume": 100.0})
        near = amount / self.true[titrant]
        end, first = near * 1.4 + 0.6, near * CARBONATE_SHARE / 2
        both = [grid(end=end, near=at, coarse=0.25, fine=0.05, width=0.5) for at in (first, near)]
        volume = np.unique(np.round(np.concatenate(both) / 0.05)) * 0.05
        return volume, simulate_curve(
            system, amounts=amount * np.array([CARBONATE_SHARE / 2, 1 - CARBONATE_SHARE]), volumes=volume,
            generator=self.generator, noise=0.008, offset=self.noise(0.01),
        )  # fmt: skip

    def brine_curve(self, content: float, titrant: str) -> tuple[np.ndarray, np.ndarray]:
        """Potential curve of 10 mL of brine [g/L] diluted 5 to 100 mL."""
        return self.chloride_curve(content / NACL * 5 / 100 * 10, self.true[titrant])

    def chloride_curve(self, amount: float, true: float) -> tuple[np.ndarray, np.ndarray]:
        """Potential curve of an amount of chloride [mmol] against silver nitrate of a true concentration [mol/L]."""
        system = System.from_json(CHLORIDE | {"titrant_concentration": true, "sample_volume": 60.0})
        near = amount / true
        volume = grid(end=near * 1.5, near=near, coarse=0.4, fine=0.1)
        return volume, simulate_curve(
            system, amounts=np.array([amount]), volumes=volume, standard=550.0, generator=self.generator, noise=0.5,
            offset=self.noise(3),
        )  # fmt: skip


def curve_file(volume: np.ndarray, reading: np.ndarray, *, header: tuple[str, str], comma: bool) -> bytes:
    """A text file as an instrument writes it; with a decimal comma the columns are cut by semicolons."""
    places = 3 if header[1].startswith("pH") else 1
    out = io.StringIO()
    writer = csv.writer(out, delimiter=";" if comma else ",", lineterminator="\r\n")
    writer.writerow(header)
    for v, y in zip(volume, reading, strict=True):
        row = [f"{v:.3f}", f"{y:.{places}f}"]
        writer.writerow([text.replace(".", ",") for text in row] if comma else row)
    return out.getvalue().encode("utf-8")
