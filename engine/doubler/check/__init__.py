"""The check of a colleague's workbook: the findings, the rules that raise them, and the check record."""
