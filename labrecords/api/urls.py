"""Every address of the API: one list per noun, then the list of all."""

from __future__ import annotations

from django.urls import path
from drf_spectacular.views import SpectacularAPIView

from labrecords.api import batch, instrument, run, standard, substance, titrant, titrant_lot

app_name = "api"

substance_urls = [
    path("substances/", substance.list, name="substance-list"),
    path("substances/<int:pk>/", substance.detail, name="substance-detail"),
]

instrument_urls = [
    path("instruments/", instrument.list, name="instrument-list"),
    path("instruments/<str:identifier>/", instrument.detail, name="instrument-detail"),
    path("instruments/<str:identifier>/calibrations/", instrument.calibrations, name="instrument-calibrations"),
]

standard_urls = [
    path("standards/", standard.list, name="standard-list"),
    path("standards/<str:number>/", standard.detail, name="standard-detail"),
]

titrant_urls = [
    path("titrants/", titrant.list, name="titrant-list"),
    path("titrants/<str:code>/", titrant.detail, name="titrant-detail"),
    path("lots/", titrant_lot.list, name="titrant_lot-list"),
    path("lots/<str:number>/", titrant_lot.detail, name="titrant_lot-detail"),
]

run_urls = [
    path("runs/", run.list, name="run-list"),
    path("runs/<str:number>/", run.detail, name="run-detail"),
]

batch_urls = [
    path("batches/", batch.list, name="batch-list"),
    path("batches/<str:number>/", batch.detail, name="batch-detail"),
]

urlpatterns = [
    path("schema/", SpectacularAPIView.as_view(), name="schema"),
    *substance_urls,
    *instrument_urls,
    *standard_urls,
    *titrant_urls,
    *run_urls,
    *batch_urls,
]
