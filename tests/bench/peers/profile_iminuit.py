"""Peer for the profile benchmark: the fit of fit_iminuit.py, then the profile of Gamma at 30 places, within two errors,
the other three parameters minimised at each (iminuit's mnprofile). Prints time per profile."""
import time
import numpy as np
import fit_iminuit as peer

if __name__ == "__main__":
    rng = np.random.default_rng(1)
    mi = peer.fit(rng.poisson(peer.expected(peer.M0, peer.G0, 1.0, 2.0)))
    times = []
    for _ in range(3):
        t = time.perf_counter()
        mi.mnprofile("gamma", size=30, bound=2)
        times.append(time.perf_counter() - t)
    print(f"{1e3 * np.median(times):.0f} ms a profile of 30 places")
