"""Method 1: how far a sampling plane is from what disturbs the flow, in diameters of the duct."""

from __future__ import annotations

from reporter.equation import Citation, Value, equation

#: Where the method says how far a plane has to be from a disturbance, at best and at least.
DISTANCES = Citation("m1", "11.1.1")
_EQUIVALENT = Citation("m1", "11.1.1", "equivalent diameter of a rectangular section")


@equation("D_e", "*c", {"length": "*c", "width": "*c"}, _EQUIVALENT, symbols={"length": "L", "width": "W"})
def equivalent_diameter(*, length: Value, width: Value) -> Value:
    """Diameter a rectangular duct is taken to have for its distances.

    Parameters
    ----------
    length
        Inside length of the cross-section [any length].
    width
        Inside width of the cross-section [same unit].

    Returns
    -------
    float
        Equivalent diameter [same unit].

    Examples
    --------
    >>> equivalent_diameter(length=2.0, width=2.0)
    2.0
    """
    return 2 * length * width / (length + width)


@equation("n_D", "1", {"distance": "*c", "diameter": "*c"}, DISTANCES, symbols={"distance": "l", "diameter": "D"})
def in_diameters(*, distance: Value, diameter: Value) -> Value:
    """A distance along the duct in diameters.

    Parameters
    ----------
    distance
        From the sampling plane to a disturbance [any length].
    diameter
        Inside or equivalent diameter of the duct [same unit], not zero.

    Returns
    -------
    float
        Distance [diameters].
    """
    return distance / diameter
