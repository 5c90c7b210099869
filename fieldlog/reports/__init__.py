"""Reports of visits: their content as worded text, their pages, the archival form and the seal."""
