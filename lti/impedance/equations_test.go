package impedance

import (
	"fmt"
	"strings"
	"testing"

	"github.com/qofs/qofs/lti"
	"github.com/qofs/qofs/tf"
)

// Ladders of random elements in all domains, written down as differential
// equations element by element and balanced node by node, give the same
// functions.
func TestLaddersAgainstEquations(t *testing.T) {
	r := &random{state: 77}
	for i := range 80 {
		domain := Domain(1 + i%4)
		e := lti.NewEquations()
		across, through := domain.Across().String(), domain.Through().String()
		e.Signal("node0", across)
		var arms []Arm
		balance := [][]string{nil} // what flows into each node
		branch := func(z OnePort, from, to string) string {
			b := fmt.Sprint(len(strings.Join(flat(balance), "")))
			e.Signal("flow"+b, through)
			e.Constant("x"+b, z.port().value.String())
			e.Equation(law(z, "x"+b, "("+from+" - "+to+")", "flow"+b))
			return "flow" + b
		}
		stores := 0
		for j := range 2 + int(r.next()%7) {
			shunt := j > 0 && r.next()%2 == 0
			z := r.element(domain, shunt)
			y := r.element(domain, shunt) // beside it
			stores += z.port().size.order + y.port().size.order
			here := len(balance) - 1
			both := tf.Must(Parallel(z, y))
			if shunt {
				arms = append(arms, ShuntArm(both))
				for _, one := range []OnePort{z, y} {
					balance[here] = append(balance[here], "- "+branch(one, fmt.Sprint("node", here), "0 node0"))
				}
				continue
			}
			arms = append(arms, SeriesArm(both))
			e.Signal(fmt.Sprint("node", here+1), across)
			balance = append(balance, nil)
			for _, one := range []OnePort{z, y} {
				f := branch(one, fmt.Sprint("node", here), fmt.Sprint("node", here+1))
				balance[here], balance[here+1] = append(balance[here], "- "+f), append(balance[here+1], "+ "+f)
			}
		}
		for _, flows := range balance[1:] {
			e.Equation("0 node0 = " + strings.TrimPrefix(strings.Join(flows, " "), "+ "))
		}
		system, err := e.Build()
		if err != nil {
			t.Fatal(err)
		}
		last := fmt.Sprint("node", len(balance)-1)
		want, err := system.TransferFunction("node0", last)
		if err != nil {
			t.Fatal(err)
		}
		l := tf.Must(NewLadder(arms...))
		g := tf.Must(l.AcrossRatio())
		if !g.Equivalent(want) {
			t.Errorf("%v: %v, want %v", l, g, want)
		}
		if d := g.Denominator().Degree(); d > stores {
			t.Errorf("%v: order %d with %d storing and inert elements", l, d, stores)
		}
	}
}

func flat(lists [][]string) (out []string) {
	for _, l := range lists {
		out = append(out, l...)
	}
	return out
}

// law is the differential equation of an element, from the books and not from
// its impedance.
func law(z OnePort, x, across, through string) string {
	for name, form := range map[string]string{
		"ohm": "ACROSS = X THROUGH", "F": "X ACROSS' = THROUGH", "H": "ACROSS = X THROUGH'",
		"N*s/m": "THROUGH = X ACROSS", "kg": "THROUGH = X ACROSS'", "N/m": "THROUGH' = X ACROSS",
		"Pa*s/m^3": "ACROSS = X THROUGH", "m^3/Pa": "X ACROSS' = THROUGH", "kg/m^4": "ACROSS = X THROUGH'",
		"K/W": "ACROSS = X THROUGH", "J/K": "X ACROSS' = THROUGH",
	} {
		if z.port().value.Unit().String() == name {
			return strings.NewReplacer("X", x, "ACROSS", across, "THROUGH", through).Replace(form)
		}
	}
	return "no such element"
}
