"""The module that xlwings imports: its public attributes are the RB_ functions and nothing else.

Name it in xlwings' setting UDF MODULES, or let the VBA module written by `rigidsheet excel` call it.
"""

from . import excel_calls as _calls

# no import under a public name in this module: every public attribute is a function of the list
globals().update(_calls.exported(__name__))

__all__ = tuple(name for name in globals() if name.startswith("RB_"))
