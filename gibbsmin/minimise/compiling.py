"""Loops over states in two forms of one source: as they stand, or compiled by numba.

Loading numba and a compiled form takes the better part of a second, and compiling much longer,
which a single state does not repay.  So a process does without until it has spent about what the
compiled form would cost, and compiles from there on.  The compiled form is kept on disk beside the
sources, or in the user's cache where that place cannot be written.
"""

from __future__ import annotations

import hashlib
import importlib
import threading
from collections.abc import Callable, Collection, Sequence
from pathlib import Path
from types import FunctionType, ModuleType
from typing import Any, ClassVar, cast

IN_ORDER = {"contract", "nsz", "arcp"}
"""Freedoms of the compiler where sums keep their order."""

OPTIONS: dict[str, Any] = {
    "error_model": "numpy",
    # Sums may be reordered for the vector unit; infinities and NaN keep their meaning.
    "fastmath": IN_ORDER | {"reassoc"},
    # The kernels allocate nothing, so counting references would only cost time.
    "_nrt": False,
}

_LOADING = 1.0  # seconds


class CompiledForm:
    """The compiled form of one function, once it pays; one a process.

    Parameters
    ----------
    entry
        The function.
    modules
        The kernel's modules, all of whose functions are compiled, the called ones first.
    inlined
        Functions called in every iteration: compiled into their callers, which saves handing over
        the arrays.
    seconds
        What compiling costs.
    in_order
        Those of the modules whose sums keep their order.
    told
        Modules that tell numba of themselves when imported.
    """

    _settled: ClassVar[bool] = False
    _known: ClassVar[set[FunctionType]] = set()

    def __init__(
        self,
        entry: Callable[..., Any],
        modules: Sequence[str],
        inlined: Collection[str],
        seconds: float,
        in_order: Collection[str] = (),
        told: Collection[str] = (),
    ) -> None:
        self._entry = cast(FunctionType, entry)
        self._file = Path(self._entry.__code__.co_filename)
        self._modules = modules
        self._in_order = in_order
        self._told = told
        self._inlined = inlined
        self._seconds = seconds
        self._lock = threading.Lock()
        self._spent = 0.0
        self._compiled: Callable[..., Any] | None = None

    @classmethod
    def settle(cls) -> None:
        """Serve every compiled form from here on, whatever the batches' sizes."""
        cls._settled = True

    def after(self, seconds: float) -> Callable[..., Any] | None:
        """The compiled form if doing without it for so many seconds more would not pay."""
        with self._lock:
            self._spent += seconds
            pays = self._settled or self._spent > self._price()
            if self._compiled is None and pays:
                self._compiled = self._compile()
            return self._compiled

    def _price(self) -> float:
        """Seconds that it costs, by whether one newer than the sources is on disk."""
        folder = self._file.parent
        changed = max(source.stat().st_mtime for source in folder.glob("*.py"))
        kept = (folder / "__pycache__").glob(f"{self._file.stem}.{self._entry.__name__}*.nbi")
        return _LOADING if any(f.stat().st_mtime > changed for f in kept) else self._seconds

    def _compile(self) -> Callable[..., Any]:
        """Hand every function of the kernel to numba and compile the entry on its first call."""
        from numba import njit

        sources = hashlib.sha256()
        for name in (*self._told, *self._modules):
            module = importlib.import_module(name)
            sources.update(Path(str(module.__file__)).read_bytes())
            if name in self._modules:
                self._tell_of(module, OPTIONS | self._orders(name))
        entry = FunctionType(self._entry.__code__, self._entry.__globals__)
        # numba keys its cache by the entry's name: a change in any module of the kernel counts.
        entry.__qualname__ = f"{self._entry.__name__}_{sources.hexdigest()[:16]}"
        compiled: Callable[..., Any] = njit(cache=True, nogil=True, **OPTIONS)(entry)
        return compiled

    def _orders(self, name: str) -> dict[str, Any]:
        return {"fastmath": IN_ORDER} if name in self._in_order else {}

    def _tell_of(self, module: ModuleType, options: dict[str, Any]) -> None:
        """Tell numba of a module's functions, each once a process."""
        from numba.extending import register_jitable

        for function in vars(module).values():
            if not isinstance(function, FunctionType) or function in self._known:
                continue
            if function.__module__ == module.__name__:
                self._known.add(function)
                inlined = function.__name__ in self._inlined
                register_jitable(forceinline=inlined, **options)(function)
