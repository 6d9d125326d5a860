"""Count days: somebody walks along the shelves and says what is there; differences become entries."""
