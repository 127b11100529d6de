"""The pages of docs/ hold what they say."""
