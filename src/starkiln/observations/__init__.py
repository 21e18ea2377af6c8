"""Stars and catalogues: photometry as observers keep it, understood and checked.

A catalogue is opened by `read_catalogue`, which finds out what each column is; its
rows come out as `Star` or, with the reason, as `BadRow`. `Star(...)` makes one by
hand. Every measurement is kept as band mean of the flux per wavelength.
"""

from starkiln.observations._catalogue import Catalogue, read_catalogue, survey_catalogue
from starkiln.observations._columns import read_columns
from starkiln.observations._measure import Measurement
from starkiln.observations._plan import Column
from starkiln.observations._sheet import Sheet, read_sheet
from starkiln.observations._star import BadRow, Star

__all__ = [
    "BadRow",
    "Catalogue",
    "Column",
    "Measurement",
    "Sheet",
    "Star",
    "read_catalogue",
    "read_columns",
    "read_sheet",
    "survey_catalogue",
]
