package units

import (
	"errors"
	"fmt"
	"math"
	"math/big"

	"gonum.org/v1/gonum/unit"

	"github.com/qofs/qofs/internal/fault"
)

// ErrNoCounterpart: gonum has no dimension for count, LSB or %, or this package
// has none for a dimension that was made with gonum's NewDimension.
var ErrNoCounterpart = errors.New("dimension without a counterpart")

var gonumDimensions = map[int]unit.Dimension{
	metre: unit.LengthDim, kilogram: unit.MassDim, second: unit.TimeDim, ampere: unit.CurrentDim, kelvin: unit.TemperatureDim,
	mole: unit.MoleDim, candela: unit.LuminousIntensityDim, radian: unit.AngleDim,
}

// Gonum returns d as dimensions of gonum.org/v1/gonum/unit, which tracks angles
// too. The error wraps ErrNoCounterpart, or ErrLimit.
func (d Dimension) Gonum() (unit.Dimensions, error) {
	if d.beyond {
		return nil, fmt.Errorf("units: %w", ErrLimit)
	}
	out := unit.Dimensions{}
	for i, e := range d.exponents {
		if e == 0 {
			continue
		}
		g, ok := gonumDimensions[i]
		if !ok {
			return nil, fmt.Errorf("units: %w: gonum has none for %s", ErrNoCounterpart, baseSymbols[i])
		}
		out[g] = int(e)
	}
	return out, nil
}

// DimensionFromGonum reads dimensions of gonum.org/v1/gonum/unit. The error
// wraps ErrNoCounterpart, or ErrLimit for a power beyond MaxPower.
func DimensionFromGonum(dimensions unit.Dimensions) (Dimension, error) {
	var d Dimension
	left := 0
	for _, e := range dimensions {
		if e != 0 {
			left++
		}
	}
	for i := range d.exponents {
		g, ok := gonumDimensions[i]
		if !ok || dimensions[g] == 0 {
			continue
		}
		e := dimensions[g]
		if e > MaxPower || e < -MaxPower {
			return Dimension{}, fmt.Errorf("units: %w: the power %d of %s, want at most %d", ErrLimit, e, baseSymbols[i], MaxPower)
		}
		d.exponents[i] = int32(e)
		left--
	}
	if left > 0 {
		return Dimension{}, fmt.Errorf("units: %w: there is none for a dimension in %s", ErrNoCounterpart, dimensions)
	}
	return d, nil
}

// Gonum returns q as a value of gonum.org/v1/gonum/unit, in coherent units and
// correctly rounded: 1 Hz is 2π rad/s there as here. The error wraps
// ErrNoCounterpart, ErrLimit or ErrRange.
func (q Quantity) Gonum() (*unit.Unit, error) {
	d, err := q.unit.Dimension().Gonum()
	if err != nil {
		return nil, err
	}
	v, err := q.In(q.unit.Dimension().Unit())
	if err != nil {
		return nil, err
	}
	return unit.New(v, d), nil
}

// QuantityFromGonum reads a value of gonum.org/v1/gonum/unit, which is in
// coherent units; the float64 is taken exactly. Mind that gonum's Frequency is
// 1/s, which is not Hz here. The error wraps ErrNoCounterpart, ErrLimit, or
// ErrNotFinite for NaN, infinities and nil.
func QuantityFromGonum(value unit.Uniter) (Quantity, error) {
	if value == nil {
		return Quantity{}, fmt.Errorf("units: %w: nil", ErrNotFinite)
	}
	u := value.Unit()
	if u == nil || math.IsNaN(u.Value()) || math.IsInf(u.Value(), 0) {
		return Quantity{}, fmt.Errorf("units: %w", ErrNotFinite)
	}
	d, err := DimensionFromGonum(u.Dimensions())
	if err != nil {
		return Quantity{}, err
	}
	return NewQuantity(new(big.Rat).SetFloat64(u.Value()), d.Unit()), nil
}

// ErrNotFinite: a NaN or an infinity where a number is needed.
var ErrNotFinite = fault.ErrNotFinite
