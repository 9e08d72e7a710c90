"""The worksheet functions in spreadsheet programs: thin skins over the catalogue, no function is written by hand."""
