"""What a user states about an axis: frozen dataclasses and their validation, no physics."""
