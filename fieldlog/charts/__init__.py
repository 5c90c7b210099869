"""Charts as one list of plain shapes, with a writer for pages and one for PDF."""
