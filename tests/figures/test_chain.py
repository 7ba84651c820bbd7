"""The chain: records left to right, each with who and when."""

from xml.etree import ElementTree

from labrecords.figures.chain import chain

SVG = "{http://www.w3.org/2000/svg}"
LINKS = [
    {"number": "KHP-26-01", "title": "KHP", "who": "certificate", "when": "2 Jan 2026", "state": "in use"},
    {"number": "S-26-00121", "title": "<b>&", "who": "P. Ferro", "when": "20 Nov 2026", "url": "/s?a=1&b=2"},
]


def test_chain_tells_every_link_in_order():
    told = ElementTree.fromstring(chain(LINKS)).find(f"{SVG}desc").text
    assert told.index("KHP-26-01, KHP, in use, certificate, 2 Jan 2026") < told.index("S-26-00121")


def test_chain_links_where_there_is_an_address():
    anchors = list(ElementTree.fromstring(chain(LINKS)).iter(f"{SVG}a"))
    assert [anchor.get("href") for anchor in anchors] == ["/s?a=1&b=2"]


def test_chain_keeps_hostile_words_as_text():
    texts = [piece.text for piece in ElementTree.fromstring(chain(LINKS)).iter(f"{SVG}text")]
    assert "<b>&" in texts


def test_chain_shortens_long_words_in_the_drawing_only():
    long = {"number": "N26-117", "title": "potassium hydrogen phthalate, dried", "state": "void"}
    tree = ElementTree.fromstring(chain([long]))
    assert "potassium hydrogen phtha…" in [piece.text for piece in tree.iter(f"{SVG}text")]
    assert long["title"] in tree.find(f"{SVG}desc").text


def test_chain_of_nothing_says_so():
    assert "No record is linked yet." in chain([])


def test_chain_is_a_group_so_that_its_links_can_be_reached():
    assert ElementTree.fromstring(chain(LINKS)).get("role") == "group"
