package units

import (
	"encoding/json"
	"errors"
	"fmt"
	"math/big"
	"math/rand/v2"
	"strings"
	"testing"
	"time"

	"gonum.org/v1/gonum/unit"
)

var sample = []string{"1", "m", "mm", "kg", "s", "min", "A", "mA", "K", "degF", "rad", "deg", "Hz", "rpm", "N", "psi", "%", "count", "LSB", "V", "kΩ", "L/min", "m^3/(s*mm)", "W/m²", "µm", "1/s^2"}

func TestLaws(t *testing.T) {
	r := rand.New(rand.NewPCG(1, 2))
	pick := func() Unit { return MustParse(sample[r.IntN(len(sample))]) }
	for range 3000 {
		u, v, w := pick(), pick(), pick()
		for name, pair := range map[string][2]Unit{
			"inverse of Mul": {u.Mul(v).Div(v), u}, "commutative": {u.Mul(v), v.Mul(u)}, "associative": {u.Mul(v).Mul(w), u.Mul(v.Mul(w))},
			"Inverse": {u.Inverse().Inverse(), u}, "text": {MustParse(u.Mul(v).Div(w).String()), u.Mul(v).Div(w)},
		} {
			if !pair[0].Equal(pair[1]) {
				t.Fatalf("%s: %v, %v, %v give %v and %v", name, u, v, w, pair[0], pair[1])
			}
		}
		squared, err := u.Pow(2)
		if err != nil || !squared.Equal(u.Mul(u)) {
			t.Fatalf("%v squared is %v, %v", u, squared, err)
		}
		if u.Dimension() == v.Dimension() && v.Dimension() == w.Dimension() {
			a, _ := u.ConversionTo(v)
			b, _ := v.ConversionTo(w)
			c, err := u.ConversionTo(w)
			if err != nil || c.Cmp(a.Mul(a, b)) != 0 {
				t.Fatalf("conversion from %v by %v to %v", u, v, w)
			}
		}
	}
}

func TestBounds(t *testing.T) {
	u := MustParse("m")
	for range 10 {
		u = u.Mul(u)
	}
	if u.Equal(u) {
		t.Error("m^1024 equals itself")
	}
	if _, err := u.ConversionTo(u); !errors.Is(err, ErrLimit) {
		t.Errorf("a conversion past the bounds: %v", err)
	}
	if _, err := MustParse("m^33").Pow(2); !errors.Is(err, ErrLimit) {
		t.Errorf("m^66: %v", err)
	}
	var zero Unit
	if !zero.Mul(zero).Div(zero).Inverse().IsOne() || zero.String() != "1" {
		t.Error("the unit 1")
	}
}

func TestMismatch(t *testing.T) {
	for _, c := range []struct{ from, to, says string }{
		{"m", "s", "dimensions differ"}, {"rad/s", "1/s", "radians"}, {"Hz", "1/s", "radians"}, {"%", "1", "dimensions differ"},
	} {
		_, err := MustParse(c.from).ConversionTo(MustParse(c.to))
		var mismatch *MismatchError
		if !errors.As(err, &mismatch) || !strings.Contains(err.Error(), c.says) {
			t.Errorf("%s to %s: %v, want one that says %q", c.from, c.to, err, c.says)
		}
	}
	if err := (&MismatchError{Found: MustParse("V"), Want: MustParse("mV")}).Error(); !strings.Contains(err, "1000") {
		t.Errorf("V into mV: %s", err)
	}
}

func TestQuantityArithmetic(t *testing.T) {
	a, b := MustParseQuantity("2 m"), MustParseQuantity("50 cm")
	sum, err := a.Add(b)
	if err != nil || sum.String() != "2.5 m" {
		t.Errorf("%v, %v", sum, err)
	}
	if d, err := b.Sub(a); err != nil || d.String() != "-150 cm" {
		t.Errorf("%v, %v", d, err)
	}
	if q, err := a.Div(MustParseQuantity("4 s")); err != nil || q.String() != "0.5 m/s" || !a.Mul(b).Equal(MustParseQuantity("1 m^2")) {
		t.Errorf("%v, %v", q, err)
	}
	if _, err := a.Div(Quantity{}); !errors.Is(err, ErrDivisionByZero) {
		t.Errorf("over 0: %v", err)
	}
	if c, err := a.Compare(b); err != nil || c != 1 {
		t.Errorf("%d, %v", c, err)
	}
	if v, err := b.In(MustParse("mm")); err != nil || v != 500 {
		t.Errorf("%v, %v", v, err)
	}
	if q := FromDuration(1500 * time.Millisecond); q.String() != "1.5 s" {
		t.Errorf("%v", q)
	}
	huge := NewQuantity(new(big.Rat).SetInt(new(big.Int).Lsh(big.NewInt(1), 2000)), Unit{})
	if _, err := huge.Float64(); !errors.Is(err, ErrRange) {
		t.Errorf("2^2000: %v", err)
	}
	if got := fmt.Sprintf("%.3g|%v|%d", MustParseQuantity("1/3 m"), MustParseQuantity("1/3 m"), b); got != "0.333 m|1/3 m|%!d(units.Quantity=50 cm)" {
		t.Errorf("formats %s", got)
	}
	if _, err := ParseAbsolute("-300 degC"); err == nil {
		t.Error("a temperature below absolute zero was taken")
	}
}

func TestTextForms(t *testing.T) {
	type config struct {
		Unit     Unit
		Quantity Quantity
		Signal   Signal
	}
	in := config{MustParse("kg·m²/s²"), MustParseQuantity("12.5 mN*m/A"), Signal{"level", MustParse("mm")}}
	text, err := json.Marshal(in)
	if err != nil {
		t.Fatal(err)
	}
	var out config
	if err := json.Unmarshal(text, &out); err != nil {
		t.Fatal(err)
	}
	if out.Unit.String() != in.Unit.String() || !out.Quantity.Equal(in.Quantity) || !out.Signal.Equal(in.Signal) {
		t.Errorf("%s reads back as %+v", text, out)
	}
	if s, err := ParseSignal("level: m/s"); err != nil || s.Name != "level" || s.Unit.String() != "m/s" {
		t.Errorf("%v, %v", s, err)
	}
	if _, err := ParseSignal(": m"); err == nil {
		t.Error("a signal without a name before its colon was taken")
	}
}

func TestGonum(t *testing.T) {
	q := MustParseQuantity("12.5 mN*m/A")
	g, err := q.Gonum()
	if err != nil || g.Value() != 0.0125 || !unit.DimensionsMatch(g, unit.New(1, unit.Dimensions{unit.MassDim: 1, unit.LengthDim: 2, unit.TimeDim: -2, unit.CurrentDim: -1})) {
		t.Errorf("%v, %v", g, err)
	}
	back, err := QuantityFromGonum(g)
	if err != nil || back.Unit().Dimension() != q.Unit().Dimension() {
		t.Errorf("%v, %v", back, err)
	}
	if v, err := back.In(q.Unit()); err != nil || v != 12.5 {
		t.Errorf("%v, %v", v, err)
	}
	if f, err := QuantityFromGonum(unit.Force(3)); err != nil || !f.Equal(MustParseQuantity("3 N")) {
		t.Errorf("gonum's newton: %v, %v", f, err)
	}
	if _, err := MustParseQuantity("3 count").Gonum(); !errors.Is(err, ErrNoCounterpart) {
		t.Errorf("count: %v", err)
	}
	if _, err := QuantityFromGonum(nil); !errors.Is(err, ErrNotFinite) {
		t.Errorf("nil: %v", err)
	}
	for _, u := range sample {
		d := MustParse(u).Dimension()
		g, err := d.Gonum()
		if err != nil {
			continue
		}
		if e, err := DimensionFromGonum(g); err != nil || e != d {
			t.Errorf("%s: %v, %v", u, e, err)
		}
	}
}

func TestSuggestions(t *testing.T) {
	for text, want := range map[string]string{"metre": `"m"`, "seconds": `"s"`, "m3": "m^3", "kpa": `"kPa"`, "KG": "kg", "Nm": "N*m", "dB": "decibels", "ohms": `"ohm"`} {
		_, err := Parse(text)
		if err == nil || !strings.Contains(err.Error(), want) {
			t.Errorf("%s: %v, want a proposal of %s", text, err, want)
		}
	}
}

func FuzzParse(f *testing.F) {
	for _, s := range sample {
		f.Add(s)
	}
	f.Add("a/b c")
	f.Add("(m/(s*mm))^2")
	f.Fuzz(func(t *testing.T, text string) {
		u, err := Parse(text)
		var syntax *SyntaxError
		if err != nil {
			if !errors.As(err, &syntax) {
				t.Fatalf("untyped error %v", err)
			}
			return
		}
		v, err := Parse(u.String())
		if err != nil || !v.Equal(u) {
			t.Fatalf("%q is %q, which reads as %v, %v", text, u, v, err)
		}
		if w, err := Parse(u.Mul(Unit{}).Div(MustParse("m")).Mul(MustParse("m")).String()); err != nil || !w.Equal(u) {
			t.Fatalf("%q over and times m is %v, %v", text, w, err)
		}
	})
}

func FuzzParseQuantity(f *testing.F) {
	for _, s := range []string{"12.5 mN*m/A", "-3/4 1/s", "900 degC", "5 %", "1e-30 m"} {
		f.Add(s)
	}
	f.Fuzz(func(t *testing.T, text string) {
		q, err := ParseQuantity(text)
		if err != nil {
			var syntax *SyntaxError
			if !errors.As(err, &syntax) {
				t.Fatalf("untyped error %v", err)
			}
			return
		}
		if r, err := ParseQuantity(q.String()); err != nil || !r.Equal(q) {
			t.Fatalf("%q is %q, which reads as %v, %v", text, q, r, err)
		}
		if a, err := ParseAbsolute(text); err == nil && !a.Equal(q) {
			t.Fatalf("%q is %v absolutely and %v as it is", text, a, q)
		}
	})
}

func FuzzParseSignal(f *testing.F) {
	for _, s := range []string{"level: m", "mm", "a_1: kg·m²/s²", ": m", "x:"} {
		f.Add(s)
	}
	f.Fuzz(func(t *testing.T, text string) {
		s, err := ParseSignal(text)
		if err != nil {
			var syntax *SyntaxError
			if !errors.As(err, &syntax) {
				t.Fatalf("untyped error %v", err)
			}
			return
		}
		if r, err := ParseSignal(s.String()); err != nil || !r.Equal(s) {
			t.Fatalf("%q is %q, which reads as %v, %v", text, s, r, err)
		}
	})
}
