"""LibreOffice Calc: an extension made from the declarations, and the worker process it asks.

`build.py` writes the extension and `worker.py` answers its calls; both run where Rigidsheet is installed.
`addin.py`, `rigidsheet_channel.py` and `rigidsheet_repair.py` travel inside the extension and run in the
Python of the office, which has nothing but its standard library.
"""
