package truth

import (
	"fmt"
	"math"
	"testing"
)

// recorder notes whether a check under test complained.
type recorder struct {
	testing.TB
	failed bool
}

func (r *recorder) Helper()               {}
func (r *recorder) Errorf(string, ...any) { r.failed = true }
func (r *recorder) Fatalf(f string, a ...any) {
	panic(fmt.Sprintf(f, a...))
}

func TestValuesOfEveryShape(t *testing.T) {
	if v := Value(t, "K-08", "distance"); math.Abs(v-0.104169) > 1e-6 {
		t.Errorf("K-08 distance = %v", v)
	}
	if v := Values(t, "K-01", "pose"); len(v) != 3 || v[2] < 1.19 || v[2] > 1.21 {
		t.Errorf("K-01 pose = %v", v)
	}
	if v := Values(t, "G-03", ""); len(v) != 4 { // ((near, far), tangent, exit)
		t.Errorf("G-03 flattens to %v, want four numbers", v)
	}
	if s := Text(t, "C-14", "word"); s != "LSL" {
		t.Errorf("C-14 word = %q", s)
	}
}

func TestMissingAnswersFail(t *testing.T) {
	for what, ask := range map[string]func(testing.TB){
		"unknown row":     func(tb testing.TB) { Value(tb, "K-99", "v") },
		"unknown name":    func(tb testing.TB) { Value(tb, "K-01", "speed") },
		"list for number": func(tb testing.TB) { Value(tb, "K-01", "pose") },
		"text for number": func(tb testing.TB) { Value(tb, "C-14", "word") },
		"number for text": func(tb testing.TB) { Text(tb, "K-01", "v") },
	} {
		func() {
			defer func() {
				if recover() == nil {
					t.Errorf("%s went unnoticed", what)
				}
			}()
			ask(&recorder{TB: t})
		}()
	}
}

func TestClose(t *testing.T) {
	for _, c := range []struct {
		got, want, rel float64
		ok             bool
	}{
		{1, 1, 0, true},
		{1.0000009, 1, 1e-6, true},
		{1.0000011, 1, 1e-6, false},
		{-1, 1, 1e-6, false},
		{2.9e-8, 2.8e-8, 1e-4, false}, // small numbers are compared relatively too
		{1e-7, 0, 1e-6, true},
		{1e-7, 1e-17, 1e-6, true},
		{1e-5, 0, 1e-6, false},
		{math.NaN(), 0, 1e-6, false},
		{math.NaN(), 1, 1e-6, false},
		{math.Inf(1), 1, 1e-6, false},
	} {
		r := &recorder{TB: t}
		Close(r, "x", c.got, c.want, c.rel)
		if r.failed == c.ok {
			t.Errorf("Close(%v, %v, %v): failed = %v", c.got, c.want, c.rel, r.failed)
		}
	}
}
