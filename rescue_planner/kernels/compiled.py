"""The one decorator of the kernels: compile with numba, keep what was compiled where possible.

A cache that cannot be written, is empty, stale, cut off or from another machine never stops the
program: the kernel is then compiled again, in memory if need be.
"""

from __future__ import annotations

from collections.abc import Callable
from typing import Any, TypeVar, cast

from rescue_planner import places

CACHE_FOLDER = places.prepare_kernel_cache()

import numba  # noqa: E402 - reads the cache folder when it is imported

F = TypeVar("F", bound=Callable[..., Any])


class _ForgivingCache:
    """numba's own cache of one kernel, whose failures only cost a new compilation."""

    def __init__(self, inner: Any) -> None:  # noqa: ANN401 - numba has no types
        self._inner = inner

    def __getattr__(self, name: str) -> Any:  # noqa: ANN401
        return getattr(self._inner, name)

    def load_overload(self, signature: Any, target: Any) -> Any:  # noqa: ANN401
        """Return what was kept, or nothing where it cannot be read."""
        try:
            return self._inner.load_overload(signature, target)
        except Exception:  # noqa: BLE001 - a damaged file may raise anything at all
            return None

    def save_overload(self, signature: Any, data: Any) -> None:  # noqa: ANN401
        """Keep what was compiled, if the disk lets us."""
        try:
            self._inner.save_overload(signature, data)
        except Exception:  # noqa: BLE001 - a full or locked disk is no reason to stop
            return


def kernel(function: F) -> F:
    """Compile `function` on its first call: no Python objects, no lock, no fast mathematics."""
    dispatcher: Any
    if CACHE_FOLDER is None:
        return cast(F, numba.njit(nogil=True)(function))
    try:
        dispatcher = numba.njit(nogil=True, cache=True)(function)
    except RuntimeError:  # numba found no place for its cache
        return cast(F, numba.njit(nogil=True)(function))
    dispatcher._cache = _ForgivingCache(dispatcher._cache)
    return cast(F, dispatcher)
