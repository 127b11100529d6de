"""Text on disk to description and back; the only room that touches the disk for input."""
