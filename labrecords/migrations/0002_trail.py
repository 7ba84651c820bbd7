"""No event, no change: the triggers, the guards of frozen states, and what each role may do."""

from __future__ import annotations

from pathlib import Path

from django.conf import settings
from django.db import migrations

SQL = Path(__file__).with_name("sql")

RECORDS = (
    "user substance instrument instrumentcalibration usedinstrument referencestandard titrant titrantlot"
    " standardization method methodversion product specification specificationlimit batch sample run replicate"
    " investigation question controlsample controlchart controllimits"
).split()
FIXED = "storedfile curve calculation signature".split()
TRAIL = "auditevent auditchange auditleaf auditcheckpoint".split()

GUARDS = {
    "run": (
        "open>submitted,open>void,submitted>approved,submitted>open,submitted>void,approved>void",
        "open:state,calculation_id,remarks,loss_percent,returned_reason,void_reason",
        "submitted:state,returned_reason,void_reason",
        "approved:state,void_reason",
        "void:",
    ),
    "standardization": (
        "open>submitted,open>void,submitted>approved,submitted>open,submitted>void,approved>void",
        "open:state,calculation_id,remarks,returned_reason,void_reason",
        "submitted:state,returned_reason,void_reason,in_force_from,in_force_until",
        "approved:state,void_reason,superseded_at",
        "void:",
    ),
    "methodversion": ("draft>effective,effective>superseded", "draft:*", "effective:state", "superseded:"),
    "specification": ("draft>effective,effective>superseded", "draft:*", "effective:state", "superseded:"),
    "controllimits": ("draft>effective,effective>superseded", "draft:*", "effective:state", "superseded:"),
    "batch": (
        "testing>released,testing>rejected,testing>on hold,on hold>testing,on hold>released,on hold>rejected",
        "testing:state,disposition_reason,disposed_by_id,disposed_at",
        "on hold:state,disposition_reason,disposed_by_id,disposed_at",
        "released:",
        "rejected:",
    ),
    "investigation": (
        "open>phase 1,phase 1>phase 2,phase 1>closed,phase 2>closed",
        "open:state,checklist,assessment",
        "phase 1:state,checklist,assessment,cause,plan,retests_planned,plan_authorised_by_id,plan_authorised_at,"
        "conclusion,conclusion_text,closed_by_id,closed_at",
        "phase 2:state,cause,conclusion,conclusion_text,closed_by_id,closed_at",
        "closed:",
    ),
    "referencestandard": (
        "quarantined>in use,quarantined>withdrawn,in use>expired,in use>withdrawn,expired>withdrawn",
        "quarantined:*",
        "in use:state,withdrawn_reason,superseded_by_id",
        "expired:state,withdrawn_reason,superseded_by_id",
        "withdrawn:superseded_by_id",
    ),
    "titrantlot": (
        "quarantined>in use,quarantined>withdrawn,quarantined>expired,in use>expired,in use>withdrawn,"
        "expired>withdrawn",
        "quarantined:state,withdrawn_reason",
        "in use:state,withdrawn_reason",
        "expired:state,withdrawn_reason",
        "withdrawn:",
    ),
}  # fmt: skip


def protect_everything(apps, schema_editor) -> None:
    """Attach the triggers and grant the application role only what it needs."""
    role = schema_editor.quote_name(settings.DATABASE_APP_ROLE)
    run = schema_editor.execute
    for kind, tables in (("record", RECORDS), ("fixed", FIXED), ("trail", TRAIL)):
        for table in tables:
            run("SELECT labrecords_protect(%s, %s, %s)", [f"labrecords_{table}", kind, settings.DATABASE_APP_ROLE])
    for table, rules in GUARDS.items():
        quoted = ", ".join(f"'{rule}'" for rule in rules)
        run(
            f"CREATE TRIGGER guard_states BEFORE UPDATE ON labrecords_{table}"
            f" FOR EACH ROW EXECUTE FUNCTION labrecords_guard_states({quoted})"
        )
    run(f"GRANT SELECT, INSERT, UPDATE ON labrecords_numberseries, labrecords_calculationrequest TO {role}")
    run(f"GRANT USAGE ON ALL SEQUENCES IN SCHEMA public TO {role}")


def grant_the_rest(apps, schema_editor) -> None:
    """Tables of the framework that hold no records: sessions, sign-in attempts, migration names."""
    role = schema_editor.quote_name(settings.DATABASE_APP_ROLE)
    with schema_editor.connection.cursor() as cursor:
        tables = schema_editor.connection.introspection.table_names(cursor)
    for table in tables:
        if table.startswith(("axes_", "django_session")):
            schema_editor.execute(f"GRANT SELECT, INSERT, UPDATE, DELETE ON {schema_editor.quote_name(table)} TO {role}")
        elif table.startswith(("django_", "auth_")):
            schema_editor.execute(f"GRANT SELECT ON {schema_editor.quote_name(table)} TO {role}")


class Migration(migrations.Migration):
    dependencies = [
        ("labrecords", "0001_initial"),
        ("axes", "0010_accessattemptexpiration"),
        ("sessions", "0001_initial"),
    ]

    operations = [
        migrations.RunSQL((SQL / "trail.sql").read_text(), migrations.RunSQL.noop),
        migrations.RunSQL((SQL / "guards.sql").read_text(), migrations.RunSQL.noop),
        migrations.RunPython(protect_everything, migrations.RunPython.noop),
        migrations.RunPython(grant_the_rest, migrations.RunPython.noop),
    ]
