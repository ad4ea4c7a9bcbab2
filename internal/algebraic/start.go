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
		logs[i] = math.Inf(-1)
		if p.Sign(i) != 0 {
			s := fromBig(p.Coefficient(i), 0)
			logs[i] = math.Log2(math.Abs(s.m)) + float64(s.e)
		}
	}
	hull := []int{0}
	for i := 1; i <= n; i++ {
		if math.IsInf(logs[i], -1) {
			continue
		}
		for len(hull) > 1 {
			a, b := hull[len(hull)-2], hull[len(hull)-1]
			if (logs[b]-logs[a])*float64(i-a) > (logs[i]-logs[a])*float64(b-a) {
				break
			}
			hull = hull[:len(hull)-1]
		}
		hull = append(hull, i)
	}
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
