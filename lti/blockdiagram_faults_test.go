package lti_test

import (
	"encoding/json"
	"errors"
	"fmt"
	"reflect"
	"strings"
	"testing"

	"github.com/google/go-cmp/cmp"
	"github.com/qofs/qofs/lti"
	"github.com/qofs/qofs/tf"
)

// Every mistake is met by a typed error that says what was found and what to
// do.
func TestDiagramFaults(t *testing.T) {
	type diagram = *lti.BlockDiagram[tf.Continuous]
	gain := tf.MustParse("3 [mA -> mm]")
	base := func(d diagram) { // a sound diagram to add faults to
		d.Input("in", "mA")
		d.Output("out", "mm")
		d.Block("first", gain, "in", "out")
	}
	for _, c := range []struct {
		name string
		add  func(d diagram)
		kind any // a pointer to the wanted error type, or a sentinel
		says []string
	}{
		{"unknown unit", func(d diagram) { d.Input("x", "furlongs") }, new(*lti.DeclarationError), []string{"input x", "furlongs"}},
		{"unknown unit at a block", func(d diagram) { d.Output("x", "furlongs"); d.Block("b", gain, "in", "x") }, new(*lti.DeclarationError), []string{"output x", "furlongs"}},
		{"unknown unit in a sum", func(d diagram) { d.Output("x", "furlongs"); d.Sum("x", lti.Plus("in")) }, new(*lti.DeclarationError), []string{"output x", "furlongs"}},
		{"bad name", func(d diagram) { d.Input("x y", "m") }, new(*lti.DeclarationError), []string{"letters"}},
		{"declared twice", func(d diagram) { d.Signal("in", "mA") }, new(*lti.DeclarationError), []string{"signal in", "already"}},
		{"undetermined", func(d diagram) { d.Signal("x", "mA") }, new(*lti.DeclarationError), []string{"signal x", "Input"}},
		{"undetermined output", func(d diagram) { d.Output("x", "mA") }, new(*lti.DeclarationError), []string{"output x", "Input"}},
		{"unknown from", func(d diagram) { d.Signal("x", "mm"); d.Block("b", gain, "inn", "x") }, new(*lti.UnknownNameError), []string{"block b", `"inn"`, "in, out, x"}},
		{"unknown to", func(d diagram) { d.Signal("x", "mm"); d.Block("b", gain, "in", "xx") }, new(*lti.UnknownNameError), []string{"block b", `"xx"`}},
		{"unknown in a sum", func(d diagram) { d.Signal("x", "mm"); d.Sum("x", lti.Plus("y")) }, new(*lti.UnknownNameError), []string{"sum x", `"y"`}},
		{"unknown sum", func(d diagram) { d.Sum("x", lti.Plus("in")) }, new(*lti.UnknownNameError), []string{`"x"`}},
		{"driven twice", func(d diagram) { d.Block("second", gain, "in", "out") }, new(*lti.WiringError), []string{"block second", "already by the block first", "Sum"}},
		{"sum and block", func(d diagram) { d.Sum("out", lti.Plus("out2")); d.Input("out2", "mm") }, new(*lti.WiringError), []string{"sum out", "already by the block first"}},
		{"driven input", func(d diagram) { d.Input("x", "mm"); d.Block("b", gain, "in", "x") }, new(*lti.WiringError), []string{"x is an Input"}},
		{"no name", func(d diagram) { d.Signal("x", "mm"); d.Block("", gain, "in", "x") }, new(*lti.WiringError), []string{"from in to x"}},
		{"same name", func(d diagram) { d.Output("x", "mm"); d.Block("first", gain, "in", "x") }, new(*lti.WiringError), []string{"two blocks"}},
		{"itself", func(d diagram) { d.Signal("x", "mm"); d.Block("b", tf.MustParse("1 [mm -> mm]"), "x", "x") }, new(*lti.WiringError), []string{"x itself", "Sum"}},
		{"sum of itself", func(d diagram) { d.Signal("x", "mA"); d.Sum("x", lti.Plus("in"), lti.Minus("x")) }, new(*lti.WiringError), []string{"both sides"}},
		{"no sign", func(d diagram) { d.Signal("x", "mA"); d.Sum("x", lti.Plus("in"), lti.Summand{}) }, new(*lti.WiringError), []string{"term 2", "Plus"}},
		{"no terms", func(d diagram) { d.Signal("x", "mA"); d.Sum("x") }, new(*lti.WiringError), []string{"no term"}},
		{"twice in a sum", func(d diagram) { d.Signal("x", "mA"); d.Sum("x", lti.Plus("in"), lti.Minus("in")) }, new(*lti.WiringError), []string{"twice"}},
		{"scale", func(d diagram) { d.Output("x", "m"); d.Block("b", gain, "in", "x") }, new(*lti.WiringError), []string{"[mm]", "[x: m]", "1 m is 1000 mm", "ConvertUnits"}},
		{"dimension", func(d diagram) { d.Output("x", "mm"); d.Block("b", gain, "out", "x") }, new(*lti.WiringError), []string{"input", "[mA]", "[out: mm]"}},
		{"bare block", func(d diagram) { d.Output("x", "mm"); d.Block("b", tf.MustParse("3"), "out", "x") }, new(*lti.WiringError), []string{"WithUnits"}},
		{"other name", func(d diagram) {
			d.Output("x", "mm")
			d.Block("b", tf.MustParse("3 [valve: mA -> x: mm]"), "in", "x")
		}, new(*lti.WiringError), []string{"[valve: mA]", "[in: mA]", `"valve"`, "WithSignals"}},
		{"sum of other units", func(d diagram) { d.Output("x", "A"); d.Sum("x", lti.Plus("in")) }, new(*lti.WiringError), []string{"+in [mA]", "[A]", "1 A is 1000 mA"}},
		{"sum of other dimensions", func(d diagram) { d.Output("x", "mA"); d.Sum("x", lti.Plus("in"), lti.Minus("out")) }, new(*lti.WiringError), []string{"−out [mm]"}},
	} {
		d := lti.NewBlockDiagram()
		base(d)
		if _, err := d.Build(); err != nil {
			t.Fatal(err)
		}
		c.add(d)
		_, err := d.Build()
		if err == nil || !errors.As(err, c.kind) {
			t.Errorf("%s: %v, want a %v", c.name, err, reflect.TypeOf(c.kind).Elem())
			continue
		}
		for _, word := range c.says {
			if !strings.Contains(err.Error(), word) {
				t.Errorf("%s: %q does not say %q", c.name, err, word)
			}
		}
		if joined, ok := err.(interface{ Unwrap() []error }); !ok || len(joined.Unwrap()) != 1 {
			t.Errorf("%s: one mistake, reported as %v", c.name, err)
		}
	}
	if _, err := lti.NewBlockDiagram().Build(); !errors.Is(err, lti.ErrEmptyDiagram) {
		t.Errorf("empty: %v", err)
	}
	many := lti.NewBlockDiagram()
	for i := range 600 {
		many.Input(fmt.Sprint("x", i), "m")
	}
	if _, err := many.Build(); !errors.Is(err, lti.ErrLimit) {
		t.Errorf("600 signals: %v", err)
	}
	// All faults at once, and the typed fields.
	d := lti.NewBlockDiagram()
	base(d)
	d.Output("x", "m")
	d.Block("b", gain, "in", "x")
	d.Block("second", gain, "in", "out")
	d.Signal("y", "Volts")
	_, err := d.Build()
	joined, ok := err.(interface{ Unwrap() []error })
	if !ok || len(joined.Unwrap()) != 3 {
		t.Errorf("three mistakes: %v", err)
	}
	var wiring *lti.WiringError
	if !errors.As(err, &wiring) || wiring.Block != "b" || wiring.Signal != "x" || wiring.Found.String() != "mm" || wiring.Want.String() != "x: m" {
		t.Errorf("fields of %+v", wiring)
	}
}

func TestDiagramQueries(t *testing.T) {
	diagram := pure(t, "e = +r -m", "e y:3/(2 s + 1)", "y m:5/(s + 7)", "y z:1/s")
	var unknown *lti.UnknownNameError
	for name, err := range map[string]error{
		"from":  second(diagram.TransferFunction("q", "y")),
		"to":    second(diagram.TransferFunction("r", "q")),
		"cut":   second(diagram.Cut("q")),
		"block": second(diagram.Block("q")),
		"with":  second(diagram.WithBlock("q", tf.MustParse("1"))),
		"modes": second(diagram.HiddenModes("r", "q")),
	} {
		if !errors.As(err, &unknown) || unknown.Name != "q" || len(unknown.Have) == 0 {
			t.Errorf("%s: %v", name, err)
		}
	}
	var straight *lti.NoLoopError
	if _, err := diagram.Cut("z"); !errors.As(err, &straight) || !cmp.Equal(sorted(straight.Have), []string{"e", "m", "y"}) {
		t.Errorf("cut beside the loop: %v", err)
	}
	if _, err := diagram.Cut("r"); !errors.As(err, &straight) {
		t.Errorf("cut at an input: %v", err)
	}
	before := diagram.String()
	changed := tf.Must(diagram.WithBlock("block2", tf.MustParse("4/(2 s + 1)")))
	if g := tf.Must(changed.TransferFunction("e", "y")); !g.Equivalent(tf.MustParse("4/(2 s + 1)")) {
		t.Errorf("with another block: %v", g)
	}
	if after := diagram.String(); after != before || changed.String() == before {
		t.Errorf("the first diagram has changed: %v", after)
	}
	if _, err := diagram.WithBlock("block2", tf.MustParse("4/(2 s + 1) [m -> 1]")); err == nil {
		t.Error("a block that does not fit was taken")
	}
	if _, err := diagram.PadeApproximant(-1); !errors.Is(err, lti.ErrLimit) {
		t.Errorf("approximant of degree −1: %v", err)
	}
	// Zero values.
	var zero lti.Diagram[tf.Continuous]
	if zero.String() != "" || len(zero.Warnings()) > 0 || !errors.As(second(zero.TransferFunction("a", "b")), &unknown) {
		t.Error("the zero Diagram is not empty")
	}
	if p := tf.Must(zero.CharacteristicPolynomial()); p.String() != "1" {
		t.Errorf("characteristic polynomial of the zero Diagram: %v", p)
	}
	var cut lti.LoopCut[tf.Continuous]
	if s := tf.Must(cut.Sensitivity()); !s.Equivalent(tf.MustParse("1")) {
		t.Errorf("sensitivity of the zero cut: %v", s)
	}
}

func second[T any](_ T, err error) error { return err }

func TestWarnings(t *testing.T) {
	for _, c := range []struct {
		lines []string
		want  []string // a part of each warning
	}{
		{[]string{"e = +r -y", "e y:1/s"}, nil},
		{[]string{"e = +y -r", "e y:-1/s"}, nil}, // reverse acting, with the signs to match
		{[]string{"e = +r +y", "e y:1/(s + 1)"}, []string{"loop e, y: the static gain around it is +1;"}},
		{[]string{"e = +r -y", "e y:-1/s"}, []string{"loop e, y: it integrates"}},
		{[]string{"e = +r +y", "e y:s/(s + 1)^2"}, nil}, // no gain at zero frequency
		// The inner loop is wrong, masked by the integrator of the outer one at any
		// cut that both share.
		{[]string{"e = +r -y", "e c:1/s", "d = +c +g", "d g:1/(4 s + 8)", "g y:1/(s + 1)"}, []string{"loop d, g: the static gain around it is +0.125;"}},
		// One reversed block in both loops is one warning; two in separate loops are
		// two.
		{[]string{"e = +r -y", "e c:1/s", "d = +c -g", "d g:-1/(4 s + 8)", "g y:1/(s + 1)"}, []string{"loop d, g"}},
		{[]string{"e = +r +m", "e y:1", "y m:1/s", "f = +y +n", "f z:1", "z n:2/(s + 1)"}, []string{"loop e, y, m", "loop f, z, n"}},
		{[]string{"y = +r", "x z:1", "z w:-1/s", "x = +w -q", "v = +y"}, nil},
	} {
		diagram := pure(t, c.lines...)
		var got []string
		for _, w := range diagram.Warnings() {
			if !strings.Contains(w.Text, "reads it") && !strings.Contains(w.Text, "no input") { // pure declares no outputs
				got = append(got, w.String())
			}
		}
		if len(got) != len(c.want) {
			t.Errorf("%v: %q", c.lines, got)
			continue
		}
		for i := range got {
			if !strings.Contains(got[i], c.want[i]) {
				t.Errorf("%v: %q does not say %q", c.lines, got[i], c.want[i])
			}
		}
	}
	d := lti.NewBlockDiagram()
	d.Input("a", "m")
	d.Input("idle", "m")
	d.Input("lost", "m")
	d.Output("b", "m")
	d.Signal("c", "m")
	d.Signal("p", "m")
	d.Output("q", "m")
	d.Sum("b", lti.Plus("a"))
	d.Sum("c", lti.Plus("a"), lti.Minus("lost"))
	d.Block("one", tf.MustParse("1/(s + 1) [m -> m]"), "p", "q")
	d.Block("two", tf.MustParse("-1/(s + 1) [m -> m]"), "q", "p")
	var got []string
	for _, w := range tf.Must(d.Build()).Warnings() {
		got = append(got, strings.Join(w.Signals, " ")+" | "+w.Text)
	}
	want := []string{
		"idle | input idle: no block and no sum reads it",
		"lost | input lost reaches no output",
		"c | signal c: no block and no sum reads it; declare it with Output if it is read outside",
		"p q | no input reaches p, q",
	}
	if diff := cmp.Diff(want, got); diff != "" {
		t.Error(diff)
	}
}

func TestDiagramJSON(t *testing.T) {
	diagram := tf.Must(canal().Build())
	text, err := json.Marshal(diagram)
	if err != nil {
		t.Fatal(err)
	}
	var again lti.Diagram[tf.Continuous]
	if err := json.Unmarshal(text, &again); err != nil {
		t.Fatal(err)
	}
	g, h := tf.Must(tf.Must(diagram.Cut("reading")).LoopTransferFunction()), tf.Must(tf.Must(again.Cut("reading")).LoopTransferFunction())
	if !g.Equal(h) {
		t.Errorf("%v comes back as %v", g, h)
	}
	if once, twice := tf.Must(diagram.MarshalText()), tf.Must(again.MarshalText()); string(twice) != string(once) || !strings.Contains(string(once), "->") {
		t.Errorf("%s comes back as %s", once, twice)
	}
	var discrete lti.Diagram[tf.Discrete]
	if err := json.Unmarshal(text, &discrete); err == nil {
		t.Error("a diagram in s was taken for one in z")
	}
	for _, c := range []struct{ text, says string }{
		{``, "the end"},
		{`[]`, "want {"},
		{`{"inputs": {"a": "m"}, "inputs": {}}`, "twice"},
		{`{"input": {"a": "m"}}`, `"inputs"`},
		{`{"blocks": {"b": {"from": "a", "to": "c", "function": "1/"}}}`, "block b: function"},
		{`{"blocks": {"b": {"from": "a", "to": "c", "gain": "1"}}}`, `"gain"`},
		{`{"blocks": {"b": {"from": 3}}}`, "the signal read"},
		{`{"sums": {"e": {"plus": ["a"], "times": ["b"]}}}`, `"plus" or "minus"`},
		{`{"sums": {"e": {"plus": ["a"]}}} {}`, "the end"},
		{`{"sums": {"e": {"plus": "a"}}}`, "want ["},
		{`{"signals": {"e": "m"}, "sums": {"e": {}}}`, "no term"},
	} {
		_, err := lti.ParseBlockDiagram(c.text)
		if err == nil || !strings.Contains(err.Error(), c.says) {
			t.Errorf("%s: %v does not say %q", c.text, err, c.says)
		}
	}
}

func TestDiagramTextLimits(t *testing.T) {
	for function, count := range map[string]int{"1/(s + 1)^400": 300, "1/s": 2000} {
		var b strings.Builder
		b.WriteString(`{"inputs": {"a": "1"}, "blocks": {`)
		for i := range count {
			fmt.Fprintf(&b, `"b%d": {"from": "a", "to": "x%d", "function": "%s"}, `, i, i, function)
		}
		b.WriteString(`"b": {"from": "a", "to": "y", "function": "1"}}}`)
		var syntax *lti.SyntaxError
		if _, err := lti.ParseBlockDiagram(b.String()); !errors.Is(err, lti.ErrLimit) || !errors.As(err, &syntax) {
			t.Errorf("%d blocks %s: %v", count, function, err)
		}
	}
	if _, err := lti.ParseBlockDiagram(strings.Repeat(" ", 1<<20+1)); !errors.Is(err, lti.ErrLimit) {
		t.Errorf("a long text: %v", err)
	}
	// Blocks beside all loops are bounded too: 300 of degree 16 make 4800.
	d := lti.NewBlockDiagram()
	d.Input("x0", "1")
	for i := 1; i <= 300; i++ {
		name := fmt.Sprint("x", i)
		d.Signal(name, "1")
		d.Block(name, tf.MustParse("1/(s^16 + 1)"), fmt.Sprint("x", i-1), name)
	}
	diagram := tf.Must(d.Build())
	if _, err := diagram.CharacteristicPolynomial(); !errors.Is(err, lti.ErrLimit) {
		t.Errorf("characteristic polynomial of degree 4800: %v", err)
	}
	if _, err := diagram.TransferFunction("x0", "x300"); !errors.Is(err, lti.ErrLimit) {
		t.Errorf("transfer function of degree 4800: %v", err)
	}
	if _, err := diagram.TransferFunction("x0", "x9"); !errors.Is(err, lti.ErrLimit) {
		t.Errorf("transfer function with hidden modes of degree 4656: %v", err)
	}
}

func FuzzParseBlockDiagram(f *testing.F) {
	text, err := json.Marshal(tf.Must(canal().Build()))
	if err != nil {
		f.Fatal(err)
	}
	f.Add(string(text))
	f.Add(`{"inputs":{"r":"1"},"outputs":{"y":"1"},"signals":{"e":"1"},"sums":{"e":{"plus":["r"],"minus":["y"]}},"blocks":{"b":{"from":"e","to":"y","function":"1/s"}}}`)
	f.Add(`{"sums":{"e":{"plus":["e"]}}}`)
	f.Fuzz(func(t *testing.T, text string) {
		diagram, err := lti.ParseBlockDiagram(text)
		if err != nil {
			if err.Error() == "" {
				t.Error("an error without words")
			}
			return
		}
		again, err := lti.ParseBlockDiagram(string(tf.Must(diagram.MarshalJSON())))
		if err != nil || again.String() == "" {
			t.Fatalf("%v does not come back: %v", diagram, err)
		}
		diagram.Warnings()
	})
}
