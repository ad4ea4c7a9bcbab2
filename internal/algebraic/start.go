package algebraic

import (
	"math"

	"github.com/qofs/qofs/internal/intpoly"
)

// start is a starting point radius·e^(i·angle), radius = 2^logRadius.
type start struct {
	logRadius, angle float64
}

// startingPoints returns one point for each root: on every edge of the Newton
// polygon, the upper convex hull of log|c_i|, as many as it is long, evenly
// spread on a circle of the radius that the slope tells (Bini 1996).
func startingPoints(p intpoly.Poly) []start {
	n := p.Degree()
	logs := make([]float64, n+1)
	for i := range logs {
		logs[i] = logOfZero
		if p.Sign(i) != 0 {
			s := fromBig(p.Coefficient(i), 0)
			logs[i] = roughLog2(math.Abs(s.m)) + float64(s.e)
		}
	}
	hull := convexHull(logs, nil)
	var out []start
	for h := 1; h < len(hull); h++ {
		a, b := hull[h-1], hull[h]
		r := (logs[a] - logs[b]) / float64(b-a)
		for j := range b - a {
			angle := 2*math.Pi*(float64(j)/float64(b-a)+float64(h)/float64(n)) + 0.7
			out = append(out, start{r, angle})
		}
	}
	return out
}

// convexHull returns the indices of the upper convex hull of the points
// (i, logs[i]) but for those of zeros.
func convexHull(logs []float64, hull []int) []int {
	for i, y := range logs {
		if y == logOfZero {
			continue
		}
		for len(hull) > 1 {
			a, b := hull[len(hull)-2], hull[len(hull)-1]
			if (logs[b]-logs[a])*float64(i-a) > (y-logs[a])*float64(b-a) {
				break
			}
			hull = hull[:len(hull)-1]
		}
		hull = append(hull, i)
	}
	return hull
}

// roughLog2 is within 0.09 of log2 x for a positive normal x: the exponent and
// the mantissa read as one number.
func roughLog2(x float64) float64 { return float64(math.Float64bits(x))*0x1p-52 - 1023 }

// logOfZero is what roughLog2 returns for 0.
const logOfZero = -1023

// roughExp2 is the inverse of roughLog2.
func roughExp2(x float64) float64 { return math.Float64frombits(uint64((x + 1023) * 0x1p52)) }
