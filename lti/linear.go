package lti

import (
	"fmt"
	"math/big"

	"github.com/qofs/qofs/units"
)

// value is what a part of an equation amounts to, in coherent units: a number
// and a combination of signals and their derivatives.
type value struct {
	dimension units.Dimension // with the radian weightless
	number    *big.Rat        // nil is 0
	terms     map[summand]*big.Rat
	zero      bool // a literal 0, which has any dimension
	degree    int  // bounds the factors in it, so that exponents of units stay small
}

// derivative is a signal by its index, and the order of its derivative.
type derivative struct{ signal, order int }

// summand is a derivative of a signal, of negative order for an integral, and how
// many times its equation must be differentiated until the constants of its
// integrals are gone: once for integral(x), where the order is −1, and for
// integral(x'), which is x but for a constant.
type summand struct {
	derivative
	integrals int
}

// evaluator turns the tree of one equation into a value. It goes on after a
// fault, so that Build can report all of them.
type evaluator struct {
	number   int // of the equation, from 1
	equation equation
	system   *System
	faults   []error
}

const (
	nonlinear = "a transfer function holds only for equations that are linear in the signals; " +
		"replace the term by its slope at an operating point (linearise)"
	maxRatBits = 1 << 13 // of a number in an equation
	maxFaults  = 100     // reported by Build in the terms of equations
	maxFactors = 1 << 12 // signals and constants in a product, powers counted out
)

func (e *evaluator) fail(n *node, format string, args ...any) (value, bool) {
	return e.failWith(n, nil, format, args...)
}

func (e *evaluator) failWith(n *node, err error, format string, args ...any) (value, bool) {
	if len(e.faults) >= maxFaults {
		return value{}, false
	}
	e.faults = append(e.faults, &EquationError{Number: e.number, Equation: e.equation.text, Term: e.equation.text[n.from:n.to],
		Offset: n.from, Reason: fmt.Sprintf(format, args...), Err: err})
	return value{}, false
}

// evaluate returns what n amounts to; ok is false after a fault.
func (e *evaluator) evaluate(n *node) (v value, ok bool) {
	switch n.kind {
	case isNumber:
		r := n.number.Value()
		return value{number: r, zero: r.Sign() == 0}, true
	case isName:
		return e.name(n)
	case isCall:
		return e.fail(n, "%s of a signal is not linear: %s", n.name, nonlinear)
	case isNegative:
		a, ok := e.evaluate(n.a)
		return a.times(big.NewRat(-1, 1), units.Dimension{}), ok
	case isSum, isDifference:
		return e.sum(n)
	case isProduct, isQuotient:
		return e.product(n)
	case isPower:
		return e.power(n)
	case isIntegral:
		return e.integral(n)
	default:
		return e.derivative(n)
	}
}

func (e *evaluator) name(n *node) (value, bool) {
	if i, ok := e.system.signalIndex(n.name); ok {
		s := e.system.signals[i]
		return value{dimension: s.Unit.Dimension().WithoutAngle(), degree: 1,
			terms: map[summand]*big.Rat{{derivative{i, 0}, 0}: big.NewRat(1, 1)}}, true
	}
	if i, ok := e.system.constantIndex(n.name); ok {
		q := e.system.constants[i].Value
		if symbol, cycles := q.Unit().Cycles(); cycles {
			return e.failWith(n, nil, "the constant is in %s, which counts cycles or degrees; an equation needs radians: write %s", symbol, inRadians(q))
		}
		number := q.Value()
		return e.bounded(n, value{dimension: q.Unit().Dimension().WithoutAngle(), degree: 1, number: number.Mul(number, q.Unit().Scale())})
	}
	if len(e.faults) >= maxFaults {
		return value{}, false
	}
	return e.fail(n, "no signal or constant has this name%s; declared are %s", e.system.advice(n.name), e.system.names())
}

// inRadians writes a quantity with cycles and degrees turned into radians, to
// seven digits.
func inRadians(q units.Quantity) string {
	coherent, err := q.ConvertTo(q.Unit().Dimension().Unit())
	if err != nil {
		return "it in rad/s"
	}
	return fmt.Sprintf("%.7g", coherent)
}

// unit is that of a part of the equation, for a message: of a name as it was
// declared, else the coherent one.
func (e *evaluator) unit(n *node, v value) units.Unit {
	if i, ok := e.system.signalIndex(n.name); ok && n.kind == isName {
		return e.system.signals[i].Unit
	}
	if i, ok := e.system.constantIndex(n.name); ok && n.kind == isName {
		return e.system.constants[i].Value.Unit()
	}
	return v.dimension.Unit()
}

// inUnit is "in mm", or "a pure number".
func inUnit(u units.Unit) string {
	if u.IsOne() {
		return "a pure number"
	}
	return "in " + u.String()
}

// sum adds or subtracts; the dimensions must agree.
func (e *evaluator) sum(n *node) (value, bool) {
	a, okA := e.evaluate(n.a)
	b, okB := e.evaluate(n.b)
	if !okA || !okB {
		return value{}, false
	}
	if n.kind == isDifference {
		b = b.times(big.NewRat(-1, 1), units.Dimension{})
	}
	return e.add(n.b, a, b)
}

// add returns a + b; a fault of dimension is put at n, the part that b is.
func (e *evaluator) add(n *node, a, b value) (value, bool) {
	switch {
	case a.zero:
		return b, true
	case b.zero:
		return a, true
	case a.dimension != b.dimension:
		found, want := e.unit(n, b), a.dimension.Unit()
		return e.failWith(n, &units.MismatchError{Found: found, Want: want},
			"the term is %s, the terms before it %s", inUnit(found), inUnit(want))
	}
	// A value has one owner, so that the terms of a can take those of b: a long
	// sum is linear work.
	a.number = new(big.Rat).Add(a.rat(), b.rat())
	if a.terms == nil {
		a.terms = make(map[summand]*big.Rat, len(b.terms))
	}
	a.degree = max(a.degree, b.degree)
	grown := value{number: a.number, terms: make(map[summand]*big.Rat, len(b.terms)), degree: a.degree}
	for k, c := range b.terms {
		if old := a.terms[k]; old != nil {
			c = new(big.Rat).Add(old, c)
		}
		a.terms[k], grown.terms[k] = c, c
	}
	_, ok := e.bounded(n, grown)
	return a, ok
}

func (v value) rat() *big.Rat {
	if v.number == nil {
		return new(big.Rat)
	}
	return v.number
}

// times returns v·k, with d as the dimension of k.
func (v value) times(k *big.Rat, d units.Dimension) value {
	out := value{dimension: v.dimension.Mul(d), number: new(big.Rat).Mul(v.rat(), k), zero: v.zero, degree: v.degree}
	if len(v.terms) > 0 {
		out.terms = make(map[summand]*big.Rat, len(v.terms))
		for t, c := range v.terms {
			out.terms[t] = new(big.Rat).Mul(c, k)
		}
	}
	return out
}

func (v value) isConstant() bool { return len(v.terms) == 0 }

func (e *evaluator) product(n *node) (value, bool) {
	a, okA := e.evaluate(n.a)
	b, okB := e.evaluate(n.b)
	if !okA || !okB {
		return value{}, false
	}
	if n.kind == isQuotient {
		switch {
		case !b.isConstant():
			return e.fail(n, "a division by a signal is not linear: %s", nonlinear)
		case b.rat().Sign() == 0:
			return e.fail(n.b, "a division by zero")
		}
		b = value{dimension: units.Dimension{}.Div(b.dimension), number: new(big.Rat).Inv(b.rat()), degree: b.degree}
	}
	if !a.isConstant() && !b.isConstant() {
		return e.fail(n, "a product of signals is not linear: %s", nonlinear)
	}
	if a.isConstant() {
		a, b = b, a
	}
	out := a.times(b.rat(), b.dimension)
	out.degree += b.degree
	out.zero = a.zero || b.zero
	return e.bounded(n, out)
}

// bounded refuses numbers that have grown beyond all use.
func (e *evaluator) bounded(n *node, v value) (value, bool) {
	size := v.rat().Num().BitLen() + v.rat().Denom().BitLen()
	for _, c := range v.terms {
		size = max(size, c.Num().BitLen()+c.Denom().BitLen())
	}
	if size > maxRatBits {
		return e.failWith(n, ErrLimit, "a number of more than %d bits", maxRatBits)
	}
	if v.degree > maxFactors {
		return e.failWith(n, ErrLimit, "a product of more than %d factors", maxFactors)
	}
	return v, true
}

func (e *evaluator) power(n *node) (value, bool) {
	a, ok := e.evaluate(n.a)
	if !ok {
		return value{}, false
	}
	k := n.order
	switch {
	case k == 1:
		return a, true
	case !a.isConstant():
		return e.fail(n, "a power of a signal is not linear: %s", nonlinear)
	case a.rat().Sign() == 0 && k < 0:
		return e.fail(n, "a negative power of zero")
	case (a.rat().Num().BitLen()+a.rat().Denom().BitLen())*max(k, -k) > maxRatBits:
		return e.failWith(n, ErrLimit, "a number of more than %d bits", maxRatBits)
	}
	factor := value{dimension: a.dimension, number: a.rat()}
	if k < 0 {
		factor = value{dimension: units.Dimension{}.Div(a.dimension), number: new(big.Rat).Inv(a.rat())}
		k = -k
	}
	out := value{number: big.NewRat(1, 1)}
	for range k {
		out = out.times(factor.number, factor.dimension)
	}
	out.degree = a.degree * k
	return e.bounded(n, out)
}

func (e *evaluator) derivative(n *node) (value, bool) {
	a, ok := e.evaluate(n.a)
	if !ok {
		return value{}, false
	}
	if a.isConstant() {
		return e.fail(n, "the derivative of a constant; primes belong to signals")
	}
	return e.shifted(n, a, n.order)
}

// integral returns the antiderivative of a by time. Where it starts is left
// open, so that its equation is one between derivatives.
func (e *evaluator) integral(n *node) (value, bool) {
	a, ok := e.evaluate(n.a)
	switch {
	case !ok:
		return value{}, false
	case a.isConstant():
		return e.fail(n, "the integral of a constant; integral(…) belongs to signals")
	case a.rat().Sign() != 0:
		return e.fail(n, "the integral holds a constant, which grows without end; a linear model holds deviations from an operating point, in which it drops out: leave it away")
	}
	return e.shifted(n, a, -1)
}

// shifted returns the derivative of a, which has signals, of the given order:
// −1 for an integral.
func (e *evaluator) shifted(n *node, a value, order int) (value, bool) {
	out := value{dimension: a.dimension, degree: a.degree, terms: make(map[summand]*big.Rat, len(a.terms))}
	for range order {
		out.dimension = out.dimension.Div(second)
	}
	if order < 0 {
		out.dimension = out.dimension.Mul(second)
	}
	for t, c := range a.terms {
		t.order += order
		t.integrals = max(0, t.integrals-order)
		switch {
		case t.order > maxPrimes:
			return e.failWith(n, ErrLimit, "a derivative of order %d: at most %d", t.order, maxPrimes)
		case t.integrals > maxPrimes:
			return e.failWith(n, ErrLimit, "integrals nested %d deep: at most %d", t.integrals, maxPrimes)
		}
		if old := out.terms[t]; old != nil { // x and integral(x') have one derivative
			c = new(big.Rat).Add(old, c)
		}
		out.terms[t] = c
	}
	return e.bounded(n, out)
}

var second = units.MustParse("s").Dimension()
