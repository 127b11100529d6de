"""Starts the screens: `streamlit run app.py` does the same as `settlepoint app`."""

from axis.screens.pages import main

main()
