package ball

// Complex is a complex number whose parts are balls: a rectangle.
type Complex struct{ Re, Im Real }

// NewComplex returns re + i·im.
func NewComplex(re, im Real) Complex { return Complex{Re: re, Im: im} }

// FromComplex128 returns the exact ball of z; a part that is not finite is
// indeterminate.
func FromComplex128(z complex128) Complex {
	return Complex{Re: FromFloat64(real(z)), Im: FromFloat64(imag(z))}
}

// Add returns z + w.
func (z Complex) Add(w Complex, prec uint) Complex {
	return Complex{Re: z.Re.Add(w.Re, prec), Im: z.Im.Add(w.Im, prec)}
}

// Sub returns z - w.
func (z Complex) Sub(w Complex, prec uint) Complex {
	return Complex{Re: z.Re.Sub(w.Re, prec), Im: z.Im.Sub(w.Im, prec)}
}

// Neg returns -z.
func (z Complex) Neg() Complex { return Complex{Re: z.Re.Neg(), Im: z.Im.Neg()} }

// Conj returns the conjugate of z.
func (z Complex) Conj() Complex { return Complex{Re: z.Re, Im: z.Im.Neg()} }

// MulPow2 returns z·2^k exactly.
func (z Complex) MulPow2(k int) Complex {
	return Complex{Re: z.Re.MulPow2(k), Im: z.Im.MulPow2(k)}
}

// Round rounds the midpoints to prec bits.
func (z Complex) Round(prec uint) Complex {
	return Complex{Re: z.Re.Round(prec), Im: z.Im.Round(prec)}
}

// IsFinite reports whether both parts are.
func (z Complex) IsFinite() bool { return z.Re.IsFinite() && z.Im.IsFinite() }

// IsZero reports whether z is exactly zero.
func (z Complex) IsZero() bool { return z.Re.IsZero() && z.Im.IsZero() }

// ContainsZero reports whether 0 is a point of z.
func (z Complex) ContainsZero() bool { return z.Re.ContainsZero() && z.Im.ContainsZero() }

// Mul returns z·w; a part that is exactly zero costs nothing. The products are
// not rounded before they are added when they fit.
func (z Complex) Mul(w Complex, prec uint) Complex {
	if z.Im.IsZero() {
		return w.MulReal(z.Re, prec)
	}
	if w.Im.IsZero() {
		return z.MulReal(w.Re, prec)
	}
	p := precision(prec) + 4
	return Complex{
		Re: z.Re.Mul(w.Re, p).Sub(z.Im.Mul(w.Im, p), prec),
		Im: z.Re.Mul(w.Im, p).Add(z.Im.Mul(w.Re, p), prec),
	}
}

// MulReal returns z·x.
func (z Complex) MulReal(x Real, prec uint) Complex {
	return Complex{Re: z.Re.Mul(x, prec), Im: z.Im.Mul(x, prec)}
}

// Sqr returns z².
func (z Complex) Sqr(prec uint) Complex {
	p := precision(prec) + 4
	return Complex{
		Re: z.Re.Sqr(p).Sub(z.Im.Sqr(p), prec),
		Im: z.Re.Mul(z.Im, prec).MulPow2(1),
	}
}

// norm returns |z|².
func (z Complex) norm(prec uint) Real { return z.Re.Sqr(prec).Add(z.Im.Sqr(prec), prec) }

// Div returns z/w, indeterminate in both parts when w contains 0.
func (z Complex) Div(w Complex, prec uint) Complex {
	if w.Im.IsZero() {
		return Complex{Re: z.Re.Div(w.Re, prec), Im: z.Im.Div(w.Re, prec)}
	}
	p := precision(prec) + 8
	n := w.norm(p)
	q := z.Mul(w.Conj(), p)
	return Complex{Re: q.Re.Div(n, prec), Im: q.Im.Div(n, prec)}
}

// Exp returns e^z.
func (z Complex) Exp(prec uint) Complex {
	if z.Im.IsZero() {
		return Complex{Re: z.Re.Exp(prec)}
	}
	p := precision(prec) + 4
	s, c := z.Im.SinCos(p)
	if z.Re.IsZero() {
		return Complex{Re: c.Round(prec), Im: s.Round(prec)}
	}
	r := z.Re.Exp(p)
	return Complex{Re: r.Mul(c, prec), Im: r.Mul(s, prec)}
}

// PowInt returns z^n by repeated squaring; z^0 is 1.
func (z Complex) PowInt(n int, prec uint) Complex {
	if z.Im.IsZero() {
		return Complex{Re: z.Re.PowInt(n, prec)}
	}
	k := uint64(n)
	if n < 0 {
		k = -k
	}
	one := Complex{Re: FromInt64(1)}
	if k == 0 {
		return one
	}
	work := precision(prec) + 3*uint(bitLen(k)) + 4
	p := z
	for i := bitLen(k) - 2; i >= 0 && p.IsFinite(); i-- {
		p = p.Sqr(work)
		if k>>i&1 != 0 {
			p = p.Mul(z, work)
		}
	}
	if n < 0 {
		return one.Div(p, prec)
	}
	return p.Round(prec)
}

// Abs returns |z|.
func (z Complex) Abs(prec uint) Real {
	if z.Im.IsZero() {
		return z.Re.Abs().Round(prec)
	}
	if z.Re.IsZero() {
		return z.Im.Abs().Round(prec)
	}
	return z.norm(precision(prec) + 4).sqrtClipped(prec)
}

// Arg returns the angle of z, as [Atan2] does.
func (z Complex) Arg(prec uint) Real { return Atan2(z.Im, z.Re, prec) }

// Complex128 returns z with each part correctly rounded, as [Real.Float64] does.
func (z Complex) Complex128() (v complex128, ok bool) {
	re, okRe := z.Re.Float64()
	im, okIm := z.Im.Float64()
	return complex(re, im), okRe && okIm
}
