"""Which heading is what: the file's headings and the sheet's bindings put together."""

from __future__ import annotations

from starkiln.observations._files import Source
from starkiln.observations._from_python import nearest
from starkiln.observations._headings import (
    NAME_HEADINGS,
    Meaning,
    heading_key,
    looks_like_band,
    meaning_of,
    split_unit,
)
from starkiln.observations._plan import LEFT_OUT, UNUSABLE, Layout
from starkiln.observations._sheet import Binding, Sheet

__all__ = ["Headings"]

_NO_BINDING = Binding()


class Headings:
    """The meaning of every heading; what is wrong goes into `layout.errors`.

    Attributes
    ----------
    found : dict
        (role, target) -> heading, of the columns that mean something.
    """

    def __init__(self, source: Source, sheet: Sheet, layout: Layout) -> None:
        self.source, self.sheet, self.layout = source, sheet, layout
        self._bound: dict[str, Binding] = {}
        for text, binding in sheet.columns.items():
            if heading := self._in_file(text, "binds"):
                self._bound[heading] = binding
        self._claims = self._claimed()
        self.found = self._meanings()
        self._take_name()

    def binding(self, heading: str) -> Binding:
        """Return what the sheet says of a heading."""
        return self._bound.get(heading, _NO_BINDING)

    def partner(self, role: str, target: str, heading: str) -> str:
        """Heading of the error, signal to noise or limit flag of a column, or empty."""
        for other, claim in self._claims.items():
            if claim == (role, heading):
                return other
        return self.found.get((role, target), "")

    def _in_file(self, text: str, verb: str) -> str:
        """Return the file's heading for one that the sheet names, or empty."""
        if text in self.source.headings:
            return text
        same = [h for h in self.source.headings if h.casefold() == text.strip().casefold()]
        if len(same) == 1:
            return same[0]
        near = nearest(text, self.source.headings)
        hint = f"; the nearest is '{near[0]}'" if near else ""
        self.layout.errors.append(
            f"{self.sheet.path} {verb} '{text}', a column that {self.source.path} has not{hint}"
        )
        return ""

    def _claimed(self) -> dict[str, tuple[str, str]]:
        """Headings that the sheet names as error, signal to noise or limit of another."""
        claims: dict[str, tuple[str, str]] = {}
        for heading, binding in self._bound.items():
            for role in ("error", "signal_to_noise", "limit"):
                text = getattr(binding, role)
                if isinstance(text, str) and text:
                    other = self._in_file(text, f"gives as {role} of '{heading}'")
                    if other:
                        claims[other] = (role, heading)
        return claims

    def _meanings(self) -> dict[tuple[str, str], str]:
        left_out = self._left_out()
        found: dict[tuple[str, str], str] = {}
        for heading in self.source.headings:
            if heading in self._claims:
                continue
            meaning = self._meaning(heading)
            if heading in left_out or (meaning and meaning.target in left_out):
                self.layout.mark(heading, remark=LEFT_OUT)
            elif meaning is None and heading in self._bound:
                self.layout.mark(heading, remark=UNUSABLE)
                self.layout.errors.append(
                    f"{self.sheet.path}: [columns] '{heading}' does not say what it means; add "
                    'means = "2MASS J", or what it is'
                )
            elif meaning is None:
                self._unknown(heading)
            elif meaning.role == "name":
                found["name", heading] = heading
            else:
                self._put(found, meaning, heading)
        return found

    def _meaning(self, heading: str) -> Meaning | None:
        means = self.binding(heading).means
        return means or meaning_of(heading) or meaning_of(split_unit(heading)[0])

    def _left_out(self) -> set[str]:
        known = set()
        for text in self.sheet.leave_out:
            meaning = meaning_of(text)
            if text not in self.source.headings and meaning and meaning.role == "value":
                known.add(meaning.target)
            elif heading := self._in_file(text, "leaves out"):
                known.add(heading)
        return known

    def _put(self, found: dict[tuple[str, str], str], meaning: Meaning, heading: str) -> None:
        key = (meaning.role, meaning.target)
        other = found.setdefault(key, heading)
        if other == heading:
            return
        chosen = [h for h in (other, heading) if self.binding(h).means]
        if len(chosen) == 1:
            found[key] = chosen[0]
            loser = heading if chosen[0] == other else other
            self.layout.mark(loser, remark=f"the sheet takes '{chosen[0]}' instead")
            return
        self.layout.mark(heading, meaning.heading, remark=UNUSABLE)
        self.layout.errors.append(
            f"{self.source.path}: the columns '{other}' and '{heading}' both mean "
            f'{meaning.heading}; leave one out in a column sheet: leave_out = ["{heading}"]'
        )

    def _unknown(self, heading: str) -> None:
        head, near = looks_like_band(split_unit(heading)[0])
        if near:
            self.layout.mark(heading, remark=UNUSABLE)
            self.layout.errors.append(
                f"{self.source.path}: the heading '{heading}' looks like a band, but no band is "
                f"called so (nearest: {', '.join(near)}); rename it, or say in a column sheet "
                f'what it is, [columns] "{heading}" = "{head}{near[0]}", or leave_out = '
                f'["{heading}"]'
            )

    def _take_name(self) -> None:
        names = [heading for role, heading in self.found if role == "name"]
        names.sort(key=self._name_rank)
        for other in names[1:]:
            self.layout.mark(other, remark=f"the name is taken from '{names[0]}'")
        if names:
            self.layout.name = names[0]
            self.layout.mark(names[0], "name", used=True)
        else:
            self.layout.warnings.append(
                f"{self.source.path}: no column of names; stars are called by their row"
            )

    def _name_rank(self, heading: str) -> int:
        return -1 if self.binding(heading).means else NAME_HEADINGS.index(heading_key(heading))
