"""Pictures and documents from finished results."""
