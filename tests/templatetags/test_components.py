"""The components of pages: what each shows and what it leaves out."""

from django import forms
from django.core.paginator import Paginator
from django.template.loader import render_to_string
from django.test import RequestFactory


class StandardForm(forms.Form):
    purity = forms.CharField(label="Purity", help_text="as on the certificate")
    note = forms.CharField(label="Note", required=False)

    def clean_purity(self):
        raise forms.ValidationError('Purity is "98,o": a number in per cent is expected, such as 99.98.')


def shown(component, **context):
    return render_to_string(f"components/{component}.html", context)


def test_field_ties_its_sentence_to_its_input():
    form = StandardForm({"purity": "98,o"})
    form.is_valid()
    html = shown("_field", field=form["purity"])
    assert 'id="id_purity_error"' in html
    assert "a number in per cent is expected" in html
    assert 'aria-describedby="id_purity_helptext id_purity_error"' in html


def test_field_says_when_it_may_be_left_empty():
    assert "(may be left empty)" in shown("_field", field=StandardForm()["note"])
    assert "(may be left empty)" not in shown("_field", field=StandardForm()["purity"])


def test_button_with_an_objection_cannot_be_pressed():
    html = shown("_button", label="Submit", name="submit", objections=["Three titres are needed."])
    assert 'type="submit"' not in html
    assert 'aria-describedby="submit-objections"' in html
    assert "Three titres are needed." in html


def test_button_without_objections_submits():
    assert 'type="submit"' in shown("_button", label="Submit", name="submit", objections=[])


def test_sign_never_fills_in_a_password():
    html = shown("_sign", meaning="reviewed by", label="Sign", says=["The password is not right."])
    assert 'name="password" type="password"' in html
    assert "value=" not in html
    assert "The password is not right." in html


def test_cell_shows_its_sentence_as_invalid():
    html = shown("_cell", id="c1", name="end", value="2o.05", url="/cell", says="a number is expected")
    assert 'aria-invalid="true"' in html
    assert "a number is expected" in html


def test_cell_without_an_address_is_not_sent():
    assert "data-autosave" not in shown("_cell", id="c1", name="end", value="1.00", label="End")


def test_pager_keeps_the_search():
    request = RequestFactory().get("/", {"q": "TV"})
    html = shown("_pager", page_obj=Paginator(range(120), 50).page(2), request=request)
    assert "51 to 100 of 120" in html
    assert 'href="?q=TV&amp;page=3"' in html


def test_refused_shows_each_sentence():
    html = shown("_refused", refused=["Lot N26-117 has expired.", "Choose lot N26-121."])
    assert html.count("<li>") == 2
    assert shown("_refused", refused=[]).strip() == ""


def test_waiting_asks_again_only_while_it_has_an_address():
    assert 'hx-trigger="every 1s"' in shown("_waiting", url="/run/1/means")
    assert "hx-get" not in shown("_waiting")
