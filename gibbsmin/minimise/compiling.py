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
from types import FunctionType
from typing import Any, ClassVar

OPTIONS: dict[str, Any] = {
    "error_model": "numpy",
    # Sums may be reordered for the vector unit; infinities and NaN keep their meaning.
    "fastmath": {"reassoc", "contract", "nsz", "arcp"},
    # The kernels allocate nothing, so counting references would only cost time.
    "_nrt": False,
}

_LOADING = 1.0  # seconds


class CompiledForm:
    """The compiled form of one entry, once it pays; one a process.

    Parameters
    ----------
    entry
        Given a fingerprint of the sources, a function that calls the kernel and is bound to it:
        numba keys its cache by the entry's own code and what it closes over.
    file
        The entry's own source file.
    modules
        The kernel's modules, all of whose functions are compiled, the called ones first.
    inlined
        Functions called in every iteration: compiled into their callers, which saves handing over
        the arrays.
    seconds
        What compiling costs.
    """

    _settled: ClassVar[bool] = False

    def __init__(
        self,
        entry: Callable[[int], Callable[..., Any]],
        file: str,
        modules: Sequence[str],
        inlined: Collection[str],
        seconds: float,
    ) -> None:
        self._entry = entry
        self._file = Path(file)
        self._modules = modules
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
        kept = (folder / "__pycache__").glob(f"{self._file.stem}.*.nbi")
        return _LOADING if any(f.stat().st_mtime > changed for f in kept) else self._seconds

    def _compile(self) -> Callable[..., Any]:
        """Hand every function of the kernel to numba and compile the entry on its first call."""
        from numba import njit
        from numba.extending import register_jitable

        sources = hashlib.sha256()
        for name in self._modules:
            module = importlib.import_module(name)
            sources.update(Path(str(module.__file__)).read_bytes())
            for function in vars(module).values():
                if isinstance(function, FunctionType) and function.__module__ == module.__name__:
                    inlined = function.__name__ in self._inlined
                    register_jitable(forceinline=inlined, **OPTIONS)(function)
        entry = self._entry(int.from_bytes(sources.digest()[:7]))
        compiled: Callable[..., Any] = njit(cache=True, nogil=True, **OPTIONS)(entry)
        return compiled
