"""Write the CIE 1931 observer's table from a copy that a package of colour science ships.

    python -m pip install colour-science==0.4.7      (beside starkiln)
    python scripts/build_cie_observer.py

The package (BSD-3-Clause) holds the colour-matching functions at 1 nm as the CIE
publishes them; kept are the rows at 5 nm, the step of CIE 15:2004, table 4.
"""

from datetime import date
from pathlib import Path

import colour
from astropy.table import Table

OUTPUT = Path(__file__).parents[1] / "src/starkiln/photons/data/cie_1931_2deg.ecsv"


def main() -> None:
    """Build and write the table."""
    functions = colour.MSDS_CMFS["CIE 1931 2 Degree Standard Observer"]
    rows = [
        (int(w), *values)
        for w, values in zip(functions.wavelengths, functions.values, strict=True)
        if int(w) % 5 == 0
    ]
    names = ("wavelength", "x_bar", "y_bar", "z_bar")
    table = Table(rows=rows, names=names, dtype=(int, float, float, float))
    table["wavelength"].unit = "nm"
    table["wavelength"].description = "wavelength in air"
    for name in names[1:]:
        table[name].description = f"colour-matching function {name}, equal-energy normalised"
    table.meta = {
        "description": "Colour-matching functions of the CIE 1931 standard observer (2 degrees)",
        "reference": "CIE 15:2004, Colorimetry, 3rd edition, table 4 (ISO/CIE 11664-1)",
        "source": "colour-science 0.4.7, data set 'CIE 1931 2 Degree Standard Observer'",
        "licence": "BSD-3-Clause, copyright 2013 Colour Developers",
        "retrieved": date.today().isoformat(),
    }
    table.write(OUTPUT, format="ascii.ecsv", overwrite=True)
    print(f"{OUTPUT.name}: {len(table)} rows")


if __name__ == "__main__":
    main()
