"""What a run rests on, as a reader cites it and as BibTeX."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np

from starkiln._version import __version__
from starkiln.passbands import load_band
from starkiln.report._view import plain_text
from starkiln.runner import Run
from starkiln.store import read_data_table

_TEXTS = ("key", "authors", "title", "journal", "volume", "page", "doi")


@dataclass(frozen=True)
class Reference:
    """One publication or program.

    Attributes
    ----------
    key : str
        BibTeX key.
    authors, title, journal, volume, page, doi : str
        In BibTeX's spelling; empty where there is none.
    year : int
        0 where there is none.
    """

    key: str
    authors: str
    title: str
    journal: str
    volume: str
    page: str
    year: int
    doi: str

    @property
    def text(self) -> str:
        """The reference as one line of text."""
        authors = self.authors.replace("{", "").replace("}", "").replace(" and others", " et al.")
        names = authors.replace(" and ", "; ")
        year = f" {self.year}" if self.year else ""
        place = ", ".join(part for part in (self.journal, self.volume, self.page) if part)
        doi = f", doi:{self.doi}" if self.doi else ""
        return f"{names}{year}, {self.title}, {place}{doi}"

    @property
    def bibtex(self) -> str:
        """The reference as a BibTeX entry."""
        fields = {
            "author": self.authors.replace("\u0161", r"{\v{s}}"),
            "title": "{" + self.title.replace("_", r"\_").replace("&", r"\&") + "}",
            "journal" if self.volume else "note": self.journal,
            "volume": self.volume,
            "pages": self.page,
            "year": str(self.year or "n.d."),
            "doi": self.doi,
        }
        lines = [f"  {name} = {{{value}}}," for name, value in fields.items() if value]
        kind = "article" if self.volume else "misc"
        return "\n".join([f"@{kind}{{{self.key},", *lines, "}"])


def references(run: Run) -> list[Reference]:
    """Return what a run rests on: the program, its libraries, methods and passbands."""
    uses = _uses(run)
    found = [
        Reference("starkiln", "{The starkiln developers}", f"starkiln {__version__}", "software",
                  "", "", 0, "")
    ]  # fmt: skip
    for row in read_data_table("report", "references.ecsv"):
        if str(row["use"]) in uses:
            texts = {key: plain_text(row[key]) for key in _TEXTS}
            found.append(Reference(**texts, year=int(row["year"])))
    return found


def bibtex(run: Run) -> str:
    """Return the BibTeX entries of everything that a run rests on."""
    return "\n\n".join(item.bibtex for item in references(run)) + "\n"


def _uses(run: Run) -> set[str]:
    made = run.meta["identity"]
    bands = np.asarray(run.photometry["band"])[np.asarray(run.photometry["used"])]
    uses = {"always", f"engine {made['engine']}", f"law {run.settings.dust_law}"}
    uses |= {f"library {name}" for name in made["versions"]}
    uses |= {f"system {load_band(str(band)).system}" for band in set(bands)}
    if "distance" in run.results.colnames:
        uses |= {"distance", f"distance {run.settings.distance_prior}"}
    return uses
