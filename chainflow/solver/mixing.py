"""Anderson's mixing: the next point of a fixed-point iteration from the last ones."""

from __future__ import annotations

import numpy as np


def anderson(points: list[np.ndarray], images: list[np.ndarray], scales: np.ndarray) -> np.ndarray:
    """Return the next point: least squares over the residuals of the last ones, scaled."""
    residuals = [(y - x) / np.maximum(scales, 1e-300) for x, y in zip(points, images, strict=True)]
    if len(points) == 1:
        return images[-1]
    differences = np.array([residuals[-1] - r for r in residuals[:-1]]).T
    weights, *_ = np.linalg.lstsq(differences, residuals[-1], rcond=1e-12)
    return images[-1] - sum(
        (w * (images[-1] - y) for w, y in zip(weights, images[:-1], strict=True)),
        np.zeros_like(images[-1]),
    )
