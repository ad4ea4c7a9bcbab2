package lti_test

import (
	"testing"

	"github.com/qofs/qofs/lti"
	"github.com/qofs/qofs/poly"
	"github.com/qofs/qofs/tf"
)

func TestModesText(t *testing.T) {
	for text, want := range map[string][2]string{
		"1":                             {"none", "none"},
		"(2 x + 1)^3":                   {"s = -0.5 rad/s, 3 times", "z = -0.5, 3 times"},
		"(x - 0.9) (x^2 + x + 0.5)^2 x": {"s = 0.9 rad/s; s = -0.5 ± 0.5i rad/s, 2 times; s = 0 rad/s", "z = 0.9; z = -0.5 ± 0.5i, 2 times; z = 0"},
		"x^2 + 4":                       {"s = 0 ± 2i rad/s", "z = 0 ± 2i"},
		"3 x - 1":                       {"s = 0.3333 rad/s", "z = 0.3333"},
	} {
		roots, err := poly.MustParse(text).Roots()
		if err != nil {
			t.Fatal(err)
		}
		if got := lti.Modes[tf.Continuous](roots).String(); !sameModes(got, want[0]) {
			t.Errorf("%s: %s, want %s", text, got, want[0])
		}
		if got := lti.Modes[tf.Discrete](roots).String(); !sameModes(got, want[1]) {
			t.Errorf("%s: %s, want %s", text, got, want[1])
		}
	}
}
