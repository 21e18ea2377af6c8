"""Time Planck's law: a million values per call, against two ways to do it by hand.

    python scripts/benchmark_photons.py

Prints how many times faster than evaluating it value by value with quantities, and
how many times slower than the bare formula in numpy. The issue asks for at least 100
and at most 2. Each time is the best of several; the loop runs over fewer values and is
scaled, which favours it: caches stay warm.
"""

import timeit

import numpy as np
from astropy import constants as c
from astropy import units as u

from starkiln.photons import planck, planck_wavelength

VALUES = 1_000_000
LOOP_VALUES = 500
TEMPERATURE = 5772.0
H, LIGHT, K = 6.62607015e-34, 299792458.0, 1.380649e-23


def bare(wavelength: np.ndarray) -> np.ndarray:
    """Evaluate the formula as one would type it in numpy."""
    x = H * LIGHT / (wavelength * K * TEMPERATURE)
    return 2.0 * H * LIGHT**2 / wavelength**5 / np.expm1(x)


def quantity_loop(wavelength: np.ndarray) -> list:
    """Evaluate the formula with quantities, value by value."""
    t = TEMPERATURE * u.K
    results = []
    for value in wavelength:
        at = value * u.m
        x = (c.h * c.c / (at * c.k_B * t)).to_value(u.one)
        radiance = 2.0 * c.h * c.c**2 / at**5 / np.expm1(x) / u.sr
        results.append(radiance.to("W / (m2 sr m)"))
    return results


def best(call: object, repeat: int = 7) -> float:
    """Return the shortest time of a call, in seconds."""
    return min(timeit.repeat(call, number=1, repeat=repeat))


def main() -> None:
    """Time, compare and print."""
    wavelength = np.geomspace(1e-7, 1e-3, VALUES)
    quantities = wavelength * u.m
    few = wavelength[:: VALUES // LOOP_VALUES]
    for ours, theirs in zip(planck(few, TEMPERATURE), quantity_loop(few), strict=True):
        assert abs(ours / theirs - 1.0) < 1e-10
    by_hand = best(lambda: bare(wavelength))
    door = best(lambda: planck(quantities, TEMPERATURE * u.K))
    kernel = best(lambda: planck_wavelength(wavelength, TEMPERATURE))
    loop = best(lambda: quantity_loop(few), 3) * VALUES / len(few)
    print(f"bare numpy            {1e3 * by_hand:10.2f} ms for {VALUES:,} values")
    print(f"planck, quantities    {1e3 * door:10.2f} ms   {door / by_hand:.2f} x bare numpy")
    print(f"planck_wavelength     {1e3 * kernel:10.2f} ms   {kernel / by_hand:.2f} x bare numpy")
    print(f"quantities in a loop  {1e3 * loop:10.0f} ms   {loop / door:,.0f} x planck")
    met = door / by_hand <= 2.0 and loop / door >= 100.0
    print("targets (at most 2 x bare numpy, at least 100 x a loop):", "met" if met else "MISSED")


if __name__ == "__main__":
    main()
