"""`python -m axis` is `settlepoint`."""

from axis.cli import main

main()
