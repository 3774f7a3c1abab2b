"""The table of units: the list that a person edits, the file that the service reads, and the script between them."""
