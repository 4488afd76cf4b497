"""One invented appraisal and its page, made once for all tests of the report."""

from __future__ import annotations

import pytest

from evenfire.appraisal.results import Appraisal
from evenfire.report.page import report_page
from tests.report.made_appraisal import made_appraisal
from tests.report.page_reader import PageReader, read_page


@pytest.fixture(scope="session")
def appraisal() -> Appraisal:
    return made_appraisal()


@pytest.fixture(scope="session")
def page_text(appraisal: Appraisal) -> str:
    return report_page(appraisal)


@pytest.fixture(scope="session")
def page(page_text: str) -> PageReader:
    return read_page(page_text)
