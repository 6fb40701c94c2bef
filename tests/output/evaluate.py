"""Reads SVG path data back into points, independently of the code that writes it."""

import re

import numpy as np

_TOKEN = re.compile(r"[MCAZ]|-?\d+(?:\.\d+)?")
_COUNTS = {"M": 2, "C": 6, "A": 7, "Z": 0}


def loops(data: str, per_step: int = 40) -> list[np.ndarray]:
    """Closed loops of complex points, one a sub-path."""
    tokens = _TOKEN.findall(data)
    assert "".join(tokens) == data.replace(" ", ""), "path data holds something else than M, C, A, Z and numbers"
    found: list[list[complex]] = []
    k, at = 0, 0j
    while k < len(tokens):
        command = tokens[k]
        numbers = [float(t) for t in tokens[k + 1 : k + 1 + _COUNTS[command]]]
        k += 1 + _COUNTS[command]
        if command == "M":
            at = complex(*numbers)
            found.append([at])
        elif command == "C":
            b, c, d = (complex(*numbers[j : j + 2]) for j in (0, 2, 4))
            t = np.linspace(0, 1, per_step)[1:]
            found[-1] += list((1 - t) ** 3 * at + 3 * t * (1 - t) ** 2 * b + 3 * t**2 * (1 - t) * c + t**3 * d)
            at = d
        elif command == "A":
            radius, _, _, large, left, x, y = numbers
            assert not large, "arcs are written shorter than half a turn"
            found[-1] += _arc(at, complex(x, y), radius, bool(left), per_step)
            at = complex(x, y)
    return [np.array(loop) for loop in found]


def _arc(start: complex, end: complex, radius: float, left: bool, count: int) -> list[complex]:
    half = abs(end - start) / 2
    side = 1j if left else -1j
    centre = (start + end) / 2 + side * (end - start) / (2 * half) * np.sqrt(radius**2 - half**2)
    turn = np.angle((end - centre) / (start - centre))
    return list(centre + (start - centre) * np.exp(1j * turn * np.linspace(0, 1, count)[1:]))


def area(points: np.ndarray) -> float:
    """Signed area of a closed polygon."""
    return float(np.sum(np.imag(np.conj(points) * np.roll(points, -1)))) / 2
