"""The one tree of exceptions that starkiln raises.

Every message names the value, its bounds, its unit and the remedy; for a
table, the file, the row and the column.
"""


class StarkilnError(Exception):
    """Base of every error that starkiln raises on purpose."""

    #: Exit code of the command line when this error ends a command.
    exit_code = 1


class InputError(StarkilnError, ValueError):
    """A value, an option or a file that cannot be used as given."""

    exit_code = 2


class BandError(InputError):
    """A passband that is unknown, malformed or used outside its coverage."""


class DustError(InputError):
    """A dust law that is unknown or used outside its range."""


class CatalogueError(InputError):
    """A catalogue or column sheet that cannot be understood."""


class SettingsError(InputError):
    """A setting that is unknown, of the wrong kind or out of bounds."""


class RunFolderError(InputError):
    """A run folder that holds another run, half a run, or none."""


class StorageError(StarkilnError, OSError):
    """A file that cannot be written or read: disk full, read-only, damaged."""


class ConvergenceError(StarkilnError, RuntimeError):
    """A numerical method that did not converge; `partial` keeps what it reached."""

    def __init__(self, message: str, partial: object = None) -> None:
        super().__init__(message)
        self.partial = partial
