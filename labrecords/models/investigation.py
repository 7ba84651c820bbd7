"""Investigations of out-of-specification results, and questions about records that became doubtful."""

from __future__ import annotations

from django.conf import settings
from django.db import models
from django.db.models import Q
from django.db.models.functions import Now


class InvestigationState(models.TextChoices):
    OPEN = "open", "open"
    PHASE_1 = "phase 1", "phase 1: laboratory assessment"
    PHASE_2 = "phase 2", "phase 2: authorised retest plan"
    CLOSED = "closed", "closed"


class Conclusion(models.TextChoices):
    ASSIGNABLE_CAUSE = "assignable cause", "assignable cause: the run is void, the test is repeated"
    CONFIRMED = "confirmed", "the result is confirmed out of specification"
    NOT_CONFIRMED = "not confirmed", "the retests meet the limits as the plan requires"


class Investigation(models.Model):
    """What follows an out-of-specification result; opened in the transaction that stored the result."""

    number = models.CharField(max_length=20, unique=True)
    run = models.ForeignKey("Run", on_delete=models.PROTECT, related_name="investigations")
    calculation = models.ForeignKey("Calculation", on_delete=models.PROTECT, related_name="+")
    state = models.CharField(max_length=8, choices=InvestigationState, default=InvestigationState.OPEN)
    opened_at = models.DateTimeField()
    checklist = models.JSONField(default=dict, help_text="phase 1: question -> {answer, note}")
    assessment = models.TextField(blank=True)
    cause = models.TextField(blank=True, help_text="the assignable cause, if one was found")
    plan = models.TextField(blank=True)
    retests_planned = models.PositiveSmallIntegerField(null=True)
    plan_authorised_by = models.ForeignKey(
        settings.AUTH_USER_MODEL, on_delete=models.PROTECT, null=True, related_name="+"
    )
    plan_authorised_at = models.DateTimeField(null=True)
    conclusion = models.CharField(max_length=20, choices=Conclusion, blank=True)
    conclusion_text = models.TextField(blank=True)
    closed_by = models.ForeignKey(settings.AUTH_USER_MODEL, on_delete=models.PROTECT, null=True, related_name="+")
    closed_at = models.DateTimeField(null=True)

    class Meta:
        ordering = ["-id"]
        constraints = [
            models.CheckConstraint(condition=Q(state__in=InvestigationState.values), name="investigation_state_known"),
            models.UniqueConstraint(
                fields=["run"], condition=~Q(state="closed"), name="investigation_one_open_for_a_run"
            ),
            models.CheckConstraint(
                condition=~Q(state="closed")
                | (~Q(conclusion="") & ~Q(conclusion_text="") & Q(closed_by__isnull=False, closed_at__isnull=False)),
                name="investigation_closed_with_a_conclusion",
            ),
            models.CheckConstraint(
                condition=~Q(state="phase 2")
                | (
                    ~Q(plan="")
                    & Q(
                        retests_planned__gte=1,
                        plan_authorised_by__isnull=False,
                        plan_authorised_at__isnull=False,
                    )
                ),
                name="investigation_phase_2_has_a_plan",
            ),
        ]

    def __str__(self) -> str:
        return self.number


class Question(models.Model):
    """A run or standardization is in question because something it rests on became doubtful."""

    run = models.ForeignKey("Run", on_delete=models.PROTECT, null=True, related_name="questions")
    standardization = models.ForeignKey(
        "Standardization", on_delete=models.PROTECT, null=True, related_name="questions"
    )
    because = models.TextField()
    raised_at = models.DateTimeField(db_default=Now())
    raised_by = models.ForeignKey(settings.AUTH_USER_MODEL, on_delete=models.PROTECT, related_name="+")
    answer = models.TextField(blank=True)
    answered_by = models.ForeignKey(settings.AUTH_USER_MODEL, on_delete=models.PROTECT, null=True, related_name="+")
    answered_at = models.DateTimeField(null=True)

    class Meta:
        ordering = ["id"]
        constraints = [
            models.CheckConstraint(
                condition=Q(run__isnull=True) ^ Q(standardization__isnull=True),
                name="question_about_one_record",
            ),
            models.CheckConstraint(
                condition=Q(answered_at__isnull=True) | (~Q(answer="") & Q(answered_by__isnull=False)),
                name="question_answered_with_a_sentence",
            ),
        ]

    def __str__(self) -> str:
        return self.because
