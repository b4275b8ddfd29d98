"""Where things lie, and what must be set before numpy or numba is imported.

Imported before the first paint, so what only some functions need is imported in them.
"""

from __future__ import annotations

import os
from pathlib import Path

from rescue_planner import __version__

CACHE_VARIABLE = "RESCUE_PLANNER_CACHE"
_APP = "rescue-planner"
_PACKAGE = Path(__file__).resolve().parent


def _shipped(name: str) -> Path:
    """Return a shipped folder: inside the package in a wheel, one folder up in a checkout."""
    inside = _PACKAGE / name
    if inside.is_dir():
        return inside
    above = _PACKAGE.parent
    if (above / "pyproject.toml").is_file() and (above / name).is_dir():
        return above / name
    raise FileNotFoundError(f"The installation lacks its folder {name!r}; install it again.")


def resources() -> Path:
    """Return the folder of icons, style sheets and offline help."""
    return _shipped("resources")


def scenarios() -> Path:
    """Return the folder of the invented cases that ship."""
    return _shipped("scenarios")


def user_state() -> Path:
    """Return the user's folder for recent files and recovery copies (not created here)."""
    import platformdirs

    return Path(platformdirs.user_state_dir(_APP, appauthor=False))


def user_documents() -> Path:
    """Return where a file dialog starts."""
    import platformdirs

    return Path(platformdirs.user_documents_dir())


def kernel_cache() -> Path:
    """Return the user's folder for what the kernels of exactly this program compile to.

    Its name holds the version and a hash of all kernel sources, since a compiled kernel does not
    notice a change in another one that it calls; numba itself keeps machines apart.
    """
    import hashlib

    import platformdirs

    whole = hashlib.sha256()
    for source in sorted((_PACKAGE / "kernels").glob("*.py")):
        whole.update(source.name.encode() + b"\0" + source.read_bytes())
    name = f"{__version__}-{whole.hexdigest()[:12]}"
    asked = os.environ.get(CACHE_VARIABLE)
    base = Path(asked) if asked else Path(platformdirs.user_cache_dir(_APP, appauthor=False))
    return base / "kernels" / name


def prepare_kernel_cache() -> str | None:
    """Make the kernel cache and tell numba of it; call before numba is imported.

    Returns
    -------
    str or None
        The folder, or nothing where none can be written: kernels then compile in memory.
    """
    import tempfile

    folder = kernel_cache()
    try:
        folder.mkdir(parents=True, exist_ok=True)
        with tempfile.TemporaryFile(dir=folder):
            pass
    except OSError:
        return None
    os.environ["NUMBA_CACHE_DIR"] = str(folder)
    return str(folder)


def prepare_numerics() -> None:
    """Ask numeric libraries for one thread each; call before numpy is imported.

    Workers of our own share the cores; a library that starts its own threads beside them makes
    both slower.
    """
    for name in ("OMP_NUM_THREADS", "OPENBLAS_NUM_THREADS", "MKL_NUM_THREADS"):
        os.environ.setdefault(name, "1")
