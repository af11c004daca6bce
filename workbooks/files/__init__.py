"""Reading a workbook file as a package of parts, and writing values back into it."""
