"""A curve file and the columns confirmed by the analyst."""

from __future__ import annotations

import base64
import binascii
import zlib

from django import forms

LARGEST_UNPACKED = 6 * 1024 * 1024


class CurveFileForm(forms.Form):
    """The file as it came from the instrument."""

    file = forms.FileField(
        label="Curve file",
        max_length=200,
        error_messages={
            "required": "Curve file: no file was chosen; choose the text file your instrument wrote.",
            "empty": "Curve file: the file is empty; choose one with volume and reading columns.",
        },
    )


class MappingForm(forms.Form):
    """Which column is which, as confirmed; the file travels with the form until it is kept."""

    volume = forms.IntegerField(min_value=1, max_value=30)
    reading = forms.IntegerField(min_value=1, max_value=30)
    name = forms.CharField(max_length=200)
    packed = forms.CharField()

    def clean_packed(self) -> bytes:
        """The file's bytes again; no more than a curve file may have."""
        try:
            packed = base64.b64decode(self.cleaned_data["packed"], validate=True)
            unpacker = zlib.decompressobj()
            content = unpacker.decompress(packed, LARGEST_UNPACKED)
        except (binascii.Error, zlib.error) as problem:
            raise forms.ValidationError("The file did not come back whole. Choose it again.") from problem
        if unpacker.unconsumed_tail:
            raise forms.ValidationError("The file is larger than 5 MB. Choose the curve's own file.")
        return content


def packed(content: bytes) -> str:
    """The bytes of a file as text for a hidden field."""
    return base64.b64encode(zlib.compress(content)).decode()
