package main

import (
	"fmt"

	"github.com/qofs/qofs/examples/picture"
)

const pictureCaution = "Linear model in one direction; not a basis for supports or stops."

// draw writes the transmissibility over frequency and the release over time.
func (b *bench) draw(folder string) ([]string, error) {
	hertz := sweep(0.5, 100, 1200)
	pan := transmissibility{b.toPan.FrequencyFunction()}
	toPan, err := pan.decibels(hertz)
	if err != nil {
		return nil, err
	}
	toBench, err := transmissibility{b.toBench.FrequencyFunction()}.decibels(hertz)
	if err != nil {
		return nil, err
	}
	f, top, err := pan.peak(1, 10)
	if err != nil {
		return nil, err
	}
	one, err := pan.crossing(f, 10)
	if err != nil {
		return nil, err
	}
	p := picture.New("motion over that of the floor / dB", hertz, toPan, picture.Water)
	p.Logarithmic()
	p.Low, p.High = -80, 24
	p.Band(-80, 0)
	p.Curve(hertz, toBench, picture.Wood, 1)
	p.Label(f, top, fmt.Sprintf(" %.3g dB at %.3g Hz", top, f), picture.Water, picture.AboveRight)
	p.Label(one*1.1, 3, fmt.Sprintf("isolates above %.3g Hz", one), picture.Slate, picture.LevelRight)
	all, err := modesOf(b.toPan)
	if err != nil {
		return nil, err
	}
	foot := all[len(all)-1]
	p.Label(foot.hertz, -8, fmt.Sprintf("the foot's mode, %.3g Hz", foot.hertz), picture.Water, picture.AboveRight)
	p.Label(40, toPan[len(toPan)*83/100]-8, "pan ", picture.Water, picture.BelowLeft)
	p.Label(98, toBench[len(toBench)*90/100], "top of the bench ", picture.Wood, picture.AboveLeft)
	paths, err := picture.Save(folder, "transmissibility", "frequency / Hz", pictureCaution, p)
	if err != nil {
		return nil, err
	}
	const step, n = 0.004, 1001
	values, err := b.released.Sample(step, n)
	if err != nil {
		return nil, err
	}
	t := make([]float64, n)
	for i := range t {
		t[i] = float64(i) * step
	}
	r := picture.New("pan / mm", t, values, picture.Water)
	r.Band(-0.01, 0.01)
	r.Label(t[n-1], 0.01, "within 10 µm ", picture.Slate, picture.AboveLeft)
	r.Label(0.12, 0.44, "let go 0.5 mm off", picture.Water, picture.LevelRight)
	more, err := picture.Save(folder, "release", "t / s", pictureCaution, r)
	return append(paths, more...), err
}
