"""The panels beside the charts: basis, sentence, readings, cautions."""
