"""Speed, measured and printed: `python -m tests.bench` from the checkout. No test, and no threshold is kept here."""
