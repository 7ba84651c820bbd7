"""Units of results: an exact table. A wrong unit is refused, never converted by guess."""

from __future__ import annotations

# quantity -> unit -> factor from the base of the quantity to the unit.
# Bases: amount concentration mol/L; mass concentration g/L; mass fraction g/g;
# titrant equivalent mol of titrant's equivalents per kg of sample ("mg X/g" needs the molar mass of X).
UNITS: dict[str, dict[str, float]] = {
    "amount_concentration": {"mol/L": 1.0, "mmol/L": 1e3, "umol/L": 1e6},
    "mass_concentration": {
        "g/L": 1.0,
        "mg/L": 1e3,
        "ug/L": 1e6,
        "g/100 mL": 0.1,
        "mg/100 mL": 100.0,
        "mg/mL": 1.0,
    },
    "mass_fraction": {"%": 100.0, "g/100 g": 100.0, "g/kg": 1e3, "mg/g": 1e3, "mg/kg": 1e6, "g/g": 1.0},
    "titrant_equivalent": {"mol/kg": 1.0, "mmol/kg": 1e3, "meq/kg": 1e3, "meq/g": 1.0, "mmol/g": 1.0},
}
EQUIVALENT_MASS = "mg {name}/g"


def factor(quantity: str, unit: str, *, equivalent: str | None = None) -> float:
    """The factor from the base unit of a quantity to a unit of it.

    Parameters
    ----------
    quantity : str
        amount_concentration, mass_concentration, mass_fraction or titrant_equivalent.
    unit : str
        One of the table; for a titrant equivalent also "mg X/g" with X the equivalent's formula (base mg/g then).
    equivalent : str, optional
        Formula of the equivalent substance, such as KOH.

    Raises
    ------
    ValueError
        When the quantity is not known or the unit is not one of it.
    """
    if quantity not in UNITS:
        raise ValueError(f"Quantity is {quantity!r}; expected one of {', '.join(UNITS)}.")
    if quantity == "titrant_equivalent" and equivalent and unit == EQUIVALENT_MASS.format(name=equivalent):
        return 1.0
    if unit not in UNITS[quantity]:
        spoken = f"{'an' if quantity.startswith('a') else 'a'} {quantity.replace('_', ' ')}"
        raise ValueError(f"Unit is {unit!r}; {spoken} is in {', '.join(UNITS[quantity])}.")
    return UNITS[quantity][unit]
