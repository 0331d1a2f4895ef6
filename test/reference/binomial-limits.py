"""Exact (Clopper-Pearson) limits of a probability by scipy's beta quantiles: writes binomial-limits.csv.

Run: /usr/bin/python3 binomial-limits.py > binomial-limits.csv   (needs scipy)
"""
from scipy.stats import beta

print("# Limits of p from successes in trials; written by binomial-limits.py.")
print("successes,trials,confidence,lower,upper")
for k, n in ((0, 10), (1, 10), (5, 10), (10, 10), (190, 200), (200, 200), (1600, 2000), (1900, 2000), (1980, 2000), (37, 2000), (1999, 2000)):
    for confidence in (0.95, 0.999, 0.9998):
        tail = (1 - confidence) / 2
        lower = beta.ppf(tail, k, n - k + 1) if k > 0 else 0.0
        upper = beta.isf(tail, k + 1, n - k) if k < n else 1.0
        print(f"{k},{n},{confidence},{lower:.12g},{upper:.12g}")
