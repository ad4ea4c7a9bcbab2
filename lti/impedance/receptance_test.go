package impedance

import (
	"encoding/json"
	"errors"
	"math/cmplx"
	"strings"
	"testing"

	"github.com/qofs/qofs/tf"
	"github.com/qofs/qofs/units"
)

// Positions over forces, by hand: k, c s and m s² are what resists a position
// (common practice).
func TestReceptance(t *testing.T) {
	for _, c := range []struct{ text, want string }{
		{"50 kN/m", "1/50000 [N -> m]"},
		{"640 N*s/m", "1/(640 s) [N -> m]"},
		{"200 kg", "1/(200 s^2) [N -> m]"},
		{"50 kN/m || 640 N*s/m || 200 kg", "1/(200 s^2 + 640 s + 50000) [N -> m]"},
		{"10 N/m + 15 N/m", "1/6 [N -> m]"},
		{"0", "0 [N -> m]"},
	} {
		g, err := MustParse(c.text).Receptance()
		if want := tf.MustParse(c.want); err != nil || !g.Equal(want) && c.text != "0" || !g.Equivalent(want) {
			t.Errorf("%s: %v, %v, want %v", c.text, g, err, want)
		}
	}
	// Static deflection, which the velocity does not show.
	if q := tf.Must(tf.Must(MustParse("50 kN/m || 200 kg").Receptance()).StaticGain()); !q.Equal(units.MustParseQuantity("0.02 mm/N")) {
		t.Errorf("static receptance %v", q)
	}
	var domain *DomainError
	if _, err := MustParse("3 ohm").Receptance(); !errors.As(err, &domain) || domain.Want != Translational {
		t.Errorf("a resistor: %v", err)
	}
	if _, err := MustParseLadder("3 ohm to ground").TransferReceptance(); !errors.As(err, &domain) || domain.Found != Electrical {
		t.Errorf("a ladder of resistors: %v", err)
	}
	if _, err := MustParseLadder("3 N/m in series").TransferReceptance(); !errors.Is(err, ErrDivisionByZero) {
		t.Errorf("nothing to push against: %v", err)
	}
}

// A force on the bench moves the pan. The two equations of motion, solved by
// Cramer's rule at points of the plane:
//
//	(M s² + C s + K + c s + k) X − (c s + k) x = F,  (m s² + c s + k) x = (c s + k) X
func TestTransferReceptance(t *testing.T) {
	g := tf.Must(MustParseLadder("200 kg || 50 kN/m || 640 N*s/m to ground, 75 kN/m || 65 N*s/m in series, 6 kg to ground").TransferReceptance())
	if d := g.Denominator().Degree(); d != 4 {
		t.Errorf("%v: want degree 4", g)
	}
	for _, s := range []complex128{0, 1, 15.6i, 113i, -3 + 40i} {
		link := 65*s + 75e3
		want := link / ((200*s*s+640*s+50e3+link)*(6*s*s+link) - link*link)
		if got, err := g.At(s); err != nil || cmplx.Abs(got/want-1) > 1e-13 {
			t.Errorf("at %v: %v, %v, want %v", s, got, err, want)
		}
	}
}

func TestLadderText(t *testing.T) {
	const text = `"50 kN/m || 640 N*s/m in series, 200 kg to ground, 75 kN/m || 65 N*s/m in series, 6 kg to ground"`
	var l Ladder
	if err := json.Unmarshal([]byte(text), &l); err != nil {
		t.Fatal(err)
	}
	want := tf.Must(NewLadder(SeriesArm(MustParse("50 kN/m || 640 N*s/m")), ShuntArm(MustParse("200 kg")),
		SeriesArm(MustParse("75 kN/m || 65 N*s/m")), ShuntArm(MustParse("6 kg"))))
	if g, h := tf.Must(l.AcrossRatio()), tf.Must(want.AcrossRatio()); !g.Equal(h) {
		t.Errorf("%v: %v, want %v", l, g, h)
	}
	if out, err := json.Marshal(l); err != nil || string(out) != text {
		t.Errorf("comes back as %s, %v", out, err)
	}
	if l := MustParseLadder(" \t"); len(l.Arms()) != 0 || l.String() != "" {
		t.Errorf("a blank text is %v", l)
	}
	r := &random{state: 12}
	for i := range 60 {
		l := tf.Must(NewLadder(r.arms(Domain(1+i%4), 1+int(r.next()%6))...))
		again, err := ParseLadder(l.String())
		if err != nil || again.String() != l.String() || !again.a.Equal(l.a) || !again.b.Equal(l.b) || !again.c.Equal(l.c) || !again.d.Equal(l.d) {
			t.Fatalf("%v comes back as %v, %v", l, again, err)
		}
	}
	for _, c := range []struct {
		text   string
		offset int
	}{
		{"3 ohm", 5}, {"3 ohm in series,", 16}, {"3 ohm in series, 4 F", 20}, {"3 ohm in series, 4 X to ground", 19}, {", 3 ohm in series", 0},
		{"3 ohm in  series", 16}, {"to ground", 9}, {" in series", 0}, {"3 kg in series", 0}, {"3 ohm in series, 4 kg to ground", 0},
		{strings.Repeat("1", MaxText+1), MaxText},
	} {
		var syntax *SyntaxError
		if _, err := ParseLadder(c.text); !errors.As(err, &syntax) || syntax.Offset != c.offset {
			t.Errorf("ParseLadder(%.20q): %v, want a *SyntaxError at %d", c.text, err, c.offset)
		}
	}
}

func TestReciprocalUnits(t *testing.T) {
	for _, c := range []struct{ text, want string }{
		{"5 W/K", "impedance: W/K is the reciprocal of the unit of a thermal resistance: want its value in K/W, 1 over this one"},
		{"5 mS", "impedance: mS is the reciprocal of the unit of a resistor: want its value in ohm, 1 over this one"},
		{"5 mm/N", "impedance: mm/N is the reciprocal of the unit of a spring: want its value in N/m, 1 over this one"},
		{"5 L/(s*bar)", "impedance: L/(s*bar) is the reciprocal of the unit of a restriction: want its value in Pa*s/m^3, 1 over this one"},
	} {
		var unknown *UnknownElementError
		if _, err := Parse(c.text); !errors.As(err, &unknown) || unknown.Error() != c.want {
			t.Errorf("%s:\n got %v\nwant %s", c.text, err, c.want)
		}
	}
}

func FuzzParseLadder(f *testing.F) {
	for _, s := range []string{"50 kN/m || 640 N*s/m in series, 200 kg to ground", "", "0 in series", "3 ohm + (1 F || 2 H) to ground,1 ohm in series"} {
		f.Add(s)
	}
	f.Fuzz(func(t *testing.T, text string) {
		l, err := ParseLadder(text)
		var syntax *SyntaxError
		if err != nil {
			if !errors.As(err, &syntax) {
				t.Fatalf("%q: %v is no *SyntaxError", text, err)
			}
			return
		}
		again, err := ParseLadder(l.String())
		if errors.Is(err, ErrLimit) {
			return // numbers written out are longer
		}
		if err != nil || !again.a.Equal(l.a) || !again.c.Equal(l.c) || !again.over.Equal(l.over) {
			t.Fatalf("%q: %q comes back as %v, %v", text, l, again, err)
		}
	})
}
