"""A calc workbook as data: cells and declared units, formula graph, values and units over N cases."""
