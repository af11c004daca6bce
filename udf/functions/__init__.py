"""The declared cell functions, one module a subject, each with a FUNCTIONS tuple."""
