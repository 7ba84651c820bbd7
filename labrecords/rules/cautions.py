"""The usual cautions for the reagents of a method: common practice of the trade, and no more than that."""

from __future__ import annotations

from collections.abc import Iterable

STANDING = (
    "Read the safety data sheet of every substance first. It, the local rules and the site's safety officer "
    "stand above anything shown here."
)
ALWAYS = "Wear eye protection and a laboratory coat."
BY_CLASS: dict[str, tuple[str, ...]] = {
    "corrosive_acid": (
        "Corrosive acid: wear gloves. Rinse splashes with plenty of water at once.",
        "Pour acid into water, never water into acid; diluting gives off heat.",
    ),
    "corrosive_base": (
        "Corrosive base: wear gloves. It harms eyes within seconds; rinse at once and get help.",
        "Dissolving solid hydroxide gives off much heat: add it to cold water in small portions, stirring.",
    ),
    "oxidizer": ("Oxidizer: keep it away from organic matter and reducing agents; rinse spills away with water.",),
    "toxic": (
        "Toxic: wear gloves, work so that no dust or spray arises, and wash hands afterwards.",
        "Where chromate is the indicator: it may cause cancer; weigh and dissolve it in the fume cupboard.",
    ),
    "environment": ("Harmful to water life: collect residues in the labelled waste bottle, nothing down the drain.",),
    "stains": ("Stains skin and benches black or brown within hours, silver salts above all: wear gloves.",),
    "gas_from_acid": ("Gives off gas with acid, as carbonates give carbon dioxide: add acid slowly, vessel open.",),
    "irritant": ("Irritates skin and eyes, as the powders of EDTA and of many acids do: avoid dust and splashes.",),
}
ACID_WITH_BASE = "Acid and base give off heat when they meet: let strong solutions run together slowly, and cool."
ACID_WITH_CARBONATE = (
    "Foam may carry acid out of the vessel: use a tall one, and let the foam settle between additions."
)


def cautions_for(classes: Iterable[str]) -> list[str]:
    """The sentences for the hazard classes present, the ones of their meeting too, and the standing one last.

    Raises ValueError for a class that is not in the list: a hazard must not be passed over.
    """
    present = set(classes)
    unknown = sorted(present - BY_CLASS.keys())
    if unknown:
        raise ValueError(f"Hazard class is {unknown[0]!r}; expected one of {', '.join(BY_CLASS)}.")
    found = [ALWAYS] if present else []
    found += [sentence for name, sentences in BY_CLASS.items() if name in present for sentence in sentences]
    if {"corrosive_acid", "corrosive_base"} <= present:
        found.append(ACID_WITH_BASE)
    if {"corrosive_acid", "gas_from_acid"} <= present:
        found.append(ACID_WITH_CARBONATE)
    return [*found, STANDING]
