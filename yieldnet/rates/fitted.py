"""What a picture of a window shows: readings, the fit beside them, and a curve to be drawn."""

from __future__ import annotations

from typing import TYPE_CHECKING

from yieldnet.model.network import BIOMASS
from yieldnet.rates.result import FittedSeries

if TYPE_CHECKING:
    import numpy as np
    from numpy.typing import NDArray

    from yieldnet.rates.window_model import Path, WindowModel

    Floats = NDArray[np.float64]

__all__ = ["CURVE_POINTS", "fitted_series"]

CURVE_POINTS = 12
"""Points of a curve between two samples [-]."""


def fitted_series(model: WindowModel, point: NDArray[np.float64]) -> tuple[FittedSeries, ...]:
    """Readings of a window with the fit.

    Parameters
    ----------
    model : WindowModel
        The model.
    point : ndarray
        Its parameters.

    Returns
    -------
    tuple of FittedSeries
        Biomass, the compounds of the broth, those of the gas.

    Notes
    -----
    Between two samples the curve takes feed and volume as straight in time.
    """
    import numpy as np

    row = point[None, :]
    path = model.path(row)
    factor = float(model.calibration(row)[0, 0])
    fine = _fine_times(model)
    found = [
        _series(
            BIOMASS,
            "broth",
            "g/L",
            model.times[model.biomass.at],
            factor * model.biomass.values,
            factor * model.biomass.sds,
            (path.biomass / path.volume)[0, model.biomass.at],
            fine,
            _curve(model, path, point, None) / _volume_curve(model, path),
        )
    ]
    for which, data in enumerate(model.broth):
        found.append(
            _series(
                data.name,
                "broth",
                "mol/L",
                model.times[data.at],
                data.values,
                data.sds,
                (model.amounts(path, row, which) / path.volume)[0, data.at],
                fine,
                _curve(model, path, point, which) / _volume_curve(model, path),
            )
        )
    if model.gas is not None:
        gas = model.gas
        level = gas.values + float(point[0]) * gas.storing
        fitted = (model.gas_rates(path, row) + path.growth_rate * gas.storing)[0]
        first = 2 + 2 * len(model.broth)
        for at, name in enumerate(gas.names):
            mine = gas.which == at
            found.append(
                _series(
                    name,
                    "gas",
                    "mol/h",
                    model.times[gas.at[mine]],
                    level[mine],
                    gas.sds[mine],
                    fitted[mine],
                    fine,
                    float(point[first + at]) * _curve(model, path, point, None),
                )
            )
    assert all(np.isfinite(item.curve_values).all() for item in found)
    return tuple(found)


def _series(
    compound: str,
    place: str,
    unit: str,
    times: Floats,
    values: Floats,
    sds: Floats,
    fitted: Floats,
    curve_times: Floats,
    curve_values: Floats,
) -> FittedSeries:
    def as_tuple(array: Floats) -> tuple[float, ...]:
        return tuple(float(value) for value in array)

    return FittedSeries(
        compound=compound,
        place=place,
        unit=unit,
        times=as_tuple(times),
        values=as_tuple(values),
        sds=as_tuple(sds),
        fitted=as_tuple(fitted),
        residuals=as_tuple((values - fitted) / sds),
        curve_times=as_tuple(curve_times),
        curve_values=as_tuple(curve_values),
    )


def _shares() -> Floats:
    import numpy as np

    return np.linspace(0.0, 1.0, CURVE_POINTS + 1)


def _fine_times(model: WindowModel) -> Floats:
    """Close times; each sample stands twice, just after and just before."""
    import numpy as np

    found: Floats = (model.times[:-1, None] + np.outer(model.hours, _shares())).ravel()
    return found


def _volume_curve(model: WindowModel, path: Path) -> Floats:
    volume, sampled = path.volume[0], path.sampled[0]
    after = volume[:-1] - sampled[:-1]
    found: Floats = (after[:, None] + (volume[1:] - after)[:, None] * _shares()).ravel()
    return found


def _curve(model: WindowModel, path: Path, point: Floats, which: int | None) -> Floats:
    """Biomass in the vessel [g], or the amount of one compound of the broth [mol]."""
    import numpy as np

    row = point[None, :]
    rate = float(point[0])
    kept = (path.left[0, 1:] / path.left[0, :-1])[:-1]
    inside = np.outer(model.hours, _shares())
    after = (path.biomass[0, :-1] * kept)[:, None]
    grown = after * np.exp(rate * inside)
    if which is None:
        found: Floats = grown.ravel()
        return found
    amount = model.amounts(path, row, which)[0, :-1] * kept
    # Biomass integral since the last sample; the series serves where growth is next to nothing.
    still = abs(rate) * model.hours.max() < 1e-9
    integral = after * inside if still else (grown - after) / rate
    steps = model.steps(path, row, model.broth[which].name)
    fed = np.zeros_like(inside) if steps is None else np.outer(steps[0], _shares())
    curve: Floats = (amount[:, None] + point[3 + 2 * which] * integral + fed).ravel()
    return curve
