package statespace

import (
	"encoding/json"
	"math/rand/v2"
	"strings"
	"testing"

	"github.com/qofs/qofs/tf"
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
	for text, want := range map[string]string{
		`{"states": 3}`: "state-space model as JSON",
		`{"x": []}`:     "unknown field",
		`{"states": [{"name": "x", "unit": "m"}], "state matrix": [["s"]]}`:      "row 1, column 1",
		`{"states": [{"name": "x", "unit": "m"}], "state matrix": [["1", "2"]]}`: "state matrix of 1 by 2",
		`{"states": [{"name": "x", "unit": "furlong"}]}`:                         "furlong",
		`{"period": "1 s"}`: "discrete",
	} {
		var c Continuous
		if err := json.Unmarshal([]byte(text), &c); err == nil || !strings.Contains(err.Error(), want) {
			t.Errorf("%s: %v", text, err)
		}
	}
	if err := json.Unmarshal([]byte(`{"period": "1 m"}`), &back); err == nil {
		t.Error("a period in metres")
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
