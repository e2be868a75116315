"""Analysis → bytes: the document, the table, the figure and the sheet."""
