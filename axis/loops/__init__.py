"""Plant, prototypes, loop design, filters, margins and textbook settings."""
