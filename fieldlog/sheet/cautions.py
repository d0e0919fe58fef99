"""What the product says before anyone walks out with it. Said at joining, one tap away, printed on reports."""

from __future__ import annotations

from typing import Final

CAUTIONS: Final = (
    "Heat and thirst kill: carry water for the way back, rest in shade, never walk out alone.",
    "Tell someone where you go and when you will be back. This notebook does not call for help.",
    "Stay out of washes and off fans when rain is about anywhere upstream: flash floods come without warning.",
    "Lee slopes collapse: do not dig, sit or park beneath a slip face or an undercut.",
    "Vehicles roll on dunes and bog on soft ground: know the ground before you drive it.",
    "Unexploded ordnance and mines: ask the local authority before you enter; do not touch; go back the way you came.",
    "Positions and phone compasses can be wrong. This is no navigation, rescue or engineering-design instrument.",
    "Decisions that can hurt someone rest with local codes and licensed practitioners.",
)
