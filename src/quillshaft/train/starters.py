"""Commented train files to start from, and the JSON schema that editors complete them with."""

from __future__ import annotations

from importlib.resources import files

KINDS = ("pump", "generator-set", "fan")
SCHEMA_FILE = "train-file.schema.json"


def starter_text(kind: str) -> str:
    """Text of the starter for one of KINDS. Raises FileNotFoundError for any other kind."""
    return (files("quillshaft.train") / "starter_files" / f"{kind}.toml").read_text(encoding="utf-8")


def schema_text() -> str:
    """Text of the shipped JSON schema of the train file."""
    return (files("quillshaft.train") / SCHEMA_FILE).read_text(encoding="utf-8")
