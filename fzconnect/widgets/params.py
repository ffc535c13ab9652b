"""What the controls of the workbench say, as one frozen value."""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import asdict, dataclass, replace
from typing import TYPE_CHECKING, Any, Self

from fzconnect.errors import ScenarioError

if TYPE_CHECKING:
    from fzconnect.scenario import Scenario, Strands

__all__ = ["Params"]

_VERSION = 1


@dataclass(frozen=True)
class Params:
    """State of the workbench's controls; never changed, only replaced.

    Attributes
    ----------
    count : int
        Number of strands.
    distance : float
        Distance along the fault, m, of the section.
    throw_factor : float
        What the whole throw is multiplied with.
    split : tuple of float, optional
        Shares set by hand; None while they are the scenario's own (or an equal split, where the
        count is not the scenario's).
    split_distance : float
        Distance, m, at which `split` was set; elsewhere the shares keep their proportions.
    is_upright : bool
        Whether the section is drawn with strands upright, and not to scale.
    hanging_wall_sand, footwall_sand : str, optional
        Sands chosen; together they are a pair.
    """

    count: int
    distance: float
    throw_factor: float = 1.0
    split: tuple[float, ...] | None = None
    split_distance: float = 0.0
    is_upright: bool = True
    hanging_wall_sand: str | None = None
    footwall_sand: str | None = None

    @property
    def pair(self) -> tuple[str, str] | None:
        """Chosen hanging-wall sand and footwall sand, None until both are chosen."""
        if self.hanging_wall_sand is None or self.footwall_sand is None:
            return None
        return self.hanging_wall_sand, self.footwall_sand

    def with_pair(self, pair: tuple[str, str] | None) -> Self:
        """Return the same state with another pair, or with none."""
        upper, lower = pair or (None, None)
        return replace(self, hanging_wall_sand=upper, footwall_sand=lower)

    def asks_the_same(self, other: Params) -> bool:
        """Tell whether the same scenario is asked for, whatever is looked at."""
        return self._scenario_part == other._scenario_part

    @property
    def _scenario_part(self) -> tuple[object, ...]:
        return self.count, self.throw_factor, self.split, self.split_distance

    @classmethod
    def from_scenario(cls, scenario: Scenario) -> Self:
        """Return the state that shows a scenario as it is, cut in the middle of the fault."""
        first, last = scenario.throw.distances[0], scenario.throw.distances[-1]
        return cls(count=scenario.strands.count, distance=0.5 * (first + last))

    def strands(self, scenario: Scenario) -> Strands:
        """Return the strands that the controls ask for."""
        strands = scenario.strands
        if self.count != strands.count:
            strands = strands.with_count(self.count)
        if self.split is not None:
            strands = strands.with_split_at(self.split_distance, self.split)
        return strands

    def apply(self, scenario: Scenario) -> Scenario:
        """Return the scenario with what the controls ask for.

        Raises
        ------
        ScenarioError
            If that is not a fault zone, for example if the throw leaves the column.
        """
        changed = scenario.with_strands(self.strands(scenario))
        return changed if self.throw_factor == 1.0 else changed.with_throw_factor(self.throw_factor)

    def to_dict(self) -> dict[str, Any]:
        """Return the state as plain numbers and lists for JSON, with a version."""
        split = None if self.split is None else list(self.split)
        return {"version": _VERSION, **asdict(self), "split": split}

    @classmethod
    def from_dict(cls, state: Mapping[str, Any]) -> Self:
        """Return the state that `to_dict` gave.

        Raises
        ------
        ScenarioError
            If the version is another one, or a key is missing or unknown.
        """
        if state.get("version") != _VERSION:
            msg = f"workbench state: version {state.get('version')!r} found, expected {_VERSION}"
            raise ScenarioError(msg)
        values = {key: value for key, value in state.items() if key != "version"}
        if values.get("split") is not None:
            values["split"] = tuple(values["split"])
        try:
            return cls(**values)
        except TypeError as error:
            allowed = ", ".join(cls.__dataclass_fields__)
            msg = f"workbench state: {error}; the keys are {allowed}"
            raise ScenarioError(msg) from None
