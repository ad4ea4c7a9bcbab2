package tf

import (
	"encoding/xml"
	"io"
	"strings"
	"testing"
)

func TestMarkup(t *testing.T) {
	for _, c := range []struct{ text, latex, mathML string }{
		{"exp(-180 s) 8/(15 s + 1) [m -> mA]", `e^{-180 \, s} \, \frac{8}{15 \, s + 1}`,
			"<math><msup><mi>e</mi><mrow><mo>&#x2212;</mo><mn>180</mn><mo>&#x2062;</mo><mi>s</mi></mrow></msup><mo>&#x2062;</mo>" +
				"<mfrac><mrow><mn>8</mn></mrow><mrow><mn>15</mn><mo>&#x2062;</mo><mi>s</mi><mo>+</mo><mn>1</mn></mrow></mfrac></math>"},
		{"exp(-1/3 s) (2 s^12 - 1)", `e^{-\frac{1}{3} \, s} \, \left(2 \, s^{12} - 1\right)`, ""},
		{"-2.5 s", `-2.5 \, s`, "<math><mrow><mo>&#x2212;</mo><mn>2.5</mn><mo>&#x2062;</mo><mi>s</mi></mrow></math>"},
		{"1.5e-9", `1.5 \cdot 10^{-9}`, ""},
	} {
		g := MustParse(c.text)
		if got := g.LaTeX(); got != c.latex {
			t.Errorf("%s in LaTeX: %s, want %s", c.text, got, c.latex)
		}
		if got := g.MathML(); c.mathML != "" && got != c.mathML {
			t.Errorf("%s in MathML: %s, want %s", c.text, got, c.mathML)
		}
		for d := xml.NewDecoder(strings.NewReader(g.MathML())); ; {
			if _, err := d.Token(); err == io.EOF {
				break
			} else if err != nil {
				t.Fatalf("%s: %v", g.MathML(), err)
			}
		}
	}
	d := MustParseDiscrete("0.1/(z - 0.9) every 1 s")
	if got := d.LaTeX(); got != `\frac{0.1}{z - 0.9}` {
		t.Errorf("LaTeX: %s", got)
	}
}
