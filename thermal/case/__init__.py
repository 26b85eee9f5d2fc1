"""Case files: what the user wrote, checked, in SI."""

from thermal.case.case import Case
from thermal.case.load import as_run, from_text, load_case, with_changes

__all__ = ["Case", "as_run", "from_text", "load_case", "with_changes"]
