// Package impedance holds networks of one-ports (resistors, springs, pipes,
// walls, …) as exact transfer functions.
//
// One convention holds in all domains: the impedance of a one-port is the
// quantity across it over the quantity through it.
//
//	domain                 across           through            resists   stores   is inert
//	electrical             voltage V        current A          ohm       F        H
//	mechanical translation velocity m/s     force N            N*s/m     kg       N/m
//	hydraulic              pressure Pa      flow m^3/s         Pa*s/m^3  m^3/Pa   kg/m^4
//	thermal                temperature K    heat flow W        K/W       J/K      none
//
// For mechanics that is the mobility analogy (Firestone 1933): one-ports are in
// series or in parallel where they are so in the mechanical drawing. A damper has
// the impedance 1/c, a spring s/k, and a mass 1/(m s), from its own velocity to
// the ground: a mass is always against the ground, as the heat in a body is
// always counted against a reference temperature. Neither can lie in the middle
// of a chain.
//
// Any unit of the right dimension is taken and converted exactly. All results are
// in the units of the table; ConvertUnits changes them. For positions instead of
// velocities there are Transmissibility and Receptance.
//
//	mount := impedance.MustParse("50 kN/m || 640 N*s/m")
//	bench := impedance.MustParse("200 kg")
//	g, err := impedance.Transmissibility(mount, bench) // from the floor to the bench
package impedance

import (
	"fmt"

	"github.com/qofs/qofs/internal/fault"
	"github.com/qofs/qofs/poly"
	"github.com/qofs/qofs/tf"
	"github.com/qofs/qofs/units"
)

var (
	// ErrLimit: a documented bound on size or work was reached.
	ErrLimit = fault.ErrLimit
	// ErrDivisionByZero: the reciprocal of an impedance or of a ratio that is 0.
	ErrDivisionByZero = fault.ErrDivisionByZero
)

// MaxElements bounds the elements of a network. The bits of all its values in
// coherent units must not pass 2^18 either, nor 2^26 when multiplied by its order plus one, which
// bounds the memory that a result takes.
const MaxElements = 2048

const (
	maxBits = 1 << 18
	maxWork = 1 << 26
)

// Domain is a domain of physics. The zero value is none: that of a one-port
// with the impedance 0.
type Domain uint8

// The domains.
const (
	Electrical Domain = iota + 1
	Translational
	Hydraulic
	Thermal
)

var domains = [...]struct {
	name            string
	across, through units.Unit
}{
	{name: "no domain"},
	Electrical:    {"electrical", units.MustParse("V"), units.MustParse("A")},
	Translational: {"mechanical (translation)", units.MustParse("m/s"), units.MustParse("N")},
	Hydraulic:     {"hydraulic", units.MustParse("Pa"), units.MustParse("m^3/s")},
	Thermal:       {"thermal", units.MustParse("K"), units.MustParse("W")},
}

// String names the domain.
func (d Domain) String() string {
	if int(d) < len(domains) {
		return domains[d].name
	}
	return fmt.Sprintf("Domain(%d)", uint8(d))
}

// Across returns the unit of what is measured across a one-port: V, m/s, Pa or
// K, and 1 for no domain.
func (d Domain) Across() units.Unit {
	if int(d) < len(domains) {
		return domains[d].across
	}
	return units.Unit{}
}

// Through returns the unit of what flows through a one-port: A, N, m^3/s or W,
// and 1 for no domain.
func (d Domain) Through() units.Unit {
	if int(d) < len(domains) {
		return domains[d].through
	}
	return units.Unit{}
}

// OnePort is an element or a network between two terminals. It is an immutable
// value, safe to share. The zero value has the impedance 0, as a wire, a rigid
// link or an open pipe has, and fits every domain.
type OnePort struct {
	_ [0]func()
	p *port
}

// port is what a OnePort points to; it never changes. The impedance is num/den.
// Each storing or inert element puts one factor s into one of the two, so that
// both are the characteristic polynomials of the network, with its terminals
// short and open.
type port struct {
	domain   Domain
	num, den poly.Poly
	grounded bool // one terminal is the ground
	size     size

	join  join
	value units.Quantity // of an element, as entered
	parts []OnePort      // of a network
}

type join uint8

const (
	element join = iota
	inSeries
	inParallel
)

// size is what the limits count.
type size struct{ elements, order, bits int }

func (s size) plus(t size) size {
	return size{s.elements + t.elements, s.order + t.order, s.bits + t.bits}
}

// size counts a one-port with the impedance 0 as an element too.
func (z OnePort) size() size {
	if z.p == nil {
		return size{elements: 1}
	}
	return z.p.size
}

func (s size) check() error {
	if s.elements > MaxElements {
		return fmt.Errorf("impedance: %d elements, want at most %d: %w", s.elements, MaxElements, ErrLimit)
	}
	if s.bits > maxBits || int64(s.order+1)*int64(s.bits) > maxWork {
		return fmt.Errorf("impedance: a network of order %d with values of %d bits in all, want at most %d bits and (order + 1)*bits of at most %d: %w",
			s.order, s.bits, maxBits, maxWork, ErrLimit)
	}
	return nil
}

var (
	onePoly  = poly.FromInts(1)
	wirePort = &port{den: onePoly}
)

func (z OnePort) port() *port {
	if z.p == nil {
		return wirePort
	}
	return z.p
}

// Domain returns the domain of the one-port.
func (z OnePort) Domain() Domain { return z.port().domain }

// Impedance returns across over through, such as V/A, as a function from the
// through quantity to the across quantity. It may be improper: s L of an
// inductor.
//
// Each storing or inert element adds 1 to the degree of numerator or
// denominator, but for elements that act as one: springs side by side, or
// capacitors in a row, also where resistances lie between them. No element
// outside can tell or change the force by which two parallel springs are braced
// against each other; the factor s that stands for it is left out. All other
// common factors stay, as everywhere.
func (z OnePort) Impedance() tf.Continuous {
	p := z.port()
	return ratio(p.num, p.den, p.domain.Through(), p.domain.Across())
}

// Admittance returns through over across, 1/Impedance. The error is
// ErrDivisionByZero for an impedance of 0.
func (z OnePort) Admittance() (tf.Continuous, error) {
	p := z.port()
	if p.num.IsZero() {
		return tf.Continuous{}, fmt.Errorf("impedance: the admittance of a one-port with the impedance 0: %w", ErrDivisionByZero)
	}
	return ratio(p.den, p.num, p.domain.Across(), p.domain.Through()), nil
}

// ratio is num/den for a den that is not 0, with units.
func ratio(num, den poly.Poly, in, out units.Unit) tf.Continuous {
	g, err := tf.New(num, den)
	if err == nil {
		g, err = g.WithUnits(in, out)
	}
	if err != nil { // not reached: den is not 0, and a function from 1 to 1 takes any units
		return tf.Continuous{}
	}
	return g
}
