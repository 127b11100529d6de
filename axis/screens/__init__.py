"""The Streamlit pages; no arithmetic."""
