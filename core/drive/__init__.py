"""The drive of a document: what turns with which shaft, what a duty asks, how it stands still, how it is balanced.

- `DriveSettings` is all that a user enters and a document keeps; `drive_answer` and `balance_answer` give all that
  the pages and the command line show of it. `Study` and `Demand` are behind them.
- Axes: `about_axis`, `across`, `TurnsWith`.
- Train: `Train`, `Motor`, `Gear`, `Belt`, `Coupling`, `Brake`, `RackOrDrum`, `LeadScrew`, `ShaftInertia`;
  `reflected`, `inertia_ratio`.
- Motion: `Duty`, `Move`, `Rest`, `Repeat`, `Law`, `ByTime`, `ByLimits`.
- Loads: `AppliedForce`, `AppliedTorque`, `Friction`; motor limits: `LimitCurve`, `MotorLimits`.
- Standing and stopping: `standstill`, `StopCase`, `stop`.
- Balance: `BalanceSettings`, `CorrectionPlane`, `corrections`, `GRADES`, `permissible`.

All values are SI; angles are of the load shaft unless said, positive right-handed about the drive axis, 0 where the
document stands; torques are what the drive has to give, positive where they turn the shaft forwards.
"""

from core.drive.answer import BalanceAnswer, DriveAnswer, balance_answer, demand_of, drive_answer
from core.drive.axis import AboutAxis, TurningBody, TurnsWith, about_axis, across, bodies_of
from core.drive.balance import Correction, CorrectionPlane, Unbalance, corrected, corrections, unbalance
from core.drive.demand import STANDARD_GRAVITY, TERMS, Demand, GravityWave, gravity_wave
from core.drive.grade import GRADES, permissible, shares
from core.drive.laws import Law
from core.drive.limits import LimitCurve, MotorLimits
from core.drive.loads import AppliedForce, AppliedTorque, Friction
from core.drive.motion import ByLimits, ByTime, Duty, Move, Repeat, Rest, Step
from core.drive.rms import rms_of_ramps
from core.drive.settings import BalanceSettings, DriveSettings
from core.drive.standstill import Standstill, standstill
from core.drive.stopping import Stop, StopCase, stop
from core.drive.torque import Curves, Needs, Peak, Study
from core.drive.train import (
    FIXED,
    LOAD,
    MOTOR,
    Belt,
    Brake,
    Coupling,
    Gear,
    LeadScrew,
    Motor,
    RackOrDrum,
    ShaftInertia,
    Stage,
    Train,
    inertia_ratio,
    reflected,
)

__all__ = [
    "FIXED", "GRADES", "LOAD", "MOTOR", "STANDARD_GRAVITY", "TERMS", "AboutAxis", "AppliedForce",
    "AppliedTorque", "BalanceAnswer", "BalanceSettings", "Belt", "Brake", "ByLimits", "ByTime", "Correction",
    "CorrectionPlane", "Coupling", "Curves", "Demand", "DriveAnswer", "DriveSettings", "Duty", "Friction",
    "Gear", "GravityWave", "Law", "LeadScrew", "LimitCurve", "Motor", "MotorLimits", "Move", "Needs", "Peak",
    "RackOrDrum", "Repeat", "Rest", "ShaftInertia", "Stage", "Standstill", "Step", "Stop", "StopCase", "Study",
    "Train", "TurningBody", "TurnsWith", "Unbalance", "about_axis", "across", "balance_answer",
    "bodies_of", "corrected", "corrections", "demand_of", "drive_answer", "gravity_wave", "inertia_ratio",
    "permissible", "reflected", "rms_of_ramps", "shares", "standstill", "stop", "unbalance",
]
