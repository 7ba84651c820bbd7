"""The arithmetic of titrations: pure functions of numbers, without a database, a site or a worker."""

VERSION = "1.1.0"
