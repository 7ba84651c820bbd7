"""Series of human-readable numbers: reserved when a record is started, never reused."""

from __future__ import annotations

from django.db import models


class NumberSeries(models.Model):
    """The last number given in one series of one year; locked while the next is taken."""

    series = models.CharField(max_length=10)
    year = models.PositiveSmallIntegerField()
    last = models.PositiveIntegerField()

    class Meta:
        constraints = [models.UniqueConstraint(fields=["series", "year"], name="number_series_once_a_year")]

    def __str__(self) -> str:
        return f"{self.series} {self.year}: {self.last}"
