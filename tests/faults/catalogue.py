"""The sound boards and the faults on them."""

from __future__ import annotations

from .cider_press import CIDER_PRESS
from .cider_press_faults import CIDER_PRESS_FAULTS
from .cold_store import COLD_STORE
from .cold_store_faults import COLD_STORE_FAULTS
from .frost_fan import FROST_FAN
from .frost_fan_faults import FROST_FAN_FAULTS
from .irrigation_pump import IRRIGATION_PUMP
from .irrigation_pump_faults import IRRIGATION_PUMP_FAULTS
from .mast_beacon import MAST_BEACON
from .mast_beacon_faults import MAST_BEACON_FAULTS
from .published import PUBLISHED

OWN = (FROST_FAN, CIDER_PRESS, COLD_STORE, MAST_BEACON, IRRIGATION_PUMP)

SOUND = (*OWN, *PUBLISHED)

FAULTS = (
    *FROST_FAN_FAULTS,
    *CIDER_PRESS_FAULTS,
    *COLD_STORE_FAULTS,
    *MAST_BEACON_FAULTS,
    *IRRIGATION_PUMP_FAULTS,
)
