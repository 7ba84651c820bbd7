"""Marram Quay Laboratory: an invented laboratory with six months of invented work, made by the services."""
