"""Readings that are not complete, titrations that do not count, and inputs that are refused by name."""

from __future__ import annotations

from statistics import fmean

import pytest

from analysis.determination import compute
from tests.support.determinations import (
    by_mass,
    by_volume,
    line,
    lines,
    method,
    primary,
    run,
    solution,
    standardization,
    substance,
)

ENDS = ["16.75", "16.80", "16.70"]


def vinegar(**more) -> dict:
    return compute(run(lines(ENDS, amount="10.00"), **more))


@pytest.mark.parametrize("missing", ["amount", "start", "end"])
def test_compute_says_what_is_not_complete(missing: str) -> None:
    found = compute(run([line(1, "16.75", amount="10.00") | {missing: None}]))
    assert found["value"] is None
    assert found["u"] is None
    assert not found["acceptable"]
    assert found["reasons"] == ["0 of 3 titrations are complete. Enter the amount and the readings of 3."]


def test_compute_shows_a_value_before_all_titrations_are_complete() -> None:
    found = compute(run([*lines(["16.75"], amount="10.00"), line(2, None, amount="10.00")]))
    assert found["value"] == pytest.approx(0.1 * 16.75 / 10 * 60.052, rel=1e-12)
    assert found["reasons"] == ["1 of 3 titrations are complete. Titrate 2 more."]
    assert found["titrations"][1]["value"] is None


@pytest.mark.parametrize("titration", ["direct", "blank_difference"])
def test_compute_waits_for_a_blank_that_is_not_read(titration: str) -> None:
    found = vinegar(method=method(titration=titration), blanks=[line(4, None, amount=None)])
    assert (found["value"], found["acceptable"]) == (None, False)
    assert found["reasons"] == ["The blank is not complete. Titrate the blank, then the result follows."]


def test_compute_waits_for_the_second_blank() -> None:
    found = vinegar(blanks=[line(4, "0.10", amount=None), line(5, None, amount=None)])
    assert found["blank"] == pytest.approx(0.10)
    assert found["reasons"] == ["1 of 2 blanks are complete. Titrate the others."]


def test_compute_waits_for_the_loss_on_drying() -> None:
    settings = method(quantity="mass_fraction", unit="%", basis="dried")
    found = vinegar(method=settings, sample=by_mass())
    assert found["value"] is None
    assert found["reasons"] == ["The loss on drying is not entered. Enter it, then the result follows."]


def test_compute_keeps_excluded_titrations_out_and_says_the_mean_with_them() -> None:
    titrations = lines([*ENDS, "18.00"], amount="10.00")
    titrations[3]["excluded"] = True
    found = compute(run(titrations))
    assert found["value"] == pytest.approx(0.1 * fmean((16.75, 16.80, 16.70)) / 10 * 60.052, rel=1e-12)
    assert found["value_with_all"] == pytest.approx(
        0.1 * fmean((16.75, 16.80, 16.70, 18.00)) / 10 * 60.052, rel=1e-12
    )  # fmt: skip
    assert [item["in_set"] for item in found["titrations"]] == [True, True, True, False]
    assert found["titrations"][3]["excluded"]
    assert vinegar()["value_with_all"] is None


def test_compute_leaves_an_excluded_blank_out() -> None:
    blanks = lines(["0.10", "1.50"], amount=None, first=4)
    blanks[1]["excluded"] = True
    assert vinegar(blanks=blanks)["blank"] == pytest.approx(0.10, abs=1e-12)


def test_compute_takes_an_excluded_titration_that_gives_no_number() -> None:
    titrations = [*lines(["24.95", "24.90", "24.95"], amount="0.5100"), line(4, "0.00", amount="0.5100", excluded=True)]
    found = compute(standardization(titrations, standard=primary(), sample=by_mass()))
    assert found["acceptable"]
    assert found["titrations"][3]["value"] is None
    assert found["value_with_all"] == pytest.approx(found["value"], rel=1e-12)


def test_compute_names_the_titres_that_do_not_agree() -> None:
    settings = method(policy="concordance", limit="0.10")
    found = compute(run(lines(["16.75", "16.80", "17.30"], amount="10.00"), method=settings))
    assert found["reasons"] == ["2 titres agree within 0.1 mL, 3 are needed. Titrate another."]
    assert [item["in_set"] for item in found["titrations"]] == [True, True, False]


def test_compute_compares_weighed_samples_by_what_each_took_in_a_back_titration() -> None:
    # 98.0 % CaCO3 in three masses: titres run over 2 mL, what the samples took agrees to the last digit read.
    masses = (0.5000, 0.5200, 0.5400)
    ends = [(0.5 * 25 - 2000 * m * 0.98 / 100.086) / 0.2 for m in masses]
    titrations = [line(k, f"{v:.2f}", amount=str(m)) for k, (m, v) in enumerate(zip(masses, ends, strict=True), 1)]
    excess = {**solution("H1", "0.5", "0.0005"), "volume": "25", "volume_u": "0.01", "key": "pipette:P-9"}
    settings = method(
        titration="back", ratio="1/2", quantity="mass_fraction", unit="%", policy="concordance", limit="0.10"
    )
    found = compute(
        run(titrations, method=settings, substance=substance("CaCO3", "100.086"), sample=by_mass(), excess=excess,
            titrant=solution("N5", "0.2", "0.0002"))
    )  # fmt: skip
    assert (found["acceptable"], found["statistics"]["n"]) == (True, 3)
    assert found["value"] == pytest.approx(98.0, abs=0.03)


@pytest.mark.parametrize(
    ("change", "sentence"),
    [
        ({"amount": "-1"}, r"^Amount of titration 1 is -1; a number above 0 is expected\.$"),
        ({"amount": "0"}, r"^Amount of titration 1 is 0; a number above 0"),
        ({"amount": "nan"}, r"^Amount of titration 1 is nan; a finite number is expected\.$"),
        ({"amount": "ten"}, r"^Amount of titration 1 is 'ten'; a number is expected\.$"),
        ({"end": "inf"}, r"^End of titration 1 is inf; a finite number is expected\.$"),
        ({"start": "20.00"}, r"^Readings of titration 1 are 20\.00 and 16\.75 mL; the end must not be below"),
        ({"start": "-0.10"}, r"^Readings of titration 1 are -0\.10 and 16\.75 mL"),
    ],
)
def test_compute_refuses_a_reading_by_name(change: dict, sentence: str) -> None:
    with pytest.raises(ValueError, match=sentence):
        compute(run([line(1, "16.75", amount="10.00") | change]))


@pytest.mark.parametrize(
    ("change", "sentence"),
    [
        ({"kind": "batch"}, "^Kind is 'batch'; expected one of run, standardization"),
        ({"method": method(unit="g/kg")}, "^Unit is 'g/kg'; a mass concentration is in g/L"),
        ({"method": method(quantity="mass_fraction", unit="%")}, "^Mass fraction needs a sample by mass; it is by vol"),
        ({"sample": {**by_volume(), "unit": "L"}}, "^Sample unit is 'L'; mL for a volume, g for a mass"),
        ({"method": method(ratio="1/0")}, "^Ratio is '1/0'; a number or a fraction"),
        ({"method": method(limit="0")}, "^Limit is 0; a number above 0"),
        ({"method": method(titration="sideways")}, "^Titration is 'sideways'; expected one of direct"),
        ({"method": method(basis="dried", loss_percent="100")}, "^Loss on drying is 100 %; 0 to less than 100"),
        ({"method": method(basis="dried", loss_percent="-1")}, "^Loss on drying is -1 %"),
        ({"titrant": solution("N1", "0")}, "^Concentration of lot N1 is 0; a number above 0"),
        ({"titrant": solution("N1", "0.1", "-0.1")}, "^concentration of lot N1 is 0.1 with standard uncertainty -0.1"),
        ({"substance": substance("C2H4O2", "nan")}, "^Molar mass is nan; a finite number"),
    ],
)
def test_compute_refuses_an_input_by_name(change: dict, sentence: str) -> None:
    with pytest.raises(ValueError, match=sentence):
        vinegar(**change)


def test_compute_refuses_a_net_titre_of_zero_in_a_standardization() -> None:
    with pytest.raises(ValueError, match=r"^Titration 1 gives no number: its net titre is 0 mL\. Check its readings"):
        compute(standardization(lines(["0.00"], amount="0.5100"), standard=primary(), sample=by_mass()))


@pytest.mark.parametrize("purity", ["99.98", "1.02"])
def test_compute_refuses_a_purity_as_a_percentage(purity: str) -> None:
    standard = primary(purity=purity)
    with pytest.raises(ValueError, match=f"^Purity is {purity}; a mass fraction from 0 to 1 is expected, not a perc"):
        compute(standardization(lines(["24.95"], amount="0.5100"), standard=standard, sample=by_mass()))
