"""Pure judgement: from what is on record to what may be said of it."""
