"""Seats: the named places of lines, and lines that follow the place they are set on."""

from core.assembly.seats.datums import Datum, DatumKind, datum_named, datums_of
from core.assembly.seats.following import check_seats, seated, seated_in
from core.assembly.seats.seating import seat_as_it_stands, with_seat, without_seat

__all__ = [
    "Datum",
    "DatumKind",
    "check_seats",
    "datum_named",
    "datums_of",
    "seat_as_it_stands",
    "seated",
    "seated_in",
    "with_seat",
    "without_seat",
]
