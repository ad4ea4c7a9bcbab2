package impedance

import (
	"fmt"

	"github.com/qofs/qofs/poly"
	"github.com/qofs/qofs/units"
)

// kind is a kind of element: its impedance is x^exponent·s^power for the value
// x in the coherent unit.
type kind struct {
	name            string // "resistor", with its article: "a resistor"
	domain          Domain
	unit            units.Unit
	exponent, power int
	grounded        bool
}

var (
	resistor  = &kind{"a resistor", Electrical, units.MustParse("ohm"), 1, 0, false}
	capacitor = &kind{"a capacitor", Electrical, units.MustParse("F"), -1, -1, false}
	inductor  = &kind{"an inductor", Electrical, units.MustParse("H"), 1, 1, false}

	damper = &kind{"a damper", Translational, units.MustParse("N*s/m"), -1, 0, false}
	mass   = &kind{"a mass", Translational, units.MustParse("kg"), -1, -1, true}
	spring = &kind{"a spring", Translational, units.MustParse("N/m"), -1, 1, false}

	restriction = &kind{"a restriction", Hydraulic, units.MustParse("Pa*s/m^3"), 1, 0, false}
	accumulator = &kind{"an accumulator", Hydraulic, units.MustParse("m^3/Pa"), -1, -1, false}
	fluidColumn = &kind{"a fluid column", Hydraulic, units.MustParse("kg/m^4"), 1, 1, false}

	thermalResistance = &kind{"a thermal resistance", Thermal, units.MustParse("K/W"), 1, 0, false}
	heatCapacity      = &kind{"a heat capacity", Thermal, units.MustParse("J/K"), -1, -1, true}

	kinds = []*kind{resistor, capacitor, inductor, damper, mass, spring,
		restriction, accumulator, fluidColumn, thermalResistance, heatCapacity}
)

// Resistor returns a resistance R > 0, such as 10 kohm. Its impedance is R.
// As for all elements here, the errors are a *units.MismatchError for a value of
// another dimension, a *ValueError for one that is not above 0, and ErrLimit
// beyond the bounds of MaxElements.
func Resistor(r units.Quantity) (OnePort, error) { return resistor.of(r) }

// Capacitor returns a capacitance C > 0, such as 100 nF. Its impedance is
// 1/(C s). The errors are those of Resistor.
func Capacitor(c units.Quantity) (OnePort, error) { return capacitor.of(c) }

// Inductor returns an inductance L > 0, such as 2 mH. Its impedance is L s. The
// errors are those of Resistor.
func Inductor(l units.Quantity) (OnePort, error) { return inductor.of(l) }

// Damper returns a viscous damper c > 0, such as 640 N*s/m. Its impedance,
// velocity over force, is 1/c. The errors are those of Resistor.
func Damper(c units.Quantity) (OnePort, error) { return damper.of(c) }

// Mass returns a mass m > 0, such as 200 kg, between its own velocity and the
// ground. Its impedance is 1/(m s). The errors are those of Resistor.
func Mass(m units.Quantity) (OnePort, error) { return mass.of(m) }

// Spring returns a stiffness k > 0, such as 50 kN/m. Its impedance is s/k. The
// errors are those of Resistor.
func Spring(k units.Quantity) (OnePort, error) { return spring.of(k) }

// Restriction returns a laminar resistance to flow R > 0, such as 0.2 bar*s/L:
// the slope of pressure drop by flow at the operating point. Its impedance is R.
// The errors are those of Resistor.
func Restriction(r units.Quantity) (OnePort, error) { return restriction.of(r) }

// Accumulator returns a hydraulic capacity C > 0, volume over pressure, such as
// 0.3 L/bar: of gas over a liquid, of elastic walls, and of an open tank its
// area over density and gravity. Its impedance is 1/(C s). The errors are those
// of Resistor.
func Accumulator(c units.Quantity) (OnePort, error) { return accumulator.of(c) }

// FluidColumn returns the inertance L > 0 of the fluid in a pipe, density times
// length over area, such as 4e6 kg/m^4. Its impedance is L s. The errors are
// those of Resistor.
func FluidColumn(l units.Quantity) (OnePort, error) { return fluidColumn.of(l) }

// ThermalResistance returns a resistance to heat flow R > 0, such as 0.12 K/W.
// Its impedance is R. The errors are those of Resistor.
func ThermalResistance(r units.Quantity) (OnePort, error) { return thermalResistance.of(r) }

// HeatCapacity returns the heat capacity C > 0 of a body of uniform
// temperature, such as 18 kJ/K, between its temperature and the reference. Its
// impedance is 1/(C s). The errors are those of Resistor.
func HeatCapacity(c units.Quantity) (OnePort, error) { return heatCapacity.of(c) }

// Element returns the element that a quantity stands for: its dimension tells
// which one, a resistor for ohm, a spring for N/m, and so on by the table of the
// package. The errors are *UnknownElementError for any other dimension, and
// those of Resistor.
func Element(value units.Quantity) (OnePort, error) {
	for _, k := range kinds {
		if k.unit.Dimension() == value.Unit().Dimension() {
			return k.of(value)
		}
	}
	return OnePort{}, &UnknownElementError{Found: value.Unit()}
}

func (k *kind) of(value units.Quantity) (OnePort, error) {
	q, err := value.ConvertTo(k.unit)
	if err != nil {
		return OnePort{}, fmt.Errorf("impedance: %w", &units.MismatchError{Found: value.Unit(), Want: k.unit, What: k.name})
	}
	if q.Sign() <= 0 {
		return OnePort{}, &ValueError{Element: k.name, Value: value}
	}
	x := q.Value()
	p := &port{domain: k.domain, grounded: k.grounded, value: value,
		size: size{elements: 1, bits: x.Num().BitLen() + x.Denom().BitLen()}}
	if k.power != 0 {
		p.size.order = 1
	}
	if err := p.size.check(); err != nil {
		return OnePort{}, err
	}
	if k.exponent < 0 {
		x.Inv(x)
	}
	num, den := poly.FromRats(x), onePoly
	if k.power > 0 {
		num = poly.FromRats(nil, x)
	}
	if k.power < 0 {
		den = poly.FromInts(0, 1)
	}
	p.num, p.den = num, den
	return OnePort{p: p}, nil
}
