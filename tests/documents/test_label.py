"""The code on a bottle's label."""

from __future__ import annotations

from xml.etree import ElementTree

import pytest
import segno

from labrecords.documents.label import label_code


@pytest.mark.parametrize("number", ["N26-117", "7", "KHP 26.01 " + "x" * 20])
def test_label_code_is_a_full_code_with_its_quiet_zone(number: str) -> None:
    picture = ElementTree.fromstring(label_code(number))
    side = int(picture.attrib["viewBox"].split()[2])
    modules = side - 8  # ISO/IEC 18004: a quiet zone of 4 modules on each side
    assert modules >= 21  # version 1; the micro forms have 11 to 17
    assert modules == segno.make_qr(number, error="m").symbol_size(border=0)[0]


def test_label_code_carries_no_style_of_its_own() -> None:
    assert "style" not in label_code("N26-117")
    assert "script" not in label_code("<script>alert(1)</script>")
