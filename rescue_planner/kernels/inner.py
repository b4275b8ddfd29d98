"""Kernels of the engine: compiled without what they do not need, which halves the time it takes.

Neither counts references, since none makes an array. `inner` has no entry from Python besides: an
entry has to unpack every array of a plan and a herd, for each of some sixty functions.
"""

from __future__ import annotations

from collections.abc import Callable
from typing import Any, TypeVar, cast

from rescue_planner.kernels.compiled import kernel

F = TypeVar("F", bound=Callable[..., Any])


def leaf(function: F) -> F:
    """Compile `function` as `kernel` does; it may not make an array."""
    dispatcher: Any = kernel(function)
    dispatcher.targetoptions.update(_nrt=False)
    return cast(F, dispatcher)


def inner(function: F) -> F:
    """Compile `function` as `leaf` does, to be called by kernels alone."""
    dispatcher: Any = leaf(function)
    dispatcher.targetoptions.update(no_cpython_wrapper=True, no_cfunc_wrapper=True)
    return cast(F, dispatcher)
