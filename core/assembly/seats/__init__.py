"""Seats: the named places of lines, and lines that follow the place they are set on."""

from core.assembly.seats.choices import lines_to_seat_on, own_places_of, places_of, said_place
from core.assembly.seats.datums import Datum, DatumKind, datum_named, datums_of
from core.assembly.seats.following import check_seats, seated, seated_in
from core.assembly.seats.seating import moved_to, seat_as_it_stands, with_seat, without_seat

__all__ = [
    "Datum",
    "DatumKind",
    "check_seats",
    "datum_named",
    "datums_of",
    "lines_to_seat_on",
    "moved_to",
    "own_places_of",
    "places_of",
    "said_place",
    "seat_as_it_stands",
    "seated",
    "seated_in",
    "with_seat",
    "without_seat",
]
