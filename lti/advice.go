package lti

import (
	"fmt"
	"slices"
	"strings"

	"github.com/qofs/qofs/units"
)

// advice tells what to write instead of a name that is not declared, where the
// name shows what was meant; else it is empty.
func (s *System) advice(name string) string {
	declared := func(x string) bool {
		_, signal := s.signalIndex(x)
		return signal
	}
	low := strings.ToLower(name)
	for _, suffix := range []string{"_dot", "dot", "_ddot", "ddot"} {
		if x := strings.TrimSuffix(name, suffix); x != name && declared(x) {
			return fmt.Sprintf(" (the derivative of %s by time is %s', the second one %s'')", x, x, x)
		}
	}
	switch {
	case low == "int" || low == integralWord:
		return " (the integral of x by time is integral(x))"
	case low == "dt" || low == "ddt" || len(name) > 1 && name[0] == 'd' && declared(name[1:]):
		return " (the derivative of x by time is x')"
	case name == "s" || name == "p":
		return " (an equation is one in time: x' stands for s x, integral(x) for x/s)"
	case low == "t" || low == "time":
		return " (coefficients must not vary in time)"
	}
	for _, x := range s.all() {
		if strings.EqualFold(x, name) {
			return fmt.Sprintf(" (perhaps %s: upper and lower case differ)", x)
		}
	}
	if _, err := units.Parse(name); err == nil {
		return " (a unit, which belongs into the declaration of a constant; a number in an equation is a pure number)"
	}
	return ""
}

// all returns the names of all signals and constants.
func (s *System) all() []string {
	var out []string
	for _, x := range s.signals {
		out = append(out, x.Name)
	}
	for _, x := range s.constants {
		out = append(out, x.Name)
	}
	return out
}

// names lists what is declared, shortened.
func (s *System) names() string {
	out := s.all()
	slices.Sort(out)
	if len(out) == 0 {
		return "none"
	}
	return shortened(out)
}
