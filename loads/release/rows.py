"""A release as more rows of the history: the same names over the moments that matter, after those of the winding.

Whatever is checked over crank angle is so checked over the release as well. N, mm, rad, chain frame.
"""

from __future__ import annotations

from dataclasses import dataclass
from functools import cached_property

import numpy as np
from numpy.typing import NDArray

from loads.linkage import Linkage, State
from loads.release.simulate import Course
from parts.design import Floats

MOMENTS = 24  # stretches of time in each phase; of each the greatest and least of what loads the parts is kept
_LOOKED_AT = ("tension", "line", "torque", "stop")


@dataclass(frozen=True)  # without slots, for what is worked out once
class ReleaseState(State):
    """The link swings free: neither in line with the chain nor on its stop. Forces with the link's inertia in them."""

    psi: Floats
    on_link_x: Floats  # crank pin and stop together on the link
    on_link_y: Floats
    stop_moment: Floats
    drive_torque: Floats

    @property
    def torque(self) -> Floats:
        return self.drive_torque

    @property
    def friction_torque(self) -> Floats:
        return np.zeros_like(self.tension)  # in the drive torque already

    @property
    def lift(self) -> Floats:
        return np.zeros_like(self.tension)

    @property
    def link_direction(self) -> Floats:
        return self.psi

    @property
    def link_angle(self) -> Floats:
        return np.asarray(self.psi - self.crank_angle - np.pi)

    @cached_property
    def stop_force(self) -> Floats:
        """N along n, at the stop's reach; against n where it is the stop's back that pushes."""
        return np.asarray(self.stop_moment / self.machine.stop_reach)

    @property
    def pin_x(self) -> Floats:
        return np.asarray(self.on_link_x + self.stop_force * np.sin(self.psi))

    @property
    def pin_y(self) -> Floats:
        return np.asarray(self.on_link_y - self.stop_force * np.cos(self.psi))

    @property
    def pin_force(self) -> Floats:
        return np.hypot(self.pin_x, self.pin_y)

    @property
    def link_axial(self) -> Floats:
        return np.asarray(self.tension * np.cos(self.line.direction - self.psi))

    @property
    def link_bending(self) -> Floats:
        m = self.machine
        across = self.tension * np.sin(self.line.direction - self.psi)
        return np.asarray(np.abs(across) * (m.link_length - m.stop_reach))


def moments_of(course: Course) -> tuple[NDArray[np.intp], NDArray[np.bool_]]:
    """Rows of a course that are kept, and which of them are the snatch's: behind the first slack or the straight link."""
    late = course.time >= course.turn
    pin = np.hypot(course.forces["pin_x"], course.forces["pin_y"])
    f = course.forces
    bends = f["tension"] * (np.cos(course.psi) * f["uy"] - np.sin(course.psi) * f["ux"])
    looked_at = [*(f[name] for name in _LOOKED_AT), pin, bends]
    kept = {0, len(course.time) - 1}
    for phase in (~late, late):
        rows = np.flatnonzero(phase)
        for part in np.array_split(rows, min(MOMENTS, max(1, rows.size))):
            if part.size:
                for values in looked_at:
                    kept |= {int(part[np.argmax(values[part])]), int(part[np.argmin(values[part])])}
    index = np.array(sorted(kept), dtype=np.intp)
    return index, late[index]


def release_state(machine: Linkage, course: Course, rows: NDArray[np.intp]) -> ReleaseState:
    """The rows of a course as a state of the machine."""
    m = machine.expanded()
    theta, psi = course.theta[rows], course.psi[rows]
    x = m.crank_radius * np.cos(theta) + m.link_length * np.cos(psi)
    y = m.crank_radius * np.sin(theta) + m.link_length * np.sin(psi)
    line = m.far.line(m.crank_radius, x, y, 0.0, m.link_length)
    f = course.forces
    return ReleaseState(
        machine=m, crank_angle=theta, seated=np.zeros(theta.shape, dtype=np.bool_), line=line, pull=line.pull,
        draw=course.draw[rows], force=f["line"][rows], tension=f["tension"][rows], psi=psi,
        on_link_x=f["pin_x"][rows], on_link_y=f["pin_y"][rows], stop_moment=f["stop"][rows],
        drive_torque=f["torque"][rows],
    )  # fmt: skip


class _Joined:
    """The arrays of two records end to end, each when it is asked for."""

    def __init__(self, first: object, second: object) -> None:
        self._first, self._second = first, second

    def __getattr__(self, name: str) -> object:
        one, other = getattr(self._first, name), getattr(self._second, name)
        if name == "line":
            found: object = _Joined(one, other)
        else:
            lengths = (self._first, self._second)
            found = np.concatenate([np.broadcast_to(v, _size(at)) for v, at in zip((one, other), lengths, strict=True)])
        self.__dict__[name] = found
        return found


def _size(record: object) -> tuple[int, ...]:
    """Of a state, or of a line."""
    found: tuple[int, ...] = np.shape(record.crank_angle if isinstance(record, State) else getattr(record, "ux"))  # noqa: B009
    return found


def joined(winding: State, release: ReleaseState) -> State:
    """Winding, then release: a state in everything that is an array over the moments."""
    return _Joined(winding, release)  # type: ignore[return-value]
