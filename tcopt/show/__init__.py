"""Results for the eye and for other programs: documents, tables, pictures; computes nothing."""
