package units_test

import (
	"encoding/json"
	"errors"
	"fmt"
	"math/big"
	"strings"
	"testing"

	"github.com/qofs/qofs/tf"
	"github.com/qofs/qofs/units"
)

// A level transmitter: its slope goes into the algebra, its offset into the
// program that runs.
func ExampleSpan() {
	transmitter := units.MustParseSpan("0 m … 2 m -> 4 mA … 20 mA")
	fmt.Println(transmitter.Slope(), "from", transmitter.Offset(), "on")
	fmt.Println(tf.Must(transmitter.Convert(units.MustParseQuantity("1400 mm"))))
	fmt.Println(tf.Must(transmitter.ConvertBack(units.MustParseQuantity("10 mA"))))

	low := tf.Must(transmitter.Output().Contains(units.MustParseQuantity("3.6 mA")))
	fmt.Println("3.6 mA is within:", low)

	block := tf.Must(tf.Gain(transmitter.Slope()).WithUnits(transmitter.Input().Unit(), transmitter.Output().Unit()))
	lag := tf.MustParse("1/(15 s + 1) [mA -> mA]")
	fmt.Println(tf.Must(tf.Series(block, lag)))
	// Output:
	// 8 mA/m from 4 mA on
	// 15.2 mA
	// 0.75 m
	// 3.6 mA is within: false
	// 8/(15 s + 1) [m -> mA]
}

// Temperatures of a range are absolute.
func ExampleParseRange() {
	kiln := units.MustParseRange("0 degC … 1200 degC")
	fmt.Println(kiln, "from", kiln.From(), "on")
	fmt.Println(tf.Must(kiln.Contains(units.MustParseAbsolute("900 degC"))))
	card := units.NewSpan(kiln, units.MustParseRange("0 to 4095 count"))
	fmt.Println(card.Slope())
	fmt.Println(tf.Must(card.Convert(units.MustParseAbsolute("900 degC"))))
	_, err := units.ParseRange("4-20 mA")
	fmt.Println(err)
	// Output:
	// 0 degC … 1200 degC from 273.15 K on
	// true
	// 3.4125 count/K
	// 3071.25 count
	// at offset 7 of "4-20 mA": found no second end, want a range as in 4 mA … 20 mA or 4 mA to 20 mA
}

func TestSpans(t *testing.T) {
	for _, c := range []struct{ span, slope, offset, in, out string }{
		// The live zero of IEC 60381-1 and the pneumatic 3 … 15 psi: half way is
		// 12 mA and 9 psi (common practice).
		{"0 … 100 % -> 4 … 20 mA", "0.16 mA/%", "4 mA", "50 %", "12 mA"},
		{"0 … 100 % -> 3 … 15 psi", "0.12 psi/%", "3 psi", "50 %", "9 psi"},
		{"0 … 100 % -> 20 … 4 mA", "-0.16 mA/%", "20 mA", "25 %", "16 mA"},
		{"100 % ... 0 % → 4 mA to 20 mA", "-0.16 mA/%", "20 mA", "25 %", "16 mA"},
		{"500 mm … 2 m -> -10 V … 10 V", "20/1500 V/mm", "-50/3 V", "1250 mm", "0 V"},
		{"0 degC … 1200 degC -> 4 mA … 20 mA", "16/1200 mA/K", "0.358 mA", "900 degC", "16 mA"},
		{"0 degC … 100 degC -> 32 degF … 212 degF", "1", "0 K", "37 degC", "98.6 degF"}, // one temperature
		{"-10 V … 10 V -> 0 … 65536 count", "3276.8 count/V", "32768 count", "2.5 V", "40960 count"},
		{"-5 K … 5 K -> 0 … 1", "0.1 1/K", "0.5", "0 K", "0.5"},
		{"0 … 1 -> 0 … 1", "1", "0", "2", "2"}, // outside, along the same line
	} {
		s, err := units.ParseSpan(c.span)
		if err != nil {
			t.Errorf("%s: %v", c.span, err)
			continue
		}
		in, out := units.MustParseAbsolute(c.in), units.MustParseAbsolute(c.out)
		if got := s.Slope(); !got.Equal(units.MustParseQuantity(c.slope)) || !got.Unit().Equal(s.Output().Unit().Div(s.Input().Unit())) {
			t.Errorf("%s: slope %v, want %s", c.span, got, c.slope)
		}
		if got := s.Offset(); !got.Equal(units.MustParseQuantity(c.offset)) {
			t.Errorf("%s: offset %v, want %s", c.span, got, c.offset)
		}
		if got, err := s.Convert(in); err != nil || !got.Equal(out) {
			t.Errorf("%s: %s becomes %v, %v, want %s", c.span, c.in, got, err, c.out)
		}
		if got, err := s.ConvertBack(out); err != nil || !got.Equal(in) {
			t.Errorf("%s: %s comes from %v, %v, want %s", c.span, c.out, got, err, c.in)
		}
		again, err := units.ParseSpan(s.String())
		if err != nil || !again.Equal(s) || again.String() != s.String() {
			t.Errorf("%s: comes back from %q as %v, %v", c.span, s, again, err)
		}
	}
}

// The ends go to the ends, the middle to the middle, the slope and the offset
// make the same line, and the inverse undoes it, for random ends.
func TestSpanLaws(t *testing.T) {
	mm, mA := units.MustParse("mm"), units.MustParse("mA")
	state := uint64(3)
	number := func() *big.Rat {
		state = state*6364136223846793005 + 1442695040888963407
		return big.NewRat(int64(state>>40)-1<<23, 1+int64(state>>20&1023))
	}
	half := units.NewQuantity(big.NewRat(1, 2), units.Unit{})
	for range 200 {
		i0, i1 := units.NewQuantity(number(), mm), units.NewQuantity(number(), mm)
		o0, o1 := units.NewQuantity(number(), mA), units.NewQuantity(number(), mA)
		in, err := units.NewRange(i0, i1)
		if err != nil {
			t.Fatal(err)
		}
		s := units.NewSpan(in, tf.Must(units.NewRange(o0, o1)))
		for _, c := range [][2]units.Quantity{{i0, o0}, {i1, o1}, {half.Mul(tf.Must(i0.Add(i1))), half.Mul(tf.Must(o0.Add(o1)))}} {
			got := tf.Must(s.Convert(c[0]))
			line := tf.Must(s.Slope().Mul(c[0]).Add(s.Offset()))
			if !got.Equal(c[1]) || !line.Equal(c[1]) || !tf.Must(s.Inverse().Convert(got)).Equal(c[0]) {
				t.Fatalf("%v: %v becomes %v, by slope and offset %v, want %v", s, c[0], got, line, c[1])
			}
			if within, err := in.Contains(c[0]); err != nil || !within {
				t.Fatalf("%v is outside of %v", c[0], in)
			}
		}
		beyond := tf.Must(i1.Add(tf.Must(i1.Sub(i0))))
		if within, _ := in.Contains(beyond); within {
			t.Fatalf("%v is within %v", beyond, in)
		}
		if back, err := units.ParseSpan(s.String()); err != nil || !back.Equal(s) {
			t.Fatalf("%v comes back as %v, %v", s, back, err)
		}
	}
}

// A difference or a reading in K is no temperature of the range, and is told so.
// The values are worked by hand, with 0 degC at 273.15 K (SI Brochure, 2.3.1).
func TestSpanOfTemperatures(t *testing.T) {
	for _, c := range []struct{ span, in, says string }{
		{"0 degC … 100 degC -> 4 mA … 20 mA", "60 K", "60 K is -213.15 degC, outside of 0 degC … 100 degC: " +
			"a temperature counts from absolute zero; ParseAbsolute reads 60 degC as 333.15 K; Slope and Offset hold beyond the range"},
		{"0 degC … 1200 degC -> 4 mA … 20 mA", "60000 mK", "ParseAbsolute reads 60 degC as 333.15 K"},
		{"32 degF … 212 degF -> 4 mA … 20 mA", "100 K", "ParseAbsolute reads 100 degF as 310.9278 K"},
		{"0 degC … 212 degF -> 4 mA … 20 mA", "60 K", "outside of 0 degC … 100 degC: a"},
		{"100 degC … 0 degC -> 4 mA … 20 mA", "374 K", "374 K is 100.85 degC, outside of 100 degC … 0 degC; Slope and Offset"},
	} {
		s := units.MustParseSpan(c.span)
		q := units.MustParseQuantity(c.in)
		var outside *units.OutsideError
		_, err := s.Convert(q)
		if !errors.As(err, &outside) || !outside.Value.Equal(q) || !outside.Range.Equal(s.Input()) || !strings.Contains(err.Error(), c.says) {
			t.Errorf("%s: %s: %v, want %q", c.span, c.in, err, c.says)
		}
		if _, err := s.Inverse().ConvertBack(q); !errors.As(err, &outside) || !strings.Contains(err.Error(), c.says) {
			t.Errorf("%s backwards: %s: %v, want %q", c.span, c.in, err, c.says)
		}
	}
	s := units.MustParseSpan("0 degC … 100 degC -> 4 mA … 20 mA")
	for in, out := range map[string]string{"0 degC": "4 mA", "273.15 K": "4 mA", "333.15 K": "13.6 mA", "100 degC": "20 mA", "212 degF": "20 mA"} {
		if got, err := s.Convert(units.MustParseAbsolute(in)); err != nil || !got.Equal(units.MustParseQuantity(out)) {
			t.Errorf("%s becomes %v, %v, want %s", in, got, err, out)
		}
	}
	// What comes out is not limited, nor a range in K, which says what it means.
	if got, err := s.ConvertBack(units.MustParseQuantity("3.6 mA")); err != nil || !got.Equal(units.MustParseAbsolute("-2.5 degC")) {
		t.Errorf("3.6 mA comes from %v, %v", got, err)
	}
	if got, err := units.MustParseSpan("0 K … 50 K -> 4 mA … 20 mA").Convert(units.MustParseQuantity("60 K")); err != nil || got.String() != "23.2 mA" {
		t.Errorf("60 K becomes %v, %v", got, err)
	}
}

func TestSpanRefusals(t *testing.T) {
	for _, c := range []struct {
		text     string
		offset   int
		sentinel error
	}{
		{"", 0, nil}, {"4 mA", 4, nil}, {"4-20 mA", 7, nil}, {"4 mA … 4 mA", 8, units.ErrZeroWidth}, {"0 m … 0 mm", 7, units.ErrZeroWidth},
		{"0 … 0", 5, units.ErrZeroWidth}, {"0 m … 20 mA", 7, nil}, {"0 mx … 2 m", 2, nil}, {"0 m … 2 mx", 10, nil}, {"0 m … 1 m … 2 m", 12, nil}, {"0 m … 1 m to 2 m", 12, nil},
		{"… 2 m", 0, nil}, {"0 m …", 7, nil}, {"-300 degC … 0 degC", 0, nil}, {"0 … -300 degC", 5, nil}, {"0 degC … 273.15 K", 10, units.ErrZeroWidth},
		{"1/0 … 2", 2, units.ErrDivisionByZero}, {strings.Repeat("1", units.MaxText) + "… 2", units.MaxText, units.ErrLimit},
	} {
		_, err := units.ParseRange(c.text)
		var syntax *units.SyntaxError
		if !errors.As(err, &syntax) || syntax.Offset != c.offset || c.sentinel != nil && !errors.Is(err, c.sentinel) {
			t.Errorf("ParseRange(%.20q): %v, want a *SyntaxError at %d, %v", c.text, err, c.offset, c.sentinel)
		}
		if len(c.text) < 100 {
			const before = "0 … 1 ->"
			_, err = units.ParseSpan(before + c.text)
			if !errors.As(err, &syntax) || syntax.Offset != c.offset+len(before) {
				t.Errorf("ParseSpan of %q: %v, want a *SyntaxError at %d", c.text, err, c.offset+len(before))
			}
		}
	}
	if _, err := units.ParseSpan("0 m … 2 m"); err == nil {
		t.Error("a span without an arrow")
	}
	var mismatch *units.MismatchError
	s := units.MustParseSpan("0 m … 2 m -> 4 mA … 20 mA")
	if _, err := s.Convert(units.MustParseQuantity("3 mA")); !errors.As(err, &mismatch) {
		t.Errorf("Convert: %v", err)
	}
	if _, err := s.ConvertBack(units.MustParseQuantity("3 m")); !errors.As(err, &mismatch) {
		t.Errorf("ConvertBack: %v", err)
	}
	if _, err := s.Input().Contains(units.MustParseQuantity("3 mA")); !errors.As(err, &mismatch) {
		t.Errorf("Contains: %v", err)
	}
	if _, err := units.NewRange(units.MustParseQuantity("3 m"), units.MustParseQuantity("3 A")); !errors.As(err, &mismatch) {
		t.Errorf("NewRange: %v", err)
	}
}

func TestRangeText(t *testing.T) {
	want := units.MustParseRange("4 mA … 20 mA")
	for _, text := range []string{"4 mA to 20 mA", "4 mA\tto\t20 mA", "4 to\n20 mA", "4mA...20mA", " 4…20 mA ", "4 mA  to  0.02 A", "4000 to 20000 uA"} {
		if r, err := units.ParseRange(text); err != nil || !r.Equal(want) {
			t.Errorf("%q: %v, %v, want %v", text, r, err, want)
		}
	}
	for _, text := range []string{"4 mA to20 mA", "4 mAto 20 mA", "4 mA TO 20 mA", "4 mA..20 mA", "to 20 mA", "4 mA to", "to"} {
		var syntax *units.SyntaxError
		if r, err := units.ParseRange(text); !errors.As(err, &syntax) {
			t.Errorf("%q: %v, %v, want a *SyntaxError", text, r, err)
		}
	}
	var mismatch *units.MismatchError
	const missing = `at offset 8 of "4 mA … 20": found an end without a unit, want one in mA: units: the ends of a range: ` +
		"unit 1 found where mA is needed: the dimensions differ (1 against A)"
	if _, err := units.ParseRange("4 mA … 20"); !errors.As(err, &mismatch) || err.Error() != missing {
		t.Errorf("got %v\nwant %s", err, missing)
	}
}

// Equal means both ends, and both ranges.
func TestSpanEqual(t *testing.T) {
	const text = "0 m … 2 m -> 4 mA … 20 mA"
	s := units.MustParseSpan(text)
	for _, c := range []struct {
		text  string
		equal bool
	}{
		{text, true}, {"0 mm … 2000 mm -> 0.004 A … 20 mA", true}, {"0 m … 3 m -> 4 mA … 20 mA", false}, {"1 m … 2 m -> 4 mA … 20 mA", false},
		{"0 m … 2 m -> 0 mA … 20 mA", false}, {"0 m … 2 m -> 4 mA … 21 mA", false}, {"2 m … 0 m -> 4 mA … 20 mA", false}, {"0 m … 2 m -> 4 V … 20 V", false},
	} {
		if other := units.MustParseSpan(c.text); s.Equal(other) != c.equal || other.Equal(s) != c.equal {
			t.Errorf("%v equals %v: want %v", s, other, c.equal)
		}
	}
}

func TestSpanInJSON(t *testing.T) {
	var config struct {
		Transmitter units.Span
		Valve       units.Range
	}
	const text = `{"Transmitter":"-20 degC … 60 degC -\u003e 4 mA … 20 mA","Valve":"4 mA … 20 mA"}`
	if err := json.Unmarshal([]byte(text), &config); err != nil {
		t.Fatal(err)
	}
	if out, err := json.Marshal(config); err != nil || string(out) != text {
		t.Errorf("comes back as %s, %v", out, err)
	}
	// Quantities are amounts: degC in them is a kelvin, not a reading.
	degC := units.MustParse("degC")
	r, err := units.NewRange(units.NewQuantity(nil, degC), units.NewQuantity(big.NewRat(100, 1), degC))
	if err != nil || r.String() != "0 K … 100 K" || !r.Equal(units.MustParseRange(r.String())) {
		t.Errorf("a range of amounts in degC is %v, %v", r, err)
	}
	var zero units.Span
	if zero.String() != "0 … 1 -> 0 … 1" || !zero.Slope().Equal(units.MustParseQuantity("1")) {
		t.Errorf("the zero value is %v", zero)
	}
}

func FuzzParseSpan(f *testing.F) {
	for _, s := range []string{"0 m … 2 m -> 4 mA … 20 mA", "0...100 % → 0 to 4095 count", "-40 degF … 212 °F -> 1/3 … 1e-30 m", "1 … 2 -> 3 … 4"} {
		f.Add(s)
	}
	f.Fuzz(func(t *testing.T, text string) {
		s, err := units.ParseSpan(text)
		var syntax *units.SyntaxError
		if err != nil {
			if !errors.As(err, &syntax) {
				t.Fatalf("%q: %v is no *SyntaxError", text, err)
			}
			return
		}
		again, err := units.ParseSpan(s.String())
		if errors.Is(err, units.ErrLimit) {
			return // numbers written out are longer
		}
		if err != nil || !again.Equal(s) {
			t.Fatalf("%q: %q comes back as %v, %v", text, s, again, err)
		}
		if got, err := s.Convert(s.Input().To()); err != nil || !got.Equal(s.Output().To()) {
			t.Fatalf("%q: the end becomes %v, %v", text, got, err)
		}
	})
}
