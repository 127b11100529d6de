"""The settings sheet, returned as bytes."""
