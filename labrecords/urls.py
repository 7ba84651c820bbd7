"""Every address of the site: one list per noun, then the root list."""

from __future__ import annotations

from django.urls import include, path

from labrecords.views import (
    audit,
    batch,
    bench,
    calculation,
    control_chart,
    control_sample,
    curve,
    find,
    health,
    instrument,
    investigation,
    lineage,
    method,
    product,
    question,
    register,
    replicate,
    result,
    review,
    run,
    sample,
    standard,
    standardization,
    substance,
    titrant,
    titrant_lot,
    user,
)  # fmt: skip

handler400 = "labrecords.views.error.bad_request"
handler403 = "labrecords.views.error.forbidden"
handler404 = "labrecords.views.error.not_found"
handler500 = "labrecords.views.error.broken"

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
    path("results/together/", result.together, name="result-together"),
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

calculation_urls = [
    path("calculations/<int:pk>/check/", calculation.check, name="calculation-check"),
    path("calculations/<int:pk>/checked/", calculation.checked, name="calculation-checked"),
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
    path(
        "calibrations/<int:pk>/withdraw/",
        instrument.withdraw_calibration,
        name="instrument-withdraw_calibration",
    ),
]

standard_urls = [
    path("standards/", standard.list, name="standard-list"),
    path("standards/record/", standard.record, name="standard-record"),
    path("standards/certificates/<int:pk>/", standard.certificate, name="standard-certificate"),
    path("standards/<str:number>/", standard.detail, name="standard-detail"),
    path("standards/<str:number>/correct/", standard.correct, name="standard-correct"),
    path("standards/<str:number>/supersede/", standard.supersede, name="standard-supersede"),
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
    path("lots/<str:number>/expire/", titrant_lot.expire, name="titrant_lot-expire"),
    path("lots/<str:number>/withdraw/", titrant_lot.withdraw, name="titrant_lot-withdraw"),
]

batch_urls = [
    path("batches/", batch.list, name="batch-list"),
    path("batches/record/", batch.record, name="batch-record"),
    path("batches/<str:number>/", batch.detail, name="batch-detail"),
    path("batches/<str:number>/release/", batch.release, name="batch-release"),
    path("batches/<str:number>/reject/", batch.reject, name="batch-reject"),
    path("batches/<str:number>/hold/", batch.hold, name="batch-hold"),
]

sample_urls = [
    path("samples/", sample.list, name="sample-list"),
    path("samples/record/", sample.record, name="sample-record"),
    path("samples/<str:number>/", sample.detail, name="sample-detail"),
    path("samples/<str:number>/void/", sample.void, name="sample-void"),
]

review_urls = [
    path("reviews/", review.list, name="review-list"),
    path("questions/<int:pk>/", question.answer, name="question-answer"),
]

investigation_urls = [
    path("investigations/", investigation.list, name="investigation-list"),
    path("investigations/<str:number>/", investigation.detail, name="investigation-detail"),
    path("investigations/<str:number>/assess/", investigation.assess, name="investigation-assess"),
    path("investigations/<str:number>/plan/", investigation.plan, name="investigation-plan"),
    path("investigations/<str:number>/close/", investigation.close, name="investigation-close"),
]

method_urls = [
    path("methods/", method.list, name="method-list"),
    path("methods/record/", method.record, name="method-record"),
    path("methods/versions/<int:pk>/effective/", method.make_effective, name="method-make_effective"),
    path("methods/<str:code>/", method.detail, name="method-detail"),
    path("methods/<str:code>/versions/record/", method.record_version, name="method-record_version"),
]

product_urls = [
    path("products/", product.list, name="product-list"),
    path("products/record/", product.record, name="product-record"),
    path("products/specifications/<int:pk>/effective/", product.make_effective, name="product-make_effective"),
    path("products/<str:code>/", product.detail, name="product-detail"),
    path("products/<str:code>/supersede/", product.supersede, name="product-supersede"),
    path("products/<str:code>/specify/", product.specify, name="product-specify"),
]

control_urls = [
    path("control-samples/", control_sample.list, name="control_sample-list"),
    path("control-samples/record/", control_sample.record, name="control_sample-record"),
    path("control-samples/<str:code>/", control_sample.detail, name="control_sample-detail"),
    path("control-samples/<str:code>/withdraw/", control_sample.withdraw, name="control_sample-withdraw"),
    path("charts/", control_chart.list, name="control_chart-list"),
    path("capability/", control_chart.capability, name="control_chart-capability"),
    path("charts/record/", control_chart.record, name="control_chart-record"),
    path("charts/<str:code>/", control_chart.detail, name="control_chart-detail"),
    path("charts/<str:code>/limits/", control_chart.set_limits, name="control_chart-set_limits"),
]

lineage_urls = [
    path("find/", find.number, name="find-number"),
    path("lineage/", lineage.find, name="lineage-find"),
    path("lineage/runs/<str:number>/", lineage.run, name="lineage-run"),
    path("lineage/runs/<str:number>/dossier/", lineage.dossier, name="lineage-dossier"),
    path("lineage/runs/<str:number>/provenance/", lineage.provenance, name="lineage-provenance"),
    path("lineage/standardizations/<str:number>/", lineage.standardization, name="lineage-standardization"),
    path("lineage/lots/<str:number>/", lineage.lot, name="lineage-lot"),
    path("lineage/standards/<str:number>/", lineage.standard, name="lineage-standard"),
    path("lineage/instruments/<str:identifier>/", lineage.instrument, name="lineage-instrument"),
    path("lineage/batches/<str:number>/", lineage.batch, name="lineage-batch"),
    path("lineage/samples/<str:number>/", lineage.sample, name="lineage-sample"),
    path("lineage/signatures/<int:pk>/", lineage.signed, name="lineage-signed"),
]

audit_urls = [
    path("audit/", audit.list, name="audit-list"),
    path("audit/export/", audit.export, name="audit-export"),
    path("audit/integrity/", audit.integrity, name="audit-integrity"),
    path("audit/review/", audit.review, name="audit-review"),
    path("audit/<int:pk>/", audit.detail, name="audit-detail"),
    path("healthz", health.check, name="health-check"),
]

urlpatterns = [
    path("api/", include("labrecords.api.urls")),
    *batch_urls,
    *sample_urls,
    *review_urls,
    *investigation_urls,
    *method_urls,
    *product_urls,
    *control_urls,
    *lineage_urls,
    *audit_urls,
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
    *calculation_urls,
]
