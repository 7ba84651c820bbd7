"""The catalogue: every calculation that can be named, so that a laboratory can rerun its own cases."""

from __future__ import annotations

from collections.abc import Mapping
from typing import Any

from analysis.calculation import Calculation, table_of
from analysis.catalogue_amounts import AMOUNTS
from analysis.catalogue_charts import CHARTS
from analysis.catalogue_conformity import CONFORMITY
from analysis.catalogue_curves import CURVES
from analysis.catalogue_statistics import STATISTICS
from analysis.catalogue_volume import VOLUMES

CATALOGUE: dict[str, Calculation] = table_of(*AMOUNTS, *VOLUMES, *CURVES, *STATISTICS, *CONFORMITY, *CHARTS)


def calculate(name: str, inputs: Mapping[str, Any]) -> Any:
    """Run a calculation by its name.

    Raises
    ------
    ValueError
        When the name is not in the catalogue, or an input is missing, not known or refused.
    """
    found = CATALOGUE.get(name)
    if found is None:
        raise ValueError(f"Calculation is {name!r}; expected one of {', '.join(sorted(CATALOGUE))}.")
    return found(inputs)
