"""The audit trail: events, the changes written under them, and their seal."""

from __future__ import annotations

from django.conf import settings
from django.db import models
from django.db.models.functions import Now


class AuditEvent(models.Model):
    """Who did what and why; the database's own clock says when. Rows are only ever added.

    A trigger sets ``occurred_at``, ``is_simulated`` and ``transaction_id``: what is sent for them is ignored.
    """

    id = models.BigAutoField(primary_key=True)
    actor = models.ForeignKey(settings.AUTH_USER_MODEL, on_delete=models.PROTECT, related_name="+")
    actor_name = models.CharField(max_length=120)
    action = models.CharField(max_length=60)
    subject = models.CharField(max_length=80, blank=True)
    reason = models.TextField(blank=True)
    occurred_at = models.DateTimeField(db_default=Now())
    is_simulated = models.BooleanField(db_default=False)
    transaction_id = models.BigIntegerField(db_default=0)

    class Meta:
        ordering = ["id"]
        indexes = [
            models.Index(fields=["action"]),
            models.Index(fields=["actor"]),
            models.Index(fields=["subject"]),
        ]
        constraints = [
            models.CheckConstraint(condition=~models.Q(actor_name=""), name="audit_event_has_an_actor"),
            models.CheckConstraint(condition=~models.Q(action=""), name="audit_event_has_an_action"),
        ]

    def __str__(self) -> str:
        return f"{self.action} {self.subject}".strip()


class AuditChange(models.Model):
    """One row of one record table before and after; written by the row triggers only."""

    id = models.BigAutoField(primary_key=True)
    event = models.ForeignKey(AuditEvent, on_delete=models.PROTECT, related_name="changes")
    table_name = models.CharField(max_length=63)
    record_key = models.CharField(max_length=80)
    operation = models.CharField(max_length=6)
    before = models.JSONField(null=True)
    after = models.JSONField(null=True)

    class Meta:
        ordering = ["id"]
        indexes = [models.Index(fields=["table_name", "record_key"])]

    def __str__(self) -> str:
        return f"{self.operation} {self.table_name} {self.record_key}"


class AuditLeaf(models.Model):
    """The place of an event in the sealed tree (RFC 9162) and the hash it had when it was sealed."""

    position = models.BigIntegerField(primary_key=True)
    event = models.OneToOneField(AuditEvent, on_delete=models.PROTECT, related_name="leaf")
    leaf_hash = models.BinaryField()

    class Meta:
        ordering = ["position"]

    def __str__(self) -> str:
        return f"leaf {self.position}"


class AuditCheckpoint(models.Model):
    """A signed statement of the tree's size and root at one moment, also anchored outside the database."""

    tree_size = models.BigIntegerField(unique=True)
    root_hash = models.BinaryField()
    mark = models.BinaryField(help_text="HMAC-SHA-256 over size, root and time with the laboratory's sealing key")
    written_at = models.DateTimeField()

    class Meta:
        ordering = ["tree_size"]

    def __str__(self) -> str:
        return f"checkpoint at {self.tree_size}"
