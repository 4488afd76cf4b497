"""One steady hypothesis profile, and the small case of the end-to-end tests, appraised once."""

from hypothesis import settings

from tests.small_case import small_appraisal, small_case_folder

__all__ = ["small_appraisal", "small_case_folder"]

settings.register_profile("steady", derandomize=True, deadline=None)
settings.load_profile("steady")
