"""The functions of :mod:`gibbsmin.minimise.kernel.vector` as code of the vector unit.

Importing this module tells numba of them.  A vector is a value of LLVM's type of eight doubles,
which it cuts into as many pieces as the processor's registers need.
"""

from __future__ import annotations

import operator
from collections.abc import Callable
from typing import Any

from llvmlite import ir
from numba.core import cgutils, types
from numba.core.typing.templates import AbstractTemplate, infer_global, signature
from numba.extending import lower_builtin, models, register_model

from gibbsmin.minimise.kernel import vector as interpreted
from gibbsmin.minimise.kernel.vector import BIAS, LANES, MANTISSA, ROOT_HALF

_WHOLE = ir.VectorType(ir.IntType(64), LANES)
_REAL = ir.VectorType(ir.DoubleType(), LANES)
_FIRST = ir.Constant(ir.IntType(64), 0)
_ALIGNED = 8


class _Vector(types.Type):
    """numba's name for a vector."""

    def __init__(self) -> None:
        super().__init__(name="gibbsmin.Vector")


_vector = _Vector()


@register_model(_Vector)
class _VectorModel(models.PrimitiveModel):
    """A vector is one value, not a structure."""

    def __init__(self, manager: Any, kind: Any) -> None:
        super().__init__(manager, kind, _REAL)


def _whole(value: int) -> ir.Constant:
    return ir.Constant(_WHOLE, [value] * LANES)


def _spread(builder: Any, value: Any) -> Any:
    lane = ir.IntType(32)
    empty = ir.Constant(_REAL, ir.Undefined)
    single = builder.insert_element(empty, value, ir.Constant(lane, 0))
    return builder.shuffle_vector(
        single, empty, ir.Constant(ir.VectorType(lane, LANES), [0] * LANES)
    )


def _tell(function: Any, resolve: Callable[..., Any], *forms: tuple[Any, ...]) -> None:
    """Let numba take a function: its type by those of its arguments, its code for each form."""

    @infer_global(function)
    class _Kinds(AbstractTemplate):
        def generic(self, args: Any, kws: Any) -> Any:
            del kws
            return resolve(*args)

    for kinds, code in forms:
        lower_builtin(function, *kinds)(code)


def _tell_sign(sign: Any, instruction: str) -> None:
    """A sign between vectors, or a vector and a number."""

    def resolve(*kinds: Any) -> Any:
        if _vector not in kinds or not all(
            kind is _vector or isinstance(kind, types.Number) for kind in kinds
        ):
            return None
        taken = [_vector if kind is _vector else types.float64 for kind in kinds]
        return signature(_vector, *taken)

    def code(_: Any, builder: Any, kinds: Any, values: Any) -> Any:
        pair = [
            value if kind is _vector else _spread(builder, value)
            for kind, value in zip(kinds.args, values, strict=True)
        ]
        return getattr(builder, instruction)(*pair)

    pairs = ((_vector, _vector), (_vector, types.float64), (types.float64, _vector))
    _tell(sign, resolve, *((pair, code) for pair in pairs))


def _tell_lanewise(function: Any, count: int, write: Callable[..., Any]) -> None:
    """A function of ``count`` vectors."""

    def resolve(*kinds: Any) -> Any:
        return signature(_vector, *kinds)

    def code(_: Any, builder: Any, kinds: Any, values: Any) -> Any:
        del kinds
        return write(builder, *values)

    _tell(function, resolve, ((_vector,) * count, code))


def _place(context: Any, builder: Any, kind: Any, array: Any, row: Any) -> Any:
    """Where a row of eight columns begins in memory."""
    made = context.make_array(kind)(context, builder, array)
    first = cgutils.get_item_pointer(context, builder, kind, made, [row, _FIRST], wraparound=False)
    return builder.bitcast(first, _REAL.as_pointer())


def _load(context: Any, builder: Any, kinds: Any, values: Any) -> Any:
    return builder.load(_place(context, builder, kinds.args[0], *values), align=_ALIGNED)


def _store(context: Any, builder: Any, kinds: Any, values: Any) -> Any:
    builder.store(values[2], _place(context, builder, kinds.args[0], *values[:2]), align=_ALIGNED)
    return context.get_dummy_value()


def _bits(builder: Any, vector: Any) -> Any:
    return builder.bitcast(vector, _WHOLE)


def _choose(sign: str) -> Callable[..., Any]:
    """The one of two vectors where it compares so with the other, else the other."""

    def write(builder: Any, one: Any, other: Any) -> Any:
        return builder.select(builder.fcmp_ordered(sign, one, other), one, other)

    return write


def _magnitude(builder: Any, vector: Any) -> Any:
    return builder.bitcast(builder.and_(_bits(builder, vector), _whole(2**63 - 1)), _REAL)


def _where_above(builder: Any, vector: Any, limit: Any, above: Any, otherwise: Any) -> Any:
    return builder.select(builder.fcmp_ordered(">", vector, limit), above, otherwise)


def _power_of_two(builder: Any, shifted: Any) -> Any:
    biased = builder.add(_bits(builder, shifted), _whole(BIAS))
    return builder.bitcast(builder.shl(biased, _whole(MANTISSA)), _REAL)


def _whole_exponent(builder: Any, vector: Any) -> Any:
    distance = builder.sub(_bits(builder, vector), _whole(ROOT_HALF))
    return builder.ashr(distance, _whole(MANTISSA))


def _mantissa_of(builder: Any, vector: Any) -> Any:
    shift = builder.shl(_whole_exponent(builder, vector), _whole(MANTISSA))
    return builder.bitcast(builder.sub(_bits(builder, vector), shift), _REAL)


def _exponent_of(builder: Any, vector: Any) -> Any:
    return builder.sitofp(_whole_exponent(builder, vector), _REAL)


for _sign, _instruction in (
    (operator.add, "fadd"),
    (operator.sub, "fsub"),
    (operator.mul, "fmul"),
    (operator.truediv, "fdiv"),
):
    _tell_sign(_sign, _instruction)

for _function, _count, _write in (
    (interpreted.larger, 2, _choose(">")),
    (interpreted.smaller, 2, _choose("<")),
    (interpreted.magnitude, 1, _magnitude),
    (interpreted.where_above, 4, _where_above),
    (interpreted.power_of_two, 1, _power_of_two),
    (interpreted.mantissa_of, 1, _mantissa_of),
    (interpreted.exponent_of, 1, _exponent_of),
):
    _tell_lanewise(_function, _count, _write)

_tell(
    interpreted.load,
    lambda array, _row: signature(_vector, array, types.intp),
    ((types.Array, types.intp), _load),
)
_tell(
    interpreted.store,
    lambda array, _row, _vector_kind: signature(types.none, array, types.intp, _vector),
    ((types.Array, types.intp, _vector), _store),
)
_tell(
    interpreted.spread,
    lambda _value: signature(_vector, types.float64),
    ((types.float64,), lambda _context, builder, _kinds, values: _spread(builder, values[0])),
)
