"""What the picture of worn lenses is made of."""

from collections.abc import Iterable, Mapping

from pycore.bench.wear import Act, Fit, Worn
from pycore.case import Case
from pycore.optics.prism import Eye
from pycore.optics.surface import OutsideSurfaceError
from pycore.optics.thickness import Solid
from pycore.scenes.body import Place, cut_ends
from pycore.scenes.dial import Scene
from pycore.scenes.wear import WornView, wear_scene
from pycore.sections.framing import framings_of

USUAL_BRIDGE_MM = 18.0  # from memory; where no frame is given it only sets the lenses apart
LONE_RADIUS_MM = 25.0  # where no frame is given


def wear_pictures(
    case: Case, fit: Fit, lenses: Iterable[tuple[Worn, Act, Act]]
) -> Mapping[str, Scene]:
    """The pictures. Arguments: `case`; `fit` of the frame; of each lens how it is worn, what it is
    and what it gives. Returns none without a lens, or where a surface does not reach the rim."""
    views = [_view(case, worn, made, effective) for worn, made, effective in lenses]
    if not views:
        return {}
    bridge_mm = float(case.job.frame.dbl_mm or USUAL_BRIDGE_MM)
    try:
        return {"pair": wear_scene(views, bridge_mm, fit.pantoscopic_deg, fit.wrap_deg)}
    except OutsideSurfaceError:
        return {}


def _view(case: Case, worn: Worn, made: Act, effective: Act) -> WornView:
    thin_x, thin_y = worn.thinning
    glass = worn.glass
    solid = Solid(
        index=glass.index,
        front_d=glass.front_d,
        power=made.power,
        prism_x=float(made.prism.x) + thin_x,
        prism_y=float(made.prism.y) + thin_y,
    )
    level, upright = _ends(case, worn.eye)
    return WornView(
        eye=worn.eye,
        solid=solid,
        centre_mm=glass.thickness_mm,
        level=level,
        upright=upright,
        tilt=worn.tilt,
        prism=(float(effective.prism.x) + thin_x, float(effective.prism.y) + thin_y),
    )


def _ends(case: Case, eye: Eye) -> tuple[tuple[Place, Place], tuple[Place, Place]]:
    """Both ends of a level and of an upright cut, mm from the prism reference point."""
    framing = framings_of(case).get(eye)
    if framing is None:
        reach = LONE_RADIUS_MM
        return ((-reach, 0.0), (reach, 0.0)), ((0.0, -reach), (0.0, reach))
    return cut_ends(framing.lens, upright=False), cut_ends(framing.lens, upright=True)
