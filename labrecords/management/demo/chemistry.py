"""The chemistry of the demo's curves: what the methods fit, and what the bench simulates."""

from __future__ import annotations

ACETIC = {"kind": "acid_base", "titrant": "base", "carbonate": 0.0, "activity": True,
          "analytes": [{"name": "acetic acid", "pKa": [4.756], "charge": 0}]}  # fmt: skip
CHLORIDE = {"kind": "precipitation", "titrant": "silver", "carbonate": 0.0, "activity": False,
            "analytes": [{"name": "chloride", "pKa": [], "charge": -1, "pKs": 9.752}]}  # fmt: skip
EFFLUENT = {"kind": "acid_base", "titrant": "acid", "carbonate": 0.0, "activity": True,
            "analytes": [{"name": "carbonate", "pKa": [6.352, 10.329], "charge": 0},
                         {"name": "hydrogen carbonate", "pKa": [6.352], "charge": 0}]}  # fmt: skip
