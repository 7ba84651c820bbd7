"""People of the laboratory."""

from __future__ import annotations

from typing import ClassVar

from django.contrib.auth.base_user import AbstractBaseUser, BaseUserManager
from django.contrib.auth.hashers import check_password
from django.contrib.postgres.fields import ArrayField
from django.db import models


class Role(models.TextChoices):
    ANALYST = "analyst", "analyst"
    SUPERVISOR = "supervisor", "supervisor"
    AUDITOR = "auditor", "auditor"
    ADMINISTRATOR = "administrator", "administrator"


class User(AbstractBaseUser):
    """One person, one account; the second-person rule holds for the person and not for the role."""

    username = models.CharField(max_length=40, unique=True)
    full_name = models.CharField(max_length=120)
    roles = ArrayField(models.CharField(max_length=20, choices=Role))
    is_active = models.BooleanField(default=True)
    last_login = None  # sign-ins are audit events, not a column that changes without one

    objects = BaseUserManager()

    USERNAME_FIELD = "username"
    REQUIRED_FIELDS: ClassVar[list[str]] = []

    class Meta:
        ordering = ["full_name"]
        constraints = [
            models.CheckConstraint(condition=models.Q(roles__len__gt=0), name="user_has_a_role"),
            models.CheckConstraint(condition=~models.Q(full_name=""), name="user_has_a_name"),
        ]

    def __str__(self) -> str:
        return self.full_name

    def check_password(self, raw_password: str | None) -> bool:
        """Whether a password is the person's; unlike the framework's own, it never rewrites the stored hash."""
        return check_password(raw_password, self.password)

    @property
    def is_analyst(self) -> bool:
        return Role.ANALYST in self.roles

    @property
    def is_supervisor(self) -> bool:
        return Role.SUPERVISOR in self.roles

    @property
    def is_auditor(self) -> bool:
        return Role.AUDITOR in self.roles

    @property
    def is_administrator(self) -> bool:
        return Role.ADMINISTRATOR in self.roles
