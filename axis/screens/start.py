"""What `settlepoint app` has streamlit run; `app.py` at the top of a checkout does the same."""

from axis.screens.pages import main

main()
