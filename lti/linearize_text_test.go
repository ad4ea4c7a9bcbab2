package lti

import (
	"encoding/json"
	"errors"
	"strings"
	"testing"

	"github.com/qofs/qofs/internal/lex"
	"github.com/qofs/qofs/tf"
)

// An operating point in a configuration file.
func TestOperatingValuesInJSON(t *testing.T) {
	const text = `["zone = 900 degC","heater near 40 kW"]`
	var values []OperatingValue
	if err := json.Unmarshal([]byte(text), &values); err != nil {
		t.Fatal(err)
	}
	if values[0] != At("zone", "900 degC") || values[1] != Near("heater", "40 kW") {
		t.Errorf("%+v", values)
	}
	if out, err := json.Marshal(values); err != nil || string(out) != text {
		t.Errorf("comes back as %s, %v", out, err)
	}
	point := tf.Must(Equilibrium(furnace, values...))
	var again []OperatingValue
	if err := json.Unmarshal(tf.Must(json.Marshal(point.Values())), &again); err != nil {
		t.Fatal(err)
	}
	if _, err := Linearize(furnace, again...); err != nil {
		t.Errorf("a stored point: %v", err)
	}
	for _, bad := range []string{"", "zone", "zone near", "zone 900 degC", strings.Repeat(" ", lex.MaxLength) + "zone = 900 degC"} {
		var v OperatingValue
		var syntax *SyntaxError
		if err := v.UnmarshalText([]byte(bad)); !errors.As(err, &syntax) {
			t.Errorf("%.20q: %v, want a *SyntaxError", bad, err)
		}
	}
}

func FuzzOperatingValue(f *testing.F) {
	for _, s := range []string{"zone = 900 degC", "heater near 40 kW", "near near near", "= =", "zone"} {
		f.Add(s)
	}
	f.Fuzz(func(t *testing.T, text string) {
		var v, w OperatingValue
		if v.UnmarshalText([]byte(text)) != nil {
			return
		}
		if err := w.UnmarshalText([]byte(v.String())); err != nil || w != v {
			t.Fatalf("%q: %q comes back as %q, %v", text, v, w, err)
		}
	})
}
