"""Scenario files and everything else that is read or written: formats only, no decisions."""

from deliberate.files.reading import decode, read
from deliberate.files.resources import demo_scenarios, schema_path
from deliberate.files.writing import encode, write

__all__ = ["decode", "demo_scenarios", "encode", "read", "schema_path", "write"]
