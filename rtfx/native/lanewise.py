"""Write a formula once; have it as code for one sample, and for all samples of a frame at once.

A formula is a Python function of `Lanes`: numbers that stand side by side, with the usual operators, and
``x.after(last)`` for "the sample before each x, the first one's being *last*", ``x.last()`` for the newest.

    def formula(x, gain, last):              # y[n] = gain (x[n] + x[n-1])
        return gain * (x + x.after(last)), x.last()

`both_ways` makes two functions of it: ``tick(x, gain, last) -> (y, last)`` for one sample, and
``sweep(memory, source, target, many, gain, last) -> (last,)`` for *many* samples at memory[source:], written to
memory[target:].  The bits are the same either way: every lane is computed as the one sample would be.
"""

from __future__ import annotations

import inspect
from math import sqrt

from llvmlite import ir
from numba import config, types
from numba.extending import intrinsic

from rtfx.native.options import f64p

_I64, _I32, _DOUBLE = ir.IntType(64), ir.IntType(32), ir.DoubleType()


class Lanes:
    """Numbers side by side while code is being generated; with *width* 1 it is a single double."""

    def __init__(self, builder, value, width):
        self.builder, self.value, self.width = builder, value, width

    def _everywhere(self, value):
        if self.width == 1:
            return value
        vector = ir.Constant(ir.VectorType(_DOUBLE, self.width), ir.Undefined)
        one = self.builder.insert_element(vector, value, ir.Constant(_I32, 0))
        return self._cut(one, one, [0] * self.width)

    def _cut(self, first, second, places):
        return self.builder.shuffle_vector(first, second, ir.Constant(ir.VectorType(_I32, len(places)), places))

    def _with(self, operation, other, turned=False):
        if not isinstance(other, Lanes):
            other = Lanes(self.builder, self._everywhere(ir.Constant(_DOUBLE, float(other))), self.width)
        elif other.width != self.width:
            return NotImplemented if other.width > self.width else self._with(operation, self._like(other), turned)
        pair = (other.value, self.value) if turned else (self.value, other.value)
        return Lanes(self.builder, operation(*pair), self.width)

    def _like(self, single):
        return Lanes(self.builder, self._everywhere(single.value), self.width)

    def __add__(self, other):
        return self._with(self.builder.fadd, other)

    def __sub__(self, other):
        return self._with(self.builder.fsub, other)

    def __mul__(self, other):
        return self._with(self.builder.fmul, other)

    def __truediv__(self, other):
        return self._with(self.builder.fdiv, other)

    def __radd__(self, other):
        return self._with(self.builder.fadd, other, turned=True)

    def __rsub__(self, other):
        return self._with(self.builder.fsub, other, turned=True)

    def __rmul__(self, other):
        return self._with(self.builder.fmul, other, turned=True)

    def __rtruediv__(self, other):
        return self._with(self.builder.fdiv, other, turned=True)

    def sqrt(self):
        """The square root of each."""
        suffix = "f64" if self.width == 1 else f"v{self.width}f64"
        name, kind = f"llvm.sqrt.{suffix}", ir.FunctionType(self.value.type, [self.value.type])
        function = self.builder.module.globals.get(name) or ir.Function(self.builder.module, kind, name)
        return Lanes(self.builder, self.builder.call(function, [self.value]), self.width)

    def _selected(self, order, other, first, second):
        """*first* where this is in *order* (as "<") to *other*, else *second*."""
        chosen = self._with(lambda a, b: self.builder.fcmp_ordered(order, a, b), other)
        pair = (v.value if isinstance(v, Lanes) else self._everywhere(ir.Constant(_DOUBLE, v)) for v in (first, second))
        return Lanes(self.builder, self.builder.select(chosen.value, *pair), self.width)

    def least(self, other):
        """The smaller of each and *other*."""
        return self._selected("<", other, self, other)

    def most(self, other):
        """The greater of each and *other*."""
        return self._selected(">", other, self, other)

    def over(self, divisor, otherwise):
        """Each divided by *divisor* where that is above 0, else *otherwise*."""
        return divisor._selected(">", 0.0, self / divisor, otherwise)

    def after(self, last):
        """The sample before each; *last* came before the first."""
        if self.width == 1:
            return last
        before = self._cut(self.value, self._everywhere(last.value), [self.width, *range(self.width - 1)])
        return Lanes(self.builder, before, self.width)

    def last(self):
        """The newest sample."""
        if self.width == 1:
            return self
        newest = self.builder.extract_element(self.value, ir.Constant(_I32, self.width - 1))
        return Lanes(self.builder, newest, 1)


class Number(float):
    """One sample in plain Python, with the operations of `Lanes`."""

    def __add__(self, other):
        return Number(float.__add__(self, other))

    def __sub__(self, other):
        return Number(float.__sub__(self, other))

    def __mul__(self, other):
        return Number(float.__mul__(self, other))

    def __truediv__(self, other):
        return Number(float.__truediv__(self, other))

    __radd__, __rmul__ = __add__, __mul__

    def __rsub__(self, other):
        return Number(float.__rsub__(self, other))

    def __rtruediv__(self, other):
        return Number(float.__rtruediv__(self, other))

    def sqrt(self):
        """The square root."""
        return Number(sqrt(self))

    def least(self, other):
        """The smaller of this and *other*."""
        return self if self < other else Number(other)

    def most(self, other):
        """The greater of this and *other*."""
        return self if self > other else Number(other)

    def over(self, divisor, otherwise):
        """This divided by *divisor* where that is above 0, else *otherwise*."""
        return self / divisor if divisor > 0.0 else otherwise

    def after(self, last):
        """The sample before: *last*."""
        return last

    def last(self):
        """The newest sample: this one."""
        return self


def _typed(formula, leading, build, **options):
    """Return an intrinsic with *leading* arguments and those of *formula* after its first, made by *build*.

    numba wants them spelled out one by one, so the function is written as text.
    """
    names = ", ".join([*leading, *list(inspect.signature(formula).parameters)[1:]])
    made = {"build": build}
    exec(f"def typed(typing_context, {names}):\n    return build({names})", made)
    made["typed"].__module__ = formula.__module__
    return (intrinsic(**options) if options else intrinsic)(made["typed"])


def _tick(formula):
    def build(*numbers):
        signature = types.UniTuple(types.float64, _results(formula))(*[types.float64] * len(numbers))

        def generate(context, builder, signature, args):
            results = formula(*(Lanes(builder, a, 1) for a in args))
            return context.make_tuple(builder, signature.return_type, [r.value for r in results])

        return signature, generate

    return _typed(formula, ["x"], build)


def _sweep(formula):
    def build(memory, source, target, many, *numbers):
        if not isinstance(many, types.IntegerLiteral):
            return None
        places = (f64p, types.int64, types.int64, many)
        state = types.UniTuple(types.float64, _results(formula) - 1)
        signature = state(*places, *[types.float64] * len(numbers))

        def generate(context, builder, signature, args):
            base, source, target, _, *rest = args
            vector = ir.VectorType(_DOUBLE, many.literal_value).as_pointer()
            x = builder.load(builder.bitcast(builder.gep(base, [source]), vector), align=8)
            y, *state = formula(Lanes(builder, x, many.literal_value), *(Lanes(builder, a, 1) for a in rest))
            builder.store(y.value, builder.bitcast(builder.gep(base, [target]), vector), align=8)
            return context.make_tuple(builder, signature.return_type, [s.value for s in state])

        return signature, generate

    return _typed(formula, ["memory", "source", "target", "many"], build, prefer_literal=True)


def _results(formula):
    """How many numbers *formula* gives: it is tried on ones."""
    return len(formula(*[Number(1.0)] * len(inspect.signature(formula).parameters)))


def both_ways(formula):
    """Return ``tick`` and ``sweep`` of a formula (see the module); in plain Python both run it sample by sample."""
    if not config.DISABLE_JIT:
        return _tick(formula), _sweep(formula)

    def tick(x, *numbers):
        return tuple(map(float, formula(Number(x), *map(Number, numbers))))

    def sweep(memory, source, target, many, *numbers):
        states = _results(formula) - 1
        fixed, state = numbers[: len(numbers) - states], numbers[len(numbers) - states :]
        for j in range(many):
            memory[target + j], *state = tick(memory[source + j], *fixed, *state)
        return tuple(state)

    tick.__module__ = sweep.__module__ = formula.__module__
    return tick, sweep
