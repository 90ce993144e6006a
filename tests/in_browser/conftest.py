"""One built site for all browser tests of a session."""

from __future__ import annotations

from pathlib import Path

import pytest
from small_tree import small_tree

from builder.collection.folders import shipped_folder
from builder.collection.inspection import Inspection, inspect
from builder.collection.reference import Reference
from builder.site.build import build_site
from builder.site.writer import write_site

ISSUE_DATE = "2026-12-01"


@pytest.fixture(scope="session")
def inspection() -> Inspection:
    """The shipped constants, read and checked."""
    return inspect([shipped_folder("constants")])


@pytest.fixture(scope="session")
def reference(inspection: Inspection) -> Reference:
    """The reference of the shipped constants."""
    assert inspection.reference is not None
    return inspection.reference


@pytest.fixture(scope="session")
def site(
    inspection: Inspection, reference: Reference, tmp_path_factory: pytest.TempPathFactory
) -> Path:
    """The folder of the built site."""
    folder = tmp_path_factory.mktemp("site") / "site_out"
    write_site(build_site(reference, inspection.findings, ISSUE_DATE), folder)
    return folder


@pytest.fixture(scope="session")
def few_site(tmp_path_factory: pytest.TempPathFactory) -> Path:
    """A site of the twelve salts of small_tree.py, where what is found is known by heart."""
    found = inspect([small_tree() / "constants"])
    assert found.reference is not None
    folder = tmp_path_factory.mktemp("few") / "site_out"
    write_site(build_site(found.reference, found.findings, ISSUE_DATE), folder)
    return folder
