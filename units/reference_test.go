package units

import (
	"math"
	"math/big"
	"os"
	"strconv"
	"strings"
	"testing"
)

// Conversion factors of NIST Special Publication 811 (2008), appendix B.8, to
// the digits printed there (from memory, and checked against GNU units below
// where that lists them). Those marked exact are exact by definition.
var nist = []struct {
	from, to, factor string
	exact            bool
}{
	{"acre", "m^2", "4046.8564224", true}, // of international feet; NIST lists that of survey feet, 4046.873
	{"atm", "Pa", "101325", true},
	{"bar", "Pa", "100000", true},
	{"Btu", "J", "1055.05585262", true},
	{"Btu/h", "W", "0.29307107", false},
	{"cal", "J", "4.184", true},
	{"d", "s", "86400", true},
	{"deg", "rad", "0.01745329", false},
	{"arcmin", "rad", "0.0002908882", false},
	{"arcsec", "rad", "0.000004848137", false},
	{"degF", "K", "0.55555556", false},
	{"eV", "J", "1.602176634e-19", true},
	{"ft", "m", "0.3048", true},
	{"ft/min", "m/s", "0.00508", true},
	{"ft*lbf", "J", "1.3558179483314004", true},
	{"ft^3", "m^3", "0.028316846592", true},
	{"gal", "m^3", "0.003785411784", true},
	{"gal/min", "m^3/s", "0.0000630901964", true},
	{"h", "s", "3600", true},
	{"ha", "m^2", "10000", true},
	{"hp", "W", "745.69987158227022", true},
	{"in", "m", "0.0254", true},
	{"inHg", "Pa", "3386.389", false},
	{"kgf", "N", "9.80665", true},
	{"knot", "m/s", "0.51444444", false},
	{"kWh", "MJ", "3.6", true},
	{"L", "m^3", "0.001", true},
	{"lb", "kg", "0.45359237", true},
	{"lb/ft^3", "kg/m^3", "16.01846337", false},
	{"lbf", "N", "4.4482216152605", true},
	{"lbf*in", "N*m", "0.1129848290276167", true},
	{"lbf/in", "N/m", "175.1268", false},
	{"mi", "m", "1609.344", true},
	{"mi/h", "m/s", "0.44704", true},
	{"min", "s", "60", true},
	{"mmHg", "Pa", "133.322387415", true}, // SI Brochure, 8th edition, table 8
	{"nmi", "m", "1852", true},
	{"oz", "kg", "0.028349523125", true},
	{"psi", "Pa", "6894.757", false},
	{"rev", "rad", "6.283185", false},
	{"rpm", "rad/s", "0.1047198", false},
	{"t", "kg", "1000", true},
	{"Torr", "Pa", "133.3224", false},
	{"yd", "m", "0.9144", true},
}

func TestNIST(t *testing.T) {
	for _, c := range nist {
		k, err := MustParse(c.from).ConversionTo(MustParse(c.to))
		want, ok := new(big.Rat).SetString(c.factor)
		if err != nil || !ok {
			t.Errorf("%s to %s: %v", c.from, c.to, err)
			continue
		}
		if c.exact && k.Cmp(want) != 0 {
			t.Errorf("%s is %s %s, want %s", c.from, k.FloatString(20), c.to, c.factor)
		}
		// as many significant digits as are printed
		digits := len(strings.Trim(strings.TrimLeft(strings.Split(c.factor, "e")[0], "0."), "0")) - strings.Count(c.factor, ".")
		g, _ := k.Float64()
		w, _ := want.Float64()
		if tolerance := math.Pow(10, float64(1-max(digits, 4))); math.Abs(g/w-1) > tolerance {
			t.Errorf("%s is %.12g %s, want %s", c.from, g, c.to, c.factor)
		}
	}
}

// An independent table: GNU units, by testdata/generate.py.
func TestAgainstGNUUnits(t *testing.T) {
	data, err := os.ReadFile("testdata/gnu_units.txt")
	if err != nil {
		t.Fatal(err)
	}
	lines := strings.Split(strings.TrimSpace(string(data)), "\n")
	for _, line := range lines {
		f := strings.Split(line, "\t")
		u, err := Parse(f[0])
		want, err2 := strconv.ParseFloat(f[2], 64)
		if err != nil || err2 != nil {
			t.Errorf("%q: %v, %v", line, err, err2)
			continue
		}
		got, _ := u.Scale().Float64()
		// 15 digits, and π is rational here
		tolerance := 1e-14
		if f[0] == "eV" { // GNU units may have an older value
			tolerance = 1e-8
		}
		if math.Abs(got/want-1) > tolerance {
			t.Errorf("%s is %.16g, GNU units has %s for %s", f[0], got, f[2], f[1])
		}
	}
	if len(lines) < 60 {
		t.Errorf("%d lines", len(lines))
	}
}

// The SI Brochure, 9th edition and its 2022 supplement, table of prefixes.
func TestPrefixes(t *testing.T) {
	for prefix, e := range map[string]int{"Q": 30, "R": 27, "Y": 24, "Z": 21, "E": 18, "P": 15, "T": 12, "G": 9, "M": 6, "k": 3, "h": 2, "da": 1, "": 0,
		"d": -1, "c": -2, "m": -3, "µ": -6, "μ": -6, "n": -9, "p": -12, "f": -15, "a": -18, "z": -21, "y": -24, "r": -27, "q": -30} {
		u, err := Parse(prefix + "W")
		want := new(big.Rat).SetInt(new(big.Int).Exp(big.NewInt(10), big.NewInt(int64(max(e, -e))), nil))
		if e < 0 {
			want.Inv(want)
		}
		if err != nil || u.Scale().Cmp(want) != 0 {
			t.Errorf("%sW: %v, %v", prefix, u.Scale(), err)
		}
	}
	for _, text := range []string{"kmin", "mdegC", "kft", "kcount", "µrpm", "kkg", "mkg", "kh"} {
		if u, err := Parse(text); err == nil {
			t.Errorf("%s was read as %s", text, u.Dimension())
		}
	}
	for text, same := range map[string]string{"min": "60 s", "ft": "0.3048 m", "Pa": "1 N/m^2", "cd": "1 cd", "d": "86400 s", "mmHg": "133.322387415 Pa", "T": "1 Wb/m^2", "dam": "10 m", "kat": "1 mol/s"} {
		if q := MustParseQuantity("1 " + text); !q.Equal(MustParseQuantity(same)) {
			t.Errorf("%s is %v, want %s", text, q.Unit().Scale(), same)
		}
	}
}

// π is the convergent that the package comment states.
func TestPi(t *testing.T) {
	// 50 digits of π, DLMF §3.12
	pi, _ := new(big.Rat).SetString("3.14159265358979323846264338327950288419716939937510")
	d := new(big.Rat).Sub(Pi(), pi)
	bound, _ := new(big.Rat).SetString("1.42e-38")
	if d.Abs(d).Cmp(bound) > 0 || Pi().Num().BitLen() > 63 {
		t.Errorf("π is %s", Pi().FloatString(45))
	}
	full := MustParseQuantity("360 deg")
	if !full.Equal(MustParseQuantity("1 rev")) {
		t.Error("360 deg is not a turn")
	}
}
