"""Everything that touches the disk: the log, what is derived from it, people, files; all SQL is here."""
