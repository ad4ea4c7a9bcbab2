package tf

import (
	"fmt"

	"github.com/qofs/qofs/units"
)

// signalText writes a signal as the text forms do: "level: m", or the unit
// alone where the signal has no name.
func signalText(s units.Signal) string {
	if s.Name == "" {
		return fmt.Sprint(s.Unit)
	}
	return s.Name + ": " + fmt.Sprint(s.Unit)
}

// unitAdvice says what makes a signal of the unit found fit where the unit
// wanted is expected.
func unitAdvice(found, wanted units.Unit) string {
	return "the units differ; where one converts to the other, ConvertUnits does it"
}
