"""Places of a network put together by hand, in which nothing of a description is found."""

import numpy as np

from enclosure_check.network.network import Places

NO_PLACES = Places(
    ambient=0,
    air=0,
    air_nodes=np.zeros(0, dtype=np.intp),
    air_heights=np.zeros(0),
    wall_outside={},
    wall_inside={},
    boards={},
    parts={},
)
