"""Every address of the site: one list per noun, then the root list."""

from __future__ import annotations

from django.urls import path

from labrecords.views import (
    bench, curve, instrument, register, replicate, run, standard, standardization, substance, titrant, titrant_lot, user,
)  # fmt: skip

bench_urls = [path("", bench.list, name="bench-list")]

user_urls = [
    path("sign-in/", user.sign_in, name="user-sign_in"),
    path("sign-out/", user.sign_out, name="user-sign_out"),
    path("people/", user.list, name="user-list"),
    path("people/record/", user.record, name="user-record"),
    path("people/password/", user.change_password, name="user-change_password"),
    path("people/<str:username>/", user.detail, name="user-detail"),
    path("people/<str:username>/close/", user.close, name="user-close"),
]

run_urls = [
    path("runs/", run.list, name="run-list"),
    path("runs/start/<str:sample_number>/<int:version_id>/", run.start, name="run-start"),
    path("runs/<str:number>/", run.sheet, name="run-sheet"),
    path("runs/<str:number>/result/", run.result, name="run-result"),
    path("runs/<str:number>/preview/", run.preview, name="run-preview"),
    path("runs/<str:number>/correct/", run.correct, name="run-correct"),
    path("runs/<str:number>/submit/", run.submit, name="run-submit"),
    path("runs/<str:number>/approve/", run.approve, name="run-approve"),
    path("runs/<str:number>/return/", run.give_back, name="run-give_back"),
    path("runs/<str:number>/void/", run.void, name="run-void"),
]

standardization_urls = [
    path("standardizations/", standardization.list, name="standardization-list"),
    path("standardizations/start/<str:lot_number>/", standardization.start, name="standardization-start"),
    path("standardizations/<str:number>/", standardization.sheet, name="standardization-sheet"),
    path("standardizations/<str:number>/result/", standardization.result, name="standardization-result"),
    path("standardizations/<str:number>/preview/", standardization.preview, name="standardization-preview"),
    path("standardizations/<str:number>/correct/", standardization.correct, name="standardization-correct"),
    path("standardizations/<str:number>/submit/", standardization.submit, name="standardization-submit"),
    path("standardizations/<str:number>/approve/", standardization.approve, name="standardization-approve"),
    path("standardizations/<str:number>/return/", standardization.give_back, name="standardization-give_back"),
    path("standardizations/<str:number>/void/", standardization.void, name="standardization-void"),
]

replicate_urls = [
    path("replicates/<int:pk>/exclude/", replicate.exclude, name="replicate-exclude"),
    path("replicates/<int:pk>/<str:field>/", replicate.record, name="replicate-record"),
    path("sheets/<str:noun>/<str:number>/readings/", replicate.record_all, name="replicate-record_all"),
    path("sheets/<str:noun>/<str:number>/add/", replicate.add, name="replicate-add"),
]

curve_urls = [
    path("curves/<int:pk>/", curve.detail, name="curve-detail"),
    path("curves/<int:pk>/record/", curve.record, name="curve-record"),
]

register_urls = [path("register/", register.home, name="register-home")]

substance_urls = [
    path("substances/", substance.list, name="substance-list"),
    path("substances/record/", substance.record, name="substance-record"),
    path("substances/<int:pk>/", substance.detail, name="substance-detail"),
    path("substances/<int:pk>/supersede/", substance.supersede, name="substance-supersede"),
]

instrument_urls = [
    path("instruments/", instrument.list, name="instrument-list"),
    path("instruments/record/", instrument.record, name="instrument-record"),
    path("instruments/<str:identifier>/", instrument.detail, name="instrument-detail"),
    path("instruments/<str:identifier>/supersede/", instrument.supersede, name="instrument-supersede"),
    path("instruments/<str:identifier>/calibrate/", instrument.calibrate, name="instrument-calibrate"),
    path("instruments/<str:identifier>/withdraw/", instrument.withdraw, name="instrument-withdraw"),
    path("calibrations/<int:pk>/withdraw/", instrument.withdraw_calibration, name="instrument-withdraw_calibration"),
]

standard_urls = [
    path("standards/", standard.list, name="standard-list"),
    path("standards/record/", standard.record, name="standard-record"),
    path("standards/certificates/<int:pk>/", standard.certificate, name="standard-certificate"),
    path("standards/<str:number>/", standard.detail, name="standard-detail"),
    path("standards/<str:number>/issue/", standard.issue, name="standard-issue"),
    path("standards/<str:number>/withdraw/", standard.withdraw, name="standard-withdraw"),
]

titrant_urls = [
    path("titrants/", titrant.list, name="titrant-list"),
    path("titrants/record/", titrant.record, name="titrant-record"),
    path("titrants/<str:code>/", titrant.detail, name="titrant-detail"),
    path("titrants/<str:code>/supersede/", titrant.supersede, name="titrant-supersede"),
    path("titrants/<str:code>/lots/record/", titrant_lot.record, name="titrant_lot-record"),
    path("lots/", titrant_lot.list, name="titrant_lot-list"),
    path("lots/<str:number>/", titrant_lot.detail, name="titrant_lot-detail"),
    path("lots/<str:number>/label/", titrant_lot.label, name="titrant_lot-label"),
    path("lots/<str:number>/withdraw/", titrant_lot.withdraw, name="titrant_lot-withdraw"),
]

urlpatterns = [
    *register_urls,
    *substance_urls,
    *instrument_urls,
    *standard_urls,
    *titrant_urls,
    *bench_urls,
    *user_urls,
    *run_urls,
    *standardization_urls,
    *replicate_urls,
    *curve_urls,
]
