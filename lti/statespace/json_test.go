package statespace

import (
	"encoding"
	"encoding/json"
	"errors"
	"math/rand/v2"
	"strings"
	"testing"

	"github.com/qofs/qofs/tf"
	"github.com/qofs/qofs/units"
)

func TestJSON(t *testing.T) {
	r := rand.New(rand.NewPCG(11, 12))
	for range 50 {
		c := random(r, r.IntN(4), r.IntN(3), r.IntN(3))
		text, err := json.Marshal(c)
		if err != nil {
			t.Fatal(err)
		}
		var back Continuous
		if err := json.Unmarshal(text, &back); err != nil || !back.Equal(c) {
			t.Fatalf("%s: %v, %v", text, back, err)
		}
	}
	d := tf.Must(ControllableFormDiscrete(tf.MustParseDiscrete("(z + 1/3)/(z^2 - 1.8 z + 0.81) [u: V -> y': mm/s] every 0.01 s"), "x"))
	text, err := json.Marshal(d)
	var back Discrete
	if err != nil || json.Unmarshal(text, &back) != nil || !back.Equal(d) {
		t.Errorf("%s: %v", text, back)
	}
	if want := "next x_1 = x_2 [V]\nnext x_2 = -0.81 x_1 + 1.8 x_2 + u [V]\ny' = 1/3 x_1 + x_2 [mm/s]\nevery 0.01 s"; back.String() != want {
		t.Errorf("%q", back.String())
	}
}

// Every fault has a type and its place.
func TestJSONFaults(t *testing.T) {
	const x = `{"states": [{"name": "level", "unit": "m"}], "inputs": [{"name": "inflow", "unit": "m^3/s"}], `
	for text, want := range map[string]string{
		`null`:                                 "found null, want a state-space model as JSON",
		`[]`:                                   "found [, want a state-space model as JSON",
		`{"states": 3}`:                        `at offset 11 of "{\"states\": 3}": found a JSON number, want a list such as`,
		`{"states": [{"name": "x", "u": ""}]}`: `found unknown field "u", want a list such as`,
		`{"inputs": [{"name": "a", "unit": "m"}, {"name": 3}]}`: `at offset 49 of`,
		x + `"period": 1}`:                 `at offset 104 of`,
		`{"state": [["1"]]}`:               `found the field "state", want "states"`,
		`{"states": [], "states": []}`:     `at offset 23 of "{\"states\": [], \"states\": []}": found the field "states" twice`,
		`{"states": []} 1`:                 "found 1, want the end",
		`{"states": [`:                     "found the end",
		`{"states": ]}`:                    "invalid character",
		`{"state matrix": 3}`:              `want rows of numbers as texts, such as [["-0.5", "1/3"]]`,
		`{"state matrix": [["x"]]}`:        `state matrix, row 1, column 1: at offset 0 of "x": found "x", want a number, such as -0.5, 1e-3 or 1/3`,
		x + `"input matrix": [["s"]]}`:     `input matrix, row 1 (level), column 1 (inflow): at offset 0 of "s": found "s", want a number, such as`,
		x + `"input matrix": [["1/0"]]}`:   `input matrix, row 1 (level), column 1 (inflow): at offset 2 of "1/0": found a zero denominator`,
		x + `"input matrix": [["1", ""]]}`: `input matrix, row 1 (level), column 2: at offset 0 of "": found the end, want a number`,
		x + `"state matrix": [[0.5]]}`:     `state matrix, row 1 (level), column 1 (level): at offset 0 of "0.5": found 0.5, want a number as text, such as "0.5"`,
		x + `"state matrix": [[null]]}`:    `found null, want a number as text`,
		x + `"period": "1 s"}`:             `found a period of "1 s", want none: it belongs to a model in discrete time`,
	} {
		var c Continuous
		var syntax *SyntaxError
		err := c.UnmarshalJSON([]byte(text))
		if !errors.As(err, &syntax) || !strings.Contains(err.Error(), want) {
			t.Errorf("%s: %T %v, want …%s", text, err, err, want)
		}
		var entry *EntryError
		if inside := strings.Contains(want, "row 1"); inside && !errors.As(err, &entry) {
			t.Errorf("%s: %T", text, err)
		}
	}
	for text, want := range map[string]string{
		x + `"period": "1 q"}`: `found a period of "1 q", want a time such as 0.01 s: at offset 2 of "1 q"`,
		x + `"outputs": []}`:   `found no period, want a sampling period, such as "period": "0.01 s"`,
	} {
		var d Discrete
		var syntax *SyntaxError
		if err := json.Unmarshal([]byte(text), &d); !errors.As(err, &syntax) || !strings.Contains(err.Error(), want) {
			t.Errorf("%s: %T %v, want …%s", text, err, err, want)
		}
	}
	var c Continuous
	var signal *SignalError
	var syntax *SyntaxError
	err := json.Unmarshal([]byte(`{"outputs": [{"name": "x", "unit": "furlong"}]}`), &c)
	if !errors.As(err, &signal) || !errors.As(err, &syntax) || signal.Kind != "output" || signal.Signal.Name != "x" {
		t.Errorf("%T %v", err, err)
	}
	var size *SizeError
	if err := json.Unmarshal([]byte(x+`"state matrix": [["1", "2"]]}`), &c); !errors.As(err, &size) {
		t.Errorf("%T %v", err, err)
	}
	var mismatch *units.MismatchError
	if err := json.Unmarshal([]byte(`{"period": "1 m"}`), new(Discrete)); !errors.As(err, &mismatch) {
		t.Errorf("a period in metres: %T %v", err, err)
	}
	if err := c.UnmarshalJSON(make([]byte, maxText+1)); !errors.Is(err, ErrLimit) {
		t.Error(err)
	}
}

func FuzzJSON(f *testing.F) {
	f.Add(`{"states":[{"name":"x","unit":"m"}],"inputs":[{"name":"u","unit":"V"}],"outputs":[{"name":"x","unit":"mm"}],"state matrix":[["-1/3"]],"input matrix":[["0.5"]],"output matrix":[["1000"]]}`)
	f.Fuzz(func(t *testing.T, text string) {
		var c Continuous
		if json.Unmarshal([]byte(text), &c) != nil {
			return
		}
		again, err := json.Marshal(c)
		var back Continuous
		if err != nil || json.Unmarshal(again, &back) != nil || !back.Equal(c) {
			t.Fatalf("%q: %s", text, again)
		}
	})
}

// Models go through formats that know only text, and a text cut short leaves the
// receiver as it was.
func TestText(t *testing.T) {
	c := random(rand.New(rand.NewPCG(13, 14)), 3, 2, 2)
	d := tf.Must(NewDiscrete(c.States(), c.Inputs(), c.Outputs(), c.Matrices(), units.MustParseQuantity("10 ms")))
	for _, m := range []struct {
		from  encoding.TextMarshaler
		into  encoding.TextUnmarshaler
		equal func(encoding.TextUnmarshaler) bool
	}{
		{c, new(Continuous), func(back encoding.TextUnmarshaler) bool { return back.(*Continuous).Equal(c) }},
		{d, new(Discrete), func(back encoding.TextUnmarshaler) bool { return back.(*Discrete).Equal(d) }},
	} {
		text, err := m.from.MarshalText()
		if err != nil || m.into.UnmarshalText(text) != nil || !m.equal(m.into) {
			t.Errorf("%T: %s, %v", m.from, text, err)
		}
		var syntax *SyntaxError
		if err := m.into.UnmarshalText(text[:len(text)-1]); !errors.As(err, &syntax) || !m.equal(m.into) {
			t.Errorf("%T: %v", m.from, err)
		}
	}
}
