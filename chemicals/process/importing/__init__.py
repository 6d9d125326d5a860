"""Import of past records: a CSV or XLSX file, of which each row is an entry, is understood as a whole or not at all."""
