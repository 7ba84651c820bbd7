"""plotly.js out of the installed Python package, so that no third-party code is kept with ours."""

from __future__ import annotations

from collections.abc import Iterable, Iterator
from pathlib import Path
from typing import Any

import plotly
from django.contrib.staticfiles.finders import BaseFinder
from django.core.files.storage import FileSystemStorage, Storage

PREFIX = "vendor"
SCRIPT = "plotly.min.js"


class PlotlyFinder(BaseFinder):
    """Offers ``vendor/plotly.min.js`` and nothing else of the package."""

    def __init__(self, *args: Any, **kwargs: Any) -> None:
        self.folder = Path(plotly.__file__).parent / "package_data"
        self.storage = FileSystemStorage(location=self.folder)
        self.storage.prefix = PREFIX  # type: ignore[attr-defined]  # collectstatic reads it
        super().__init__(*args, **kwargs)

    def find(self, path: str, find_all: bool = False, **kwargs: Any) -> Any:
        """The file for ``path``, as ``findstatic`` and the development server ask for it."""
        if path != f"{PREFIX}/{SCRIPT}":
            return []
        found = str(self.folder / SCRIPT)
        return [found] if find_all else found

    def list(self, ignore_patterns: Iterable[str] | None) -> Iterator[tuple[str, Storage]]:
        """What ``collectstatic`` takes."""
        yield SCRIPT, self.storage
