"""What leaves: solids, cut files, bills and pages, the folder they come in, and the command."""
