package tf

import "github.com/qofs/qofs/units"

func impulseResponseSignal(input, output units.Signal) (units.Signal, error) { return output, nil }
func perSecond(s units.Signal) (units.Signal, error)                         { return s, nil }
func timesSeconds(s units.Signal) (units.Signal, error)                      { return s, nil }
func unitText(u units.Unit) string                                           { return "" }
