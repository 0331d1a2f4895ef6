"""Decay rate per mode, pi K(sech s) / K(tanh s) with s = pi a/h: writes decay-rate.csv.

320 digits because tanh s rounds to one otherwise. mpmath's ellipk takes the parameter m = k^2.
Run: /usr/bin/python3 decay-rate.py   (needs mpmath)
"""
from mpmath import ellipk, mp, mpf, nstr, pi, sech, tanh

mp.dps = 320
print("# pi K(sech pi/ratio) / K(tanh pi/ratio), ratio = height / half-length; written by decay-rate.py.")
print("ratio,rate")
for ratio in ("0.01", "0.1", "0.25", "0.5", "1", "2", "5", "100"):
    s = pi / mpf(ratio)
    print(f"{ratio},{nstr(pi * ellipk(sech(s) ** 2) / ellipk(tanh(s) ** 2), 20)}")
