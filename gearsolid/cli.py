"""The command `gearsolid`: make a machine's folder, test whether it rolls, list the keys of a recipe.

Heavy imports happen inside the commands: asking for help is quick, and the roll test never loads the CAD kernel.
"""

import argparse
import sys
from collections.abc import Sequence
from pathlib import Path
from typing import TYPE_CHECKING

from gearsolid import __version__
from gearsolid.errors import DesignError, GearsolidError, RecipeError

if TYPE_CHECKING:
    from gearsolid.contact.result import RollResult
    from gearsolid.recipe import Recipe

ROLLS, BINDS, BAD_INPUT, FAILED, INTERRUPTED = 0, 1, 2, 3, 130

_EXITS = f"""\
exit codes:
  {ROLLS}  it rolls (contact within the tolerance counts as rolling and is said)
  {BINDS}  it binds, at the angle and place printed; of a study: the two ways disagree
  {BAD_INPUT}  the recipe, the design or the command line is wrong
  {FAILED}  a solid or a file could not be made
"""


def main(arguments: Sequence[str] | None = None) -> int:
    """Run the command.

    Args:
        arguments: words after the command's name; those of the process when left out.

    Returns:
        The exit code.
    """
    chosen = _parser().parse_args(arguments)
    for stream in (sys.stdout, sys.stderr):
        # A terminal that cannot show a degree sign must not stop the test.
        getattr(stream, "reconfigure", lambda **_: None)(errors="replace")
    try:
        return int(chosen.run(chosen))
    except (RecipeError, DesignError) as error:
        return _refuse(error, BAD_INPUT)
    except GearsolidError as error:
        return _refuse(error, FAILED)
    except KeyboardInterrupt:
        print("stopped; nothing was written", file=sys.stderr)
        return INTERRUPTED


def _refuse(error: Exception, code: int) -> int:
    print(f"gearsolid: {error}", file=sys.stderr)
    return code


def _parser() -> argparse.ArgumentParser:
    parser = argparse.ArgumentParser(
        prog="gearsolid",
        description="Solid cycloidal and planetary gear bodies from a recipe, and a test whether they roll or bind.",
        epilog=_EXITS,
        formatter_class=argparse.RawDescriptionHelpFormatter,
    )
    parser.add_argument("--version", action="version", version=f"gearsolid {__version__}")
    commands = parser.add_subparsers(required=True, metavar="COMMAND")

    make = commands.add_parser("make", help="write the files of a machine and its report into a folder")
    make.add_argument("recipe", type=Path, metavar="RECIPE.toml")
    make.add_argument("--out", type=Path, required=True, metavar="FOLDER", help="folder to write; made if missing")
    make.set_defaults(run=_make)

    roll = commands.add_parser("roll", help="say whether a machine rolls or binds, and where")
    roll.add_argument("recipe", type=Path, metavar="RECIPE.toml")
    roll.set_defaults(run=_roll)

    keys = commands.add_parser("keys", help="list what a recipe may say")
    keys.add_argument("machine", nargs="?", metavar="MACHINE", help="kind of machine; all kinds when left out")
    keys.set_defaults(run=_keys)

    study = commands.add_parser("study", help="judge the roll test itself: random designs, checked by dense polygons")
    study.add_argument("--designs", type=int, default=40, metavar="N", help="how many; 40 when left out, half a minute")
    study.add_argument(
        "--first", type=int, default=0, metavar="K", help="number of the first design, to share the work"
    )
    study.add_argument("--seed", type=int, default=0, metavar="S", help="another seed gives other designs")
    study.set_defaults(run=_study)
    return parser


def _code(result: "RollResult") -> int:
    from gearsolid.contact.result import Verdict

    return ROLLS if result.verdict in (Verdict.ROLLS, Verdict.TOUCHES) else BINDS


def _roll(chosen: argparse.Namespace) -> int:
    from gearsolid.contact.causes import causes
    from gearsolid.contact.roll import roll_test
    from gearsolid.output.text import roll_text
    from gearsolid.recipe import read_recipe

    recipe = read_recipe(chosen.recipe)
    result = roll_test(recipe.machine)
    print(roll_text(recipe.name, recipe.machine, result, causes(recipe.machine, result)))
    _print_notices(recipe)
    return _code(result)


def _print_notices(recipe: "Recipe") -> None:
    for notice in recipe.notices:
        print(f"Note: {notice.sentence}.")


def _make(chosen: argparse.Namespace) -> int:
    from gearsolid.output.progress import progress
    from gearsolid.output.wording import VERDICTS, finding
    from gearsolid.recipe import read_recipe

    recipe = read_recipe(chosen.recipe)
    with progress() as tell:
        tell(0, 1, "loading the CAD kernel")
        import gearsolid.solids  # noqa: F401  (says what is missing when the kernel does not load)
        from gearsolid.output.folder import make_folder

        result = make_folder(recipe.name, recipe.machine, recipe.rows, chosen.out, tell)
    print(f"{VERDICTS[result.verdict]}. {finding(result.worst)}")
    _print_notices(recipe)
    print(f"Folder {chosen.out} is written; open {chosen.out / 'report.html'} to see it turn.")
    return _code(result)


def _keys(chosen: argparse.Namespace) -> int:
    from gearsolid.recipe import keys_text

    print(keys_text(chosen.machine))
    return ROLLS


def _study(chosen: argparse.Namespace) -> int:
    from gearsolid.contact.study import study

    if min(chosen.designs, chosen.first + 1, chosen.seed + 1) < 1:
        raise DesignError(
            f"the study is asked for {chosen.designs} designs from number {chosen.first} with seed {chosen.seed}; it "
            "needs at least 1 design, and number and seed from 0"
        )
    done = study(range(chosen.first, chosen.first + chosen.designs), chosen.seed)
    print(done.text)
    return ROLLS if done.passed else BINDS
