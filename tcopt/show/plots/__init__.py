"""Pictures of results, one kind a file; each function returns a matplotlib figure.

matplotlib is slow to import, so nothing imports this package before a picture is wanted.
"""

from tcopt.show.plots.causes import causes_picture
from tcopt.show.plots.curves import current_picture, residual_picture
from tcopt.show.plots.encode import encoded
from tcopt.show.plots.front import front_picture
from tcopt.show.plots.headroom import headroom_picture
from tcopt.show.plots.map import menu_map, resistor_map
from tcopt.show.plots.ratio import ratio_picture
from tcopt.show.plots.spread import (
    codes_picture,
    fan_picture,
    histogram_picture,
    spread_causes_picture,
)

__all__ = [
    "causes_picture",
    "codes_picture",
    "current_picture",
    "encoded",
    "fan_picture",
    "front_picture",
    "headroom_picture",
    "histogram_picture",
    "menu_map",
    "ratio_picture",
    "residual_picture",
    "resistor_map",
    "spread_causes_picture",
]
