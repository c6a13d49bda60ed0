"""Grain sizes: scales and their classes, phi, measures of a distribution, dimensionless grain numbers.

Importing this package registers the formulas of the family `grain`.
"""

from logkit.grains.distribution import (
    SORTING_LIMITS,
    folk_ward_kurtosis,
    folk_ward_mean,
    folk_ward_skewness,
    folk_ward_sorting,
    largest_clast_mean,
    sorting_class,
    sorting_class_upper_limit,
)
from logkit.grains.numbers import dimensionless_diameter, particle_reynolds_number, submerged_gravity
from logkit.grains.phi import (
    class_midpoint,
    class_spread,
    diameter_from_phi,
    half_phi,
    iso14688,
    phi_from_diameter,
    udden_wentworth,
)
from logkit.grains.scales import SCALES, Scale, SizeClass, class_of, interval_for, scale

__all__ = [
    "SCALES", "SORTING_LIMITS", "Scale", "SizeClass", "class_midpoint", "class_of", "class_spread",
    "diameter_from_phi", "dimensionless_diameter", "folk_ward_kurtosis", "folk_ward_mean", "folk_ward_skewness",
    "folk_ward_sorting", "half_phi", "interval_for", "iso14688", "largest_clast_mean",
    "particle_reynolds_number", "phi_from_diameter", "scale", "sorting_class", "sorting_class_upper_limit",
    "submerged_gravity", "udden_wentworth",
]  # fmt: skip
