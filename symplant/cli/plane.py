"""`symplant stability --plane X Y`: the stable region over two parameters, printed and drawn."""

from __future__ import annotations

from fractions import Fraction
from pathlib import Path
from typing import TYPE_CHECKING

from symplant.cli.fixed_values import fixed_values, unknown_parameter
from symplant.cli.session import dump
from symplant.errors import Fault, InputError

if TYPE_CHECKING:
    from symplant.cli.budget import Channel
    from symplant.plant.model import Model

__all__ = ["show_plane"]

CELLS, PICTURE = "the cells of the plane", "the picture"


def show_plane(
    channel: Channel,
    model: Model,
    plane: tuple[str, str] | None,
    picture: Path | None,
    fixed: tuple[str, ...],
    as_json: bool,
    width: int,
    unicode: bool,
    colour: bool,
) -> int:
    """Answer for the plane, draw it if a picture is asked for; the exit status.

    Errors: InputError with every fault of the options.
    """
    from symplant.derivation.stability import stability_plane

    two, values = _options(model, plane, picture, fixed)
    channel.plan([CELLS, *([PICTURE] if picture else [])])
    channel.stage(CELLS)
    found = stability_plane(model, *two, values)
    if picture is not None:
        from symplant.writing.files import write_whole
        from symplant.writing.plane_picture import plane_picture

        channel.stage(PICTURE)
        write_whole(picture, plane_picture(found, model, _suffix(picture)), channel)
    if as_json:
        from symplant.writing.plane_answer import plane_answer

        channel.out(dump(plane_answer(found, model, None if picture is None else str(picture))))
        return 0
    from symplant.writing.plane_page import plane_page

    page = plane_page(found, model, width, unicode)
    channel.out(page.coloured() if colour else page.plain())
    return 0


def _options(
    model: Model, plane: tuple[str, str] | None, picture: Path | None, fixed: tuple[str, ...]
) -> tuple[tuple[str, str], dict[str, Fraction]]:
    faults: list[Fault] = []
    if plane is None:
        faults.append(Fault("--picture", "is for --plane only", "add --plane X Y"))
    for name in plane or ():
        if name not in model.letters:
            faults.append(unknown_parameter(model, "--plane", name))
    values = fixed_values(model, fixed, faults)
    if picture is not None:
        from symplant.writing.files import require_file_target
        from symplant.writing.plane_picture import require_pictures

        try:
            require_pictures(_suffix(picture))
            require_file_target(picture)
        except InputError as error:
            faults += error.faults
    if faults or plane is None:
        raise InputError(faults)
    return plane, values


def _suffix(picture: Path) -> str:
    return picture.suffix.lower().removeprefix(".")
