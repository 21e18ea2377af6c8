"""What a figure really shows: every text that is drawn, and whether two lie over each other."""

from __future__ import annotations

import itertools

import numpy as np
from matplotlib.text import Text

from starkiln.report import style


def drawn_texts(figure, monkeypatch):
    """Return {text: corners in pixels} as pairs; ticks outside the axes are not drawn."""
    seen = {}
    original = Text.draw

    def record(self, renderer):
        if self.get_visible() and self.get_text().strip():
            seen[id(self)] = self
        return original(self, renderer)

    with monkeypatch.context() as patch:
        patch.setattr(Text, "draw", record)
        with style():
            figure.draw_without_rendering()
    return [(item.get_text(), _corners(item)) for item in seen.values()]


def _corners(text):
    box = text.get_window_extent()
    angle = text.get_rotation()
    text.set_rotation(0)
    flat = text.get_window_extent()
    text.set_rotation(angle)
    middle = np.array([box.x0 + box.x1, box.y0 + box.y1]) / 2
    half = np.array([[-1, -1], [1, -1], [1, 1], [-1, 1]]) * [flat.width / 2, flat.height / 2]
    turn = np.radians(angle)
    matrix = np.array([[np.cos(turn), -np.sin(turn)], [np.sin(turn), np.cos(turn)]])
    return middle + half @ matrix.T


def overlapping(texts):
    """Return the pairs of texts whose boxes share more than a hair."""
    return [
        (first[0], second[0])
        for first, second in itertools.combinations(texts, 2)
        if _overlap(first[1], second[1])
    ]


def outside(figure, texts):
    """Return the texts that reach over the figure's edge."""
    width, height = figure.bbox.width, figure.bbox.height
    return [
        text
        for text, corners in texts
        if corners.min() < -1 or corners[:, 0].max() > width + 1 or corners[:, 1].max() > height + 1
    ]


def _overlap(first, second, hair=1.5):
    """Separating axes of two rectangles, with `hair` pixels allowed."""
    for corners in (first, second):
        for edge in (corners[1] - corners[0], corners[2] - corners[1]):
            length = np.hypot(*edge)
            if length == 0.0:
                continue
            a, b = first @ edge / length, second @ edge / length
            if min(a.max(), b.max()) - max(a.min(), b.min()) < hair:
                return False
    return True
