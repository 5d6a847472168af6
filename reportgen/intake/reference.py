"""Network data referred to the 50 ohm that everything behind the reader computes with.

References
----------
.. [1] K. Kurokawa, Power waves and the scattering matrix, IEEE Transactions on Microwave Theory
       and Techniques, vol. 13, no. 2, March 1965, pages 194 to 202.
"""

from __future__ import annotations

import numpy as np

from reportgen.model import ComplexArray
from reportgen.physics.network import ANALYZER_OHM

# scikit-rf takes 0.14 s to import and few sweeps need it: hence the imports inside


def scattering_at_50_ohm(s: ComplexArray, reference_ohm: tuple[float, ...]) -> ComplexArray:
    """Scattering parameters of the same network re 50 ohm at each port [ratio].

    Parameters
    ----------
    s : (F, n, n) complex array
        Re `reference_ohm` [ratio].
    reference_ohm : tuple of n floats
        Real reference of each port [ohm].

    Raises
    ------
    numpy.linalg.LinAlgError
        No such parameters exist, as for an impedance of -50 ohm.

    Notes
    -----
    Power waves, eq. (18) of [1]_, by way of the impedance matrix. A network without one (a
    lossless through) comes out with an error of about 1e-9.
    """
    from skrf.network import renormalize_s

    old = np.asarray(reference_ohm, dtype=complex)
    return np.asarray(renormalize_s(s, old, ANALYZER_OHM, s_def="power"))


def scattering_of_impedance(impedance_ohm: ComplexArray) -> ComplexArray:
    """Scattering parameters re 50 ohm [ratio] of impedance matrices, (F, n, n) [ohm].

    Raises
    ------
    numpy.linalg.LinAlgError
        No such parameters exist, as for an impedance of -50 ohm.

    Notes
    -----
    Power waves, eq. (18) of [1]_.
    """
    from skrf.network import z2s

    return np.asarray(z2s(impedance_ohm, ANALYZER_OHM, s_def="power"))
