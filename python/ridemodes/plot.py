"""Pictures of results with matplotlib; each takes ``ax`` and returns what it has drawn."""

from __future__ import annotations

from typing import TYPE_CHECKING, Any

import numpy as np

if TYPE_CHECKING:
    from matplotlib.artist import Artist
    from matplotlib.axes import Axes
    from matplotlib.figure import Figure

    from ._core import LinearSystem, Modes, Motions, OperatingPoint, Sweep, WheelRates

# Okabe and Ito's colours, told apart by readers with any colour vision (from memory).
BLUE, ORANGE, GREEN, GREY = "#0072B2", "#E69F00", "#009E73", "#999999"
CORNERS = ("front left", "front right", "rear left", "rear right")
# Around the vehicle, so that the outline does not cross itself.
ROUND = [0, 1, 3, 2, 0]


def _axes(ax: Axes | None, size: tuple[float, float]) -> Axes:
    if ax is not None:
        return ax
    try:
        from matplotlib import pyplot
    except ImportError as error:
        raise ImportError("pictures need matplotlib: pip install ridemodes[plot]") from error
    axes: Axes = pyplot.subplots(figsize=size, layout="constrained")[1]
    return axes


def _row(modes: Modes, mode: int | str) -> int:
    if isinstance(mode, str):
        rows = modes.rows(mode)
        if not rows:
            raise KeyError(f'no mode "{mode}"; labels are {", ".join(modes.label)}')
        return rows[0]
    return mode


def _oblique(x: Any, y: Any, z: Any) -> tuple[Any, Any]:
    # Seen from behind on the left: ahead goes up to the right, left goes to the left.
    return 0.5 * np.asarray(x) - 0.87 * np.asarray(y), 0.4 * np.asarray(x) + 0.2 * np.asarray(
        y
    ) + np.asarray(z)


def mode_shape(
    modes: Modes, mode: int | str, *, ax: Axes | None = None, scale: float = 0.3
) -> list[Artist]:
    """Draw a mode's shape on body corners and wheels, at the moment of largest motion.

    Parameters
    ----------
    modes : Modes
        Modes of a linear system.
    mode : int or str
        Row, or label (of an overdamped motion its slower pole).
    ax : matplotlib.axes.Axes, optional
        Where to draw; a new figure otherwise.
    scale : float
        Height of the largest displacement in the picture [m].

    Returns
    -------
    list of matplotlib.artist.Artist

    Raises
    ------
    KeyError
        For a label that is not there.
    """
    row = _row(modes, mode)
    ax = _axes(ax, (5.0, 4.0))
    x, y = modes.positions
    z, pitch, roll = modes.shape[row, :3]
    # z − xθ + yφ at the corners
    body = z - x * pitch + y * roll
    wheel = modes.shape[row, 3:7]
    both = np.concatenate([body, wheel])
    # The phase at which the sum of squares is largest.
    phase = np.exp(-0.5j * np.angle(np.sum(both**2)))
    body, wheel = (body * phase).real, (wheel * phase).real
    size = max(np.abs(body).max(), np.abs(wheel).max())
    body, wheel = body * scale / size, wheel * scale / size
    height = 0.75
    artists: list[Artist] = []

    def outline(level: Any, **style: Any) -> None:
        across, up = _oblique(x, y, level)
        artists.extend(ax.plot(across[ROUND], up[ROUND], **style))

    rest = np.zeros(4)
    outline(height + rest, color=GREY, linestyle=":", linewidth=1)
    outline(rest, color=GREY, linestyle=":", linewidth=1)
    outline(height + body, color=BLUE, linewidth=2, label="body")
    outline(wheel, color=ORANGE, linewidth=1, label="wheels", marker="o", markersize=7)
    for corner in range(4):
        across, up = _oblique(
            np.repeat(x[corner], 2),
            np.repeat(y[corner], 2),
            np.array([wheel[corner], height + body[corner]]),
        )
        artists.extend(ax.plot(across, up, color=GREY, linewidth=1))
    # Below the front right wheel's way, where nothing else is drawn.
    across, up = _oblique(x[1], y[1], -1.15 * scale)
    artists.append(ax.text(across, up, "front", ha="center", va="top", fontsize=8, color=GREY))
    ax.set_aspect("equal")
    ax.set_axis_off()
    # The same frame for every mode, so that pictures beside each other compare.
    corners = np.array([_oblique(x, y, level) for level in (-scale, height + scale)])
    ax.set_xlim(corners[:, 0].min() - 0.2, corners[:, 0].max() + 0.2)
    ax.set_ylim(corners[:, 1].min() - 0.1, corners[:, 1].max() + 0.1)
    ax.set_title(
        f"{modes.label[row]}\n{modes.frequency[row]:.2f} Hz, "
        f"{100 * modes.damping_ratio[row]:.0f} % damping",
        fontsize=10,
    )
    return artists


def mode_shapes(modes: Modes) -> Figure:
    """Draw the seven mechanical modes in one figure.

    Parameters
    ----------
    modes : Modes
        Modes of a linear system.

    Returns
    -------
    matplotlib.figure.Figure
    """
    from matplotlib import pyplot

    labels = [label for label in modes.share_names[:7] if modes.rows(label)]
    figure, grid = pyplot.subplots(2, 4, figsize=(13, 7), layout="constrained")
    for ax, label in zip(grid.flat, labels, strict=False):
        mode_shape(modes, label, ax=ax)
    for ax in list(grid.flat)[len(labels) :]:
        ax.set_axis_off()
    handles, names = grid.flat[0].get_legend_handles_labels()
    grid.flat[-1].legend(handles, names, loc="center", frameon=False)
    figure.suptitle(f"Mode shapes ({modes.kind}); dotted: at rest")
    return figure


def _stacked(
    springs: Any, oil: Any, names: list[str], first: str, unit: str, decimals: int, ax: Axes
) -> list[Artist]:
    artists: list[Artist] = []
    places = np.arange(len(names))
    artists.extend(ax.bar(places, springs, color=BLUE, label=first))
    artists.extend(ax.bar(places, oil, bottom=springs, color=ORANGE, label="oil"))
    for place, total in zip(places, springs + oil, strict=True):
        text = f"{total:.{decimals}f}"
        artists.append(ax.annotate(text, (place, total), ha="center", va="bottom"))
    ax.set_xticks(places, names)
    ax.set_ylabel(f"at one wheel, {unit}")
    ax.margins(y=0.12)
    ax.spines[["top", "right"]].set_visible(False)
    # Beside the bars, which may fill the axes to the top.
    artists.append(ax.legend(loc="upper left", bbox_to_anchor=(1.0, 1.0), frameon=False))
    return artists


def motion_stiffness(motions: Motions, *, ax: Axes | None = None) -> list[Artist]:
    """Draw the stiffness of the four motions, split into springs and oil.

    Parameters
    ----------
    motions : Motions
        The suspension in the four motions.
    ax : matplotlib.axes.Axes, optional
        Where to draw; a new figure otherwise.

    Returns
    -------
    list of matplotlib.artist.Artist
    """
    ax = _axes(ax, (6.0, 4.0))
    ax.set_title("Stiffness of the four motions")
    parts = (motions.stiffness_conventional, motions.stiffness_oil)
    springs, oil = (1e-3 * np.diagonal(part) for part in parts)
    return _stacked(springs, oil, motions.names, "springs and bars", "N/mm", 1, ax)


def motion_damping(motions: Motions, *, ax: Axes | None = None) -> list[Artist]:
    """Draw the damping of the four motions, split into dampers and oil.

    Parameters
    ----------
    motions : Motions
        The suspension in the four motions.
    ax : matplotlib.axes.Axes, optional
        Where to draw; a new figure otherwise.

    Returns
    -------
    list of matplotlib.artist.Artist
    """
    ax = _axes(ax, (6.0, 4.0))
    ax.set_title("Damping of the four motions")
    parts = (motions.damping_conventional, motions.damping_oil)
    dampers, oil = (np.diagonal(part) for part in parts)
    return _stacked(dampers, oil, motions.names, "dampers", "N·s/m", 0, ax)


def coupling(linear: LinearSystem, *, ax: Axes | None = None) -> list[Artist]:
    """Draw the quasi-static coupling of the oil at the wheels.

    Parameters
    ----------
    linear : LinearSystem
        A linear system.
    ax : matplotlib.axes.Axes, optional
        Where to draw; a new figure otherwise.

    Returns
    -------
    list of matplotlib.artist.Artist
    """
    ax = _axes(ax, (5.5, 4.5))
    rate = 1e-3 * linear.coupling
    limit = float(np.abs(rate).max()) or 1.0
    image = ax.imshow(rate, cmap="RdBu_r", vmin=-limit, vmax=limit)
    artists: list[Artist] = [image]
    for (i, j), value in np.ndenumerate(rate):
        dark = abs(value) > 0.6 * limit
        text = f"{value:.2f}" if abs(value) >= 0.005 else "0"
        artists.append(
            ax.annotate(text, (j, i), ha="center", va="center", color="white" if dark else "black")
        )
    short = [corner.replace(" ", "\n") for corner in CORNERS]
    ax.set_xticks(range(4), short)
    ax.set_yticks(range(4), CORNERS)
    ax.set_xlabel("bump of")
    ax.set_ylabel("force against bump on")
    ax.set_title("Coupling of the oil, N/mm")
    return artists


def poles(modes: Modes, *, ax: Axes | None = None, limit: float = 20.0) -> list[Artist]:
    """Draw the poles in the complex plane, over lines of constant damping ratio.

    Parameters
    ----------
    modes : Modes
        Damped modes.
    ax : matplotlib.axes.Axes, optional
        Where to draw; a new figure otherwise.
    limit : float
        Natural frequency up to which poles are drawn [Hz]; those beyond are counted in the title.

    Returns
    -------
    list of matplotlib.artist.Artist
    """
    ax = _axes(ax, (6.0, 5.0))
    shown = modes.frequency <= limit
    place = modes.pole[shown] / (2 * np.pi)
    artists: list[Artist] = list(ax.plot(place.real, place.imag, "o", color=BLUE))
    top = 1.1 * float(np.abs(place).max()) if shown.any() else limit
    for ratio in (0.1, 0.3, 0.5, 0.7):
        end = (-ratio * top, float(np.sqrt(1 - ratio**2)) * top)
        artists.extend(ax.plot([0, end[0]], [0, end[1]], color=GREY, linewidth=0.7))
        artists.append(ax.annotate(f"{100 * ratio:.0f} %", end, fontsize=8, color=GREY, ha="right"))
    # Labels stand beside their poles, spread downwards where they would cover each other.
    step = 0.055 * top
    level = np.inf
    for row in np.flatnonzero(shown)[::-1]:
        at = modes.pole[row] / (2 * np.pi)
        level = min(at.imag, level - step)
        artists.append(
            ax.annotate(
                modes.label[row],
                (at.real, at.imag),
                (0.06 * top, level),
                fontsize=8,
                va="center",
                arrowprops={"arrowstyle": "-", "color": GREY, "linewidth": 0.5},
            )
        )
    ax.axhline(0, color="black", linewidth=0.7)
    ax.axvline(0, color="black", linewidth=0.7)
    ax.set_xlim(-0.85 * top, 0.45 * top)
    ax.set_ylim(min(level - step, -step), 1.05 * top)
    ax.set_xlabel("real part / 2π, Hz")
    ax.set_ylabel("imaginary part / 2π, Hz")
    beyond = int(np.sum(~shown))
    ax.set_title("Poles" + (f" ({beyond} beyond {limit:g} Hz)" if beyond else ""))
    return artists


def sweep(
    followed: Sweep, *, ax: Axes | None = None, limit: float = 20.0, damping: bool = False
) -> list[Artist]:
    """Draw natural frequencies or damping ratios of a sweep's branches over the number varied.

    Parameters
    ----------
    followed : Sweep
        A sweep of one number.
    ax : matplotlib.axes.Axes, optional
        Where to draw; a new figure otherwise.
    limit : float
        Branches that stay above this natural frequency are left out [Hz].
    damping : bool
        Draw damping ratios instead of frequencies.

    Returns
    -------
    list of matplotlib.artist.Artist
    """
    ax = _axes(ax, (7.0, 4.5))
    styles = ["-", "--", "-.", ":"]
    artists: list[Artist] = []
    table = 100 * followed.damping_ratio if damping else followed.frequency
    low = [b for b, f in enumerate(followed.frequency) if np.nanmin(f) <= limit]
    for place, branch in enumerate(low):
        color = (BLUE, ORANGE, GREEN, "black")[place % 4]
        style = styles[place // 4 % 4]
        label = followed.label[branch]
        artists.extend(
            ax.plot(followed.values, table[branch], color=color, linestyle=style, label=label)
        )
    unit = "" if followed.unit in ("", "1") else f", {followed.unit}"
    ax.set_xlabel(f"{followed.path}{unit}")
    ax.set_ylabel("damping, %" if damping else "natural frequency, Hz")
    ax.spines[["top", "right"]].set_visible(False)
    artists.append(ax.legend(loc="upper left", bbox_to_anchor=(1.0, 1.0), frameon=False))
    return artists


def attitude(state: OperatingPoint, *, ax: Axes | None = None, scale: float = 1.0) -> list[Artist]:
    """Draw how the body stands: from behind, wheels with their loads as arrows.

    Parameters
    ----------
    state : OperatingPoint
        Where the vehicle stands.
    ax : matplotlib.axes.Axes, optional
        Where to draw; a new figure otherwise.
    scale : float
        By how much heave, pitch and roll are exaggerated.

    Returns
    -------
    list of matplotlib.artist.Artist
    """
    ax = _axes(ax, (6.0, 4.0))
    x, y = state.linear().modes().positions
    z, pitch, roll = state.attitude * scale
    height = 0.75
    body = height + z - x * pitch + y * roll
    wheels = state.wheels * scale
    artists: list[Artist] = []
    outlines: list[tuple[Any, dict[str, Any]]] = [
        (np.full(4, height), {"color": GREY, "linestyle": ":", "linewidth": 1}),
        (body, {"color": BLUE, "linewidth": 2, "label": "body"}),
        (wheels, {"color": ORANGE, "linewidth": 1, "marker": "o", "markersize": 7}),
    ]
    for level, style in outlines:
        across, up = _oblique(x, y, level)
        artists.extend(ax.plot(across[ROUND], up[ROUND], **style))
    most = max(state.tyre_load.max(), 1.0)
    for corner in range(4):
        across, up = _oblique(x[corner], y[corner], wheels[corner])
        load = state.tyre_load[corner]
        artists.append(
            ax.annotate(
                f"{load:.0f} N",
                (across, up - 0.06),
                (across, up - 0.12 - 0.45 * load / most),
                ha="center",
                va="top",
                fontsize=8,
                arrowprops={"arrowstyle": "->", "color": GREEN if load > 0 else GREY},
            )
        )
    ax.set_aspect("equal")
    ax.set_axis_off()
    ax.set_ylim(-1.5, 1.9)
    ax.set_title(
        f"heave {1e3 * state.attitude[0]:.1f} mm, "
        f"pitch {np.degrees(state.attitude[1]):.2f}°, "
        f"roll {np.degrees(state.attitude[2]):.2f}°"
        + (f"  (drawn {scale:g} times)" if scale != 1.0 else ""),
        fontsize=10,
    )
    return artists


def wheel_loads(sweep: Sweep, *, ax: Axes | None = None) -> list[Artist]:
    """Draw the four tyre loads along a sweep; a wheel without load is off the ground.

    Parameters
    ----------
    sweep : Sweep
        States along a number or a load.
    ax : matplotlib.axes.Axes, optional
        Where to draw; a new figure otherwise.

    Returns
    -------
    list of matplotlib.artist.Artist
    """
    ax = _axes(ax, (5.0, 3.5))
    artists: list[Artist] = []
    for corner, (name, color, style) in enumerate(
        zip(CORNERS, (BLUE, ORANGE, BLUE, ORANGE), ("-", "-", "--", "--"), strict=True)
    ):
        load = sweep.tyre_load[:, corner] / 1e3
        artists.extend(ax.plot(sweep.values, load, color=color, linestyle=style, label=name))
    ax.axhline(0.0, color=GREY, linewidth=0.8)
    ax.set_xlabel(f"{sweep.path} [{sweep.unit}]")
    ax.set_ylabel("tyre load [kN]")
    ax.legend(fontsize=8, frameon=False)
    return artists


def pressures(sweep: Sweep, *, ax: Axes | None = None) -> list[Artist]:
    """Draw the pressure of each circuit along a sweep, with where it first passes a limit.

    Parameters
    ----------
    sweep : Sweep
        States along a number or a load.
    ax : matplotlib.axes.Axes, optional
        Where to draw; a new figure otherwise.

    Returns
    -------
    list of matplotlib.artist.Artist
    """
    ax = _axes(ax, (5.0, 3.5))
    artists: list[Artist] = []
    colors = (BLUE, ORANGE, GREEN, GREY)
    for place, name in enumerate(sweep.circuits):
        pressure = sweep.pressure[:, place] / 1e5
        color, style = colors[place % 4], "-" if place < 4 else "--"
        artists.extend(ax.plot(sweep.values, pressure, color=color, linestyle=style, label=name))
        for row, passed in enumerate(sweep.passed):
            if any(limit.startswith(f"circuits.{name}.") for limit in passed):
                limit = next(one for one in passed if one.startswith(f"circuits.{name}."))
                artists.extend(ax.plot(sweep.values[row], pressure[row], "x", color=color))
                artists.append(
                    ax.annotate(
                        limit.rsplit(".", 1)[-1].replace("_", " "),
                        (sweep.values[row], pressure[row]),
                        fontsize=8,
                        color=color,
                    )
                )
                break
    ax.set_xlabel(f"{sweep.path} [{sweep.unit}]")
    ax.set_ylabel("pressure [bar abs]")
    if sweep.circuits:
        ax.legend(fontsize=8, frameon=False)
    return artists


def wheel_rates(rates: WheelRates, *, ax: Axes | None = None) -> list[Artist]:
    """Draw the tangent rate per wheel over travel, in each motion and at one wheel.

    Parameters
    ----------
    rates : WheelRates
        Of `Vehicle.wheel_rates`.
    ax : matplotlib.axes.Axes, optional
        Where to draw; a new figure otherwise.

    Returns
    -------
    list of matplotlib.artist.Artist
    """
    ax = _axes(ax, (5.0, 3.5))
    artists: list[Artist] = []
    styles = ((BLUE, "-"), (ORANGE, "-"), (GREEN, "-"), (GREY, "-"), (BLUE, ":"), (ORANGE, ":"))
    for row, (name, (color, style)) in enumerate(zip(rates.patterns, styles, strict=True)):
        artists.extend(
            ax.plot(
                1e3 * rates.travel,
                rates.rate[row] / 1e3,
                color=color,
                linestyle=style,
                label=name,
            )
        )
    ax.set_xlabel("travel, bump positive [mm]")
    ax.set_ylabel("rate at one wheel [N/mm]")
    ax.set_ylim(bottom=0.0)
    ax.legend(fontsize=8, frameon=False, ncols=2)
    return artists
