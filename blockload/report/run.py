"""What the report needs of a finished check, whoever made it."""

from __future__ import annotations

from typing import TYPE_CHECKING, Protocol

if TYPE_CHECKING:
    from ..block.model import AnyBlock
    from ..car.lap_model import LapLoads
    from ..car.model import LoadCases
    from ..case.model import Case
    from ..installation.model import PadLoads
    from ..margins.model import Margins
    from ..response.model import Library


class RunLike(Protocol):
    """Everything one check produced; block, library and pads are None at level `faces`."""

    @property
    def run_id(self) -> str:
        """The id every file of the run carries."""
        ...

    @property
    def case(self) -> Case:
        """The case file as read."""
        ...

    @property
    def cases(self) -> LoadCases:
        """The balanced load cases."""
        ...

    @property
    def block(self) -> AnyBlock | None:
        """The block, or None."""
        ...

    @property
    def library(self) -> Library | None:
        """The block's unit responses, or None."""
        ...

    @property
    def pads(self) -> PadLoads | None:
        """The installed wrenches, or None."""
        ...

    @property
    def margins(self) -> Margins:
        """Everything judged."""
        ...

    @property
    def laps(self) -> tuple[LapLoads, ...]:
        """The laps of the case, sample by sample."""
        ...
