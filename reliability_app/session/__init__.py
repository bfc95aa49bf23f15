"""The document: what the user has, chose and computed; plain Python without Qt."""
