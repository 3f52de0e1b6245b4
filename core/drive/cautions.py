"""The short cautions that stand on the torque, balance and hand-over pages and in every output."""

from __future__ import annotations

NO_MARGIN = "Values carry no margin unless one is entered."
HOLDING = "Gravity can move this load when the drive is off: hold it by a brake, a lock or a counterweight."
STORED = "At its highest speed the train holds {joules} J: let it run down before reaching in."
THROWN = "A part that turns can burst or be thrown off: guard it, and check what is added or drilled for strength."
RIGID = "Grades of ISO 21940-11 are for rotors that stay rigid at their service speed."
MEASURE = "Play, fits and flaws are not in the model: measure the rotor on a balancing machine."
STANDARDS = "Machine-safety standards, local codes and a responsible engineer decide."


def cautions(stored_energy: float, *, load_can_move: bool) -> tuple[str, ...]:
    """Return the cautions that apply; stored_energy in J, 0 where nothing moves."""
    said = [NO_MARGIN]
    if load_can_move:
        said.append(HOLDING)
    if stored_energy > 0:
        said.append(STORED.format(joules=f"{stored_energy:.3g}"))
    return (*said, STANDARDS)


def balance_cautions() -> tuple[str, ...]:
    """Return the cautions that belong beside every balance."""
    return NO_MARGIN, RIGID, MEASURE, THROWN, STANDARDS
