"""The small case of the end-to-end tests, made and appraised once."""

from tests.small_case import small_appraisal, small_case_folder

__all__ = ["small_appraisal", "small_case_folder"]
