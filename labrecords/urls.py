"""Every address of the site: one list per noun, then the root list."""

from __future__ import annotations

from django.urls import path

from labrecords.views import bench, curve, replicate, run, standardization, user

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

urlpatterns = [
    *bench_urls,
    *user_urls,
    *run_urls,
    *standardization_urls,
    *replicate_urls,
    *curve_urls,
]
