"""One function a user action; owns the transaction. No SQL, no HTTP, no layout."""
