"""Files: data tables that carry their source, and writes that are never half done.

`read_data_table` reads the project's own ECSV tables and refuses one without
unit, description, reference, licence and retrieval date; `atomic_write` writes
any file whole or not at all; `write_table` writes a table so in one of `FORMATS`,
the same bytes for the same table.
"""

from starkiln.store._atomic import atomic_write
from starkiln.store._data import data_path, read_data_table
from starkiln.store._read import read_table, table_name
from starkiln.store._tables import FORMATS, table_bytes, write_table

__all__ = [
    "FORMATS",
    "atomic_write",
    "data_path",
    "read_data_table",
    "read_table",
    "table_bytes",
    "table_name",
    "write_table",
]
