"""Tables of a lap: least and greatest of every response with the time of each, and what to distrust."""

from __future__ import annotations

from collections.abc import Iterable, Sequence

from ..car.lap_model import Extreme, LapLoads, extremes, flags
from ..case.model import FACES
from .tables import Table, table
from .wording import SECTION_WORDS, figure, fixed, plain_name

_SYMBOLS = (*SECTION_WORDS, "F_x", "F_y", "F_z")


def lap_tables(laps: Sequence[LapLoads]) -> tuple[Table, ...]:
    """Return the tables of all laps."""
    return tuple(item for lap in laps for item in (_samples(lap), _faces(lap), _corners(lap)))


def _samples(lap: LapLoads) -> Table:
    """How many samples there are, and which of them not to trust as they stand."""
    span = float(lap.time[-1] - lap.time[0])
    rows = [(f"{len(lap.time)} samples over {fixed(span, 2)} s", "", "", "")]
    rows += [
        (
            flag.what,
            f"{flag.count} ({fixed(100.0 * flag.count / len(lap.time), 2)} %)",
            figure(flag.worst),
            when(lap, flag.worst_at),
        )
        for flag in flags(lap)
    ]
    rows += [
        (
            f"averaging over each step lowers the peak of {item.signal}",
            "",
            f"{fixed(item.recorded, 2)} to {fixed(item.kept, 2)}",
            "",
        )
        for item in lap.lost
        if item.kept < 0.999 * item.recorded
    ]
    note = "m/s², N." if len(rows) > 1 else "Every sample balances, within the grip of its tyres."
    if lap.measured:
        names = ", ".join(name.replace(".", " ") for name in lap.measured)
        note += (
            f" Measured in place of computed vertical loads: {names}; the car gives way to the difference with up to "
            f"{fixed(float(abs(lap.extra_load).max()), 1, scale=1e3)} kN at a wheel."
        )
    return table(f"Lap {plain_name(lap.name)}", ("samples", "how many", "worst", "at"), rows, note)


def _faces(lap: LapLoads) -> Table:
    rows = [_row(lap, item) for item in extremes(lap) if item.of in FACES]
    note = (
        "kN and kN·m over the lap, each with its time and speed. Section components about the centroid of the face's "
        "studs; studs as on a rigid face, before preload, axial + pulled."
    )
    return table(
        f"Faces and studs over {plain_name(lap.name)}", ("response", "least", "at", "greatest", "at "), rows, note
    )


def _corners(lap: LapLoads) -> Table:
    rows = [_row(lap, item) for item in extremes(lap) if item.of not in FACES]
    note = "kN; F on the tyre at the ground, members + pulled."
    return table(
        f"Wheels and links over {plain_name(lap.name)}", ("force", "least", "at", "greatest", "at "), rows, note
    )


def _row(lap: LapLoads, item: Extreme) -> Iterable[str]:
    unit = SECTION_WORDS.get(item.response, ("kN",))[0]
    signed = not item.response.endswith("shear")
    yield f"{item.of} {item.response if item.response in _SYMBOLS else plain_name(item.response)}"
    yield f"{fixed(item.least, 2, scale=1e3, sign=signed)} {unit}"
    yield when(lap, item.least_at)
    yield f"{fixed(item.greatest, 2, scale=1e3, sign=signed)} {unit}"
    yield when(lap, item.greatest_at)


def when(lap: LapLoads, index: int) -> str:
    """Return where in a lap a sample is: its time and the speed there."""
    return f"{fixed(float(lap.time[index]), 2)} s, {fixed(float(lap.speed[index]), 1)} m/s"
