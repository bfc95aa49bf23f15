"""Published and computed values the engine is held to, each file with its source."""
