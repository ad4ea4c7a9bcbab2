package impedance

import (
	"errors"
	"fmt"
	"strings"

	"github.com/qofs/qofs/internal/lex"
)

const (
	seriesWords = " in series"
	shuntWords  = " to ground"
)

// String is the one-port and the place of the arm: "2 mH in series".
func (a Arm) String() string {
	if a.shunt {
		return a.z.String() + shuntWords
	}
	return a.z.String() + seriesWords
}

// String lists the arms from the input on, as ParseLadder reads them.
func (l Ladder) String() string {
	texts := make([]string, len(l.arms))
	for i, a := range l.arms {
		texts[i] = a.String()
	}
	return strings.Join(texts, ", ")
}

// ParseLadder reads the arms of a ladder, the one at the input first, with commas
// between them:
//
//	50 kN/m || 640 N*s/m in series, 200 kg to ground
//
// What stands before "in series" or "to ground" is read as by Parse. A blank text
// is the ladder without arms. The error is a *SyntaxError with the offset; behind
// it stands the error of NewLadder, or ErrLimit for a text beyond MaxText.
func ParseLadder(text string) (Ladder, error) {
	if len(text) > MaxText {
		return Ladder{}, tooLong(text)
	}
	if strings.TrimSpace(text) == "" {
		return Ladder{}, nil
	}
	var arms []Arm
	for offset := 0; offset <= len(text); {
		part, _, _ := strings.Cut(text[offset:], ",")
		a, err := parseArm(part)
		var syntax *SyntaxError
		if errors.As(err, &syntax) {
			return Ladder{}, lex.Fault(text, offset+syntax.Offset, syntax.Found, syntax.Want, syntax.Err)
		} else if err != nil {
			return Ladder{}, err
		}
		arms = append(arms, a)
		offset += len(part) + len(",")
	}
	l, err := NewLadder(arms...)
	if err != nil {
		return Ladder{}, lex.Fault(text, 0, "a ladder that cannot be", "", err)
	}
	return l, nil
}

func parseArm(text string) (Arm, error) {
	written := strings.TrimRight(text, " \t\r\n")
	port, shunt := strings.CutSuffix(written, shuntWords)
	series := false
	if !shunt {
		port, series = strings.CutSuffix(written, seriesWords)
	}
	if !shunt && !series {
		return Arm{}, lex.Fault(text, len(written), "the end of an arm", `"in series" or "to ground" after its one-port`, nil)
	}
	z, err := Parse(port)
	return Arm{z: z, shunt: shunt}, err
}

// tooLong is the error for a text beyond MaxText.
func tooLong(text string) error {
	return lex.Fault(text, MaxText, fmt.Sprintf("a text of %d bytes", len(text)), fmt.Sprintf("at most %d", MaxText), ErrLimit)
}

// MustParseLadder is ParseLadder for ladders written down in a program; it panics
// on an error.
func MustParseLadder(text string) Ladder {
	l, err := ParseLadder(text)
	if err != nil {
		panic(err)
	}
	return l
}

// MarshalText is String, for encoding.TextMarshaler.
func (l Ladder) MarshalText() ([]byte, error) { return []byte(l.String()), nil }

// UnmarshalText is ParseLadder, for encoding.TextUnmarshaler.
func (l *Ladder) UnmarshalText(text []byte) error {
	m, err := ParseLadder(string(text))
	if err == nil {
		*l = m
	}
	return err
}
