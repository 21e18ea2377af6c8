"""Files: data tables that carry their source, and writes that are never half done.

`read_data_table` reads the project's own ECSV tables and refuses one without
unit, description, reference, licence and retrieval date; `atomic_write` writes
any file whole or not at all.
"""

from starkiln.store._atomic import atomic_write
from starkiln.store._data import data_path, read_data_table

__all__ = ["atomic_write", "data_path", "read_data_table"]
