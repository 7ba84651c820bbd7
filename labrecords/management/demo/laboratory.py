"""The people, reagents, instruments, methods and products of Marram Quay Laboratory. All of it is invented."""

from __future__ import annotations

from dataclasses import dataclass, field
from datetime import date, timedelta
from decimal import Decimal as D
from typing import Any

from labrecords.management.demo.certificate import certificate_pdf
from labrecords.management.demo.chemistry import CHLORIDE
from labrecords.models import (
    ControlSample,
    Instrument,
    Method,
    MethodVersion,
    Product,
    ReferenceStandard,
    Substance,
    Titrant,
    User,
)
from labrecords.services.control_sample import record_control_sample
from labrecords.services.instrument import record_calibration, record_instrument
from labrecords.services.method import make_version_effective, record_method, record_version
from labrecords.services.product import make_specification_effective, record_product, record_specification
from labrecords.services.signature import Credentials
from labrecords.services.standard import issue_standard, record_standard
from labrecords.services.substance import record_substance
from labrecords.services.titrant import record_titrant
from labrecords.services.user import record_first_administrator, record_user

PEOPLE = [
    ("icastell", "Ines Castell", ["analyst"]),
    ("tbrandvold", "Tomas Brandvold", ["analyst"]),
    ("mokafor", "Maren Okafor", ["supervisor"]),
    ("phalloran", "Piet Halloran", ["supervisor"]),
    ("rlindqvist", "Rhea Lindqvist", ["auditor"]),
]
ADMINISTRATOR = ("jachterberg", "Jonas Achterberg")

SUBSTANCES: list[tuple[str, str, list[str], str | None]] = [
    ("potassium hydrogen phthalate", "C8H5KO4", [], "1.636"),
    ("sodium chloride", "NaCl", [], "2.165"),
    ("sodium hydroxide", "NaOH", ["corrosive_base"], None),
    ("hydrochloric acid", "HCl", ["corrosive_acid"], None),
    ("silver nitrate", "AgNO3", ["oxidizer", "stains", "environment"], None),
    ("acetic acid", "C2H4O2", ["corrosive_acid"], None),
    ("citric acid", "C6H8O7", ["irritant"], None),
    ("calcium carbonate", "CaCO3", ["gas_from_acid"], None),
]

INSTRUMENTS: list[tuple[str, str, str, str | None, str, str, str]] = [
    ("B-07", "burette", "50 mL, class A", "50", "mL", "0.05", "0.05"),
    ("B-08", "burette", "50 mL, class A", "50", "mL", "0.05", "0.05"),
    ("B-11", "burette", "25 mL, class A", "25", "mL", "0.02", "0.03"),
    ("M-02", "burette", "50 mL motor burette", "50", "mL", "0.001", "0.030"),
    ("P-02", "pipette", "2 mL, class A", "2", "mL", "0.01", "0.010"),
    ("P-05", "pipette", "5 mL, class A", "5", "mL", "0.01", "0.015"),
    ("P-10", "pipette", "10 mL, class A", "10", "mL", "0.01", "0.020"),
    ("P-20", "pipette", "20 mL, class A", "20", "mL", "0.01", "0.030"),
    ("P-25", "pipette", "25 mL, class A", "25", "mL", "0.01", "0.030"),
    ("P-50", "pipette", "50 mL, class A", "50", "mL", "0.01", "0.050"),
    ("P-100", "pipette", "100 mL, class A", "100", "mL", "0.01", "0.080"),
    ("F-03", "flask", "100 mL, class A", "100", "mL", "0.01", "0.100"),
    ("W-01", "balance", "220 g analytical balance", "220", "g", "0.0001", "0.0003"),
    ("E-04", "electrode", "combined pH electrode with meter", None, "pH", "0.001", "0.02"),
    ("E-06", "electrode", "silver ring electrode with meter", None, "mV", "0.1", "1"),
]  # fmt: skip


@dataclass
class Laboratory:
    """Everything the history refers to, by the code it is known by."""

    people: dict[str, User] = field(default_factory=dict)
    passwords: dict[str, str] = field(default_factory=dict)
    substances: dict[str, Substance] = field(default_factory=dict)
    instruments: dict[str, Instrument] = field(default_factory=dict)
    titrants: dict[str, Titrant] = field(default_factory=dict)
    standards: dict[str, ReferenceStandard] = field(default_factory=dict)
    methods: dict[str, Method] = field(default_factory=dict)
    versions: dict[str, MethodVersion] = field(default_factory=dict)
    products: dict[str, Product] = field(default_factory=dict)
    controls: dict[str, ControlSample] = field(default_factory=dict)

    def credentials(self, username: str) -> Credentials:
        """What a person types at a signing."""
        return Credentials(username=username, password=self.passwords[username])


def open_laboratory(start: date, *, passwords: dict[str, str]) -> Laboratory:
    """Record the people and the registers on the first morning."""
    lab = Laboratory(passwords=passwords)
    username, name = ADMINISTRATOR
    lab.people[username] = record_first_administrator(username=username, full_name=name, password=passwords[username])
    administrator = lab.people[username]
    for username, name, roles in PEOPLE:
        lab.people[username] = record_user(
            by=administrator, username=username, full_name=name, roles=roles, password=passwords[username]
        )
    _registers(lab, start)
    _titrants(lab)
    return lab


def _registers(lab: Laboratory, start: date) -> None:
    administrator = lab.people[ADMINISTRATOR[0]]
    for name, formula, hazards, density in SUBSTANCES:
        lab.substances[name] = record_substance(
            by=administrator,
            name=name,
            formula=formula,
            hazards=hazards,
            density=D(density) if density else None,
        )
    for identifier, kind, description, capacity, unit, resolution, tolerance in INSTRUMENTS:
        instrument = record_instrument(
            by=administrator, identifier=identifier, kind=kind, unit=unit, resolution=D(resolution),
            tolerance=D(tolerance), capacity=D(capacity) if capacity else None, description=description,
            place="titration bench",
        )  # fmt: skip
        lab.instruments[identifier] = instrument
        due = start + timedelta(days=200 if identifier == "P-25" else 380)
        record_calibration(
            instrument, by=administrator, calibrated_on=start - timedelta(days=10), due_on=due,
            performed_by="Marram Quay Laboratory, gravimetric" if kind != "electrode" else "buffers 4, 7 and 10",
            uncertainty=D("0.0002") if kind == "balance" else None,
            corrections=[("0.00", "0.000"), ("25.00", "0.010"), ("50.00", "0.015")] if identifier == "B-07" else (),
            slope_percent=D("98.9") if identifier == "E-04" else None,
        )  # fmt: skip


def record_standard_lot(lab: Laboratory, number: str, substance: str, *, received: date, purity: str) -> None:
    """Record a lot of a primary standard with its certificate and issue it."""
    standard = record_standard(
        by=lab.people["icastell"], number=number, substance=lab.substances[substance],
        supplier_lot=f"L{received:%y%m}-{len(lab.standards) + 41}", purity=D(purity), purity_expanded=D("0.0003"),
        purity_k=D(2), received_on=received, expires_on=received + timedelta(days=720),
        drying="2 h at 120 °C, cooled over drying agent" if substance.startswith("pot") else "3 h at 500 °C",
        certificate=(
            f"certificate-{number}.pdf", "application/pdf",
            certificate_pdf(number, substance=substance, purity=purity, expanded="0.0003", day=received),
        ),
    )  # fmt: skip
    lab.standards[number] = issue_standard(standard, by=lab.people["mokafor"])


def _titrants(lab: Laboratory) -> None:
    shared: dict[str, Any] = {
        "replicates_needed": 3, "policy": "all", "limit": D("0.25"), "limit_kind": "rsd_percent", "coverage": "k2",
        "temperature_within": D(3),
    }  # fmt: skip
    by = lab.people["mokafor"]
    lab.titrants["NaOH-0.1"] = record_titrant(
        by=by, code="NaOH-0.1", name="sodium hydroxide 0.1 mol/L", substance=lab.substances["sodium hydroxide"],
        nominal=D("0.1"), window_low=D("0.095"), window_high=D("0.105"), restandardization_days=14, shelf_life_days=45,
        standard_substance=lab.substances["potassium hydrogen phthalate"], ratio="1", standard_mass=D("0.42"),
        buoyancy=True, indicator="phenolphthalein, first lasting pale pink", indicator_bias=D("0.02"),
        indicator_u=D("0.01"), **shared,
    )  # fmt: skip
    lab.titrants["HCl-0.1"] = record_titrant(
        by=by, code="HCl-0.1", name="hydrochloric acid 0.1 mol/L", substance=lab.substances["hydrochloric acid"],
        nominal=D("0.1"), window_low=D("0.095"), window_high=D("0.105"), restandardization_days=30, shelf_life_days=90,
        standard_titrant=lab.titrants["NaOH-0.1"], ratio="1", aliquot=D("20"),
        indicator="bromocresol green, blue to green", indicator_bias=D("0.02"), indicator_u=D("0.015"), **shared,
    )  # fmt: skip
    lab.titrants["AgNO3-0.1"] = record_titrant(
        by=by, code="AgNO3-0.1", name="silver nitrate 0.1 mol/L", substance=lab.substances["silver nitrate"],
        nominal=D("0.1"), window_low=D("0.095"), window_high=D("0.105"), restandardization_days=30, shelf_life_days=90,
        standard_substance=lab.substances["sodium chloride"], ratio="1", standard_mass=D("0.12"), buoyancy=True,
        endpoint="curve", curve_quantity="mV", deciding_family="model", checking_family="derivative", system=CHLORIDE,
        initial_volume=D(60), blanks_needed=0, **shared,
    )  # fmt: skip


def record_method_effective(lab: Laboratory, code: str, title: str, **recipe: Any) -> None:
    """Record a method with its first version and sign it into force."""
    by = lab.people["mokafor"]
    method = record_method(by=by, code=code, title=title)
    version = record_version(method, by=by, reason="first version", **recipe)
    lab.methods[code] = method
    lab.versions[code] = make_version_effective(version, by=by, credentials=lab.credentials("mokafor"))


def record_product_effective(lab: Laboratory, code: str, name: str, *limits: dict[str, Any]) -> None:
    """Record a product with its first specification and sign it into force."""
    by = lab.people["phalloran"]
    product = record_product(by=by, code=code, name=name)
    specification = record_specification(product, by=by, reason="first version", limits=limits)
    make_specification_effective(specification, by=by, credentials=lab.credentials("phalloran"))
    lab.products[code] = product


def record_control(
    lab: Laboratory, code: str, name: str, method: str, *, value: str, expanded: str, expires: date
) -> None:
    """Record a control sample."""
    lab.controls[code] = record_control_sample(
        by=lab.people["mokafor"], code=code, name=name, method=lab.methods[method], assigned_value=D(value),
        assigned_expanded=D(expanded), unit=lab.versions[method].unit, expires_on=expires,
    )  # fmt: skip
