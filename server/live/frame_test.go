package live

import (
	"encoding/json"
	"fmt"
	"math"
	"math/rand/v2"
	"strings"
	"testing"
	"unicode/utf8"

	"github.com/google/go-cmp/cmp"

	"leeway/server/watch"
)

// heard is a frame as a client reads it.
type heard struct {
	Kind      string       `json:"kind"`
	Tick      int64        `json:"tick"`
	Time      float64      `json:"time"`
	Playing   bool         `json:"playing"`
	Speed     float64      `json:"speed"`
	Viewers   int          `json:"viewers"`
	Pose      [3]float64   `json:"pose"`
	Belief    [3]float64   `json:"belief"`
	Mode      int          `json:"mode"`
	Side      int          `json:"side"`
	Since     float64      `json:"since"`
	Why       string       `json:"why"`
	Ranges    []float64    `json:"ranges"`
	Hits      string       `json:"hits"`
	Gap       *float64     `json:"gap"`
	Leeway    *float64     `json:"leeway"`
	Closest   *[5]float64  `json:"closest"`
	Way       float64      `json:"way"`
	Switches  int          `json:"switches"`
	Contacts  int          `json:"contacts"`
	Saturated float64      `json:"saturated"`
	Estimate  float64      `json:"estimate_error"`
	Movers    [][2]float64 `json:"movers"`
	Goal      [2]float64   `json:"goal"`
	Moved     [][3]any     `json:"moved"`
	Status    string       `json:"status"`
	Reason    string       `json:"reason"`
	Hash      string       `json:"hash"`
	TrailFrom int          `json:"trail_from"`
	Trail     [][3]float64 `json:"trail"`
}

func hear(t testing.TB, b []byte) heard {
	t.Helper()
	d := json.NewDecoder(strings.NewReader(string(b)))
	d.DisallowUnknownFields()
	var h heard
	if err := d.Decode(&h); err != nil {
		t.Fatalf("%v in %s", err, b)
	}
	return h
}

// near is what a number becomes on the way: rounded to four decimals.
func near(v float64) float64 {
	v = math.Round(math.Max(-1e12, math.Min(1e12, v))*1e4) / 1e4
	return v + 0
}

func maybe(v float64) *float64 {
	if math.IsNaN(v) || math.IsInf(v, 0) {
		return nil
	}
	v = near(v)
	return &v
}

// valid is what a text becomes on the way.
func valid(s string) string {
	var b strings.Builder
	for len(s) > 0 { // one U+FFFD for every byte that is not UTF-8, unlike strings.ToValidUTF8
		r, n := utf8.DecodeRuneInString(s)
		b.WriteRune(r)
		s = s[n:]
	}
	return b.String()
}

// expect says what a client should read of a frame.
func expect(f *frame) heard {
	h := heard{
		Kind: "frame", Tick: f.Tick, Time: near(f.Time), Playing: f.Playing, Speed: f.Speed, Viewers: f.Viewers,
		Mode: f.Mode, Side: f.Side, Since: near(f.Since), Why: valid(f.Why),
		Ranges: []float64{}, Gap: maybe(f.Gap), Leeway: maybe(f.Leeway),
		Way: near(f.Way), Switches: f.Switches, Contacts: f.Contacts, Saturated: near(f.Saturated), Estimate: near(f.Estimate),
		Movers: [][2]float64{}, Goal: [2]float64{near(f.Goal[0]), near(f.Goal[1])}, Moved: [][3]any{},
		Status: valid(f.Status), Reason: valid(f.Reason), Hash: fmt.Sprintf("%016x", f.Hash),
		TrailFrom: f.TrailFrom, Trail: [][3]float64{},
	}
	for i := range 3 {
		h.Pose[i], h.Belief[i] = near(f.Pose[i]), near(f.Belief[i])
	}
	for _, r := range f.Ranges {
		h.Ranges = append(h.Ranges, near(r))
	}
	for _, hit := range f.Hits {
		h.Hits += map[bool]string{true: "1", false: "0"}[hit]
	}
	if h.Leeway != nil {
		h.Closest = new([5]float64)
		for i, v := range f.Closest {
			h.Closest[i] = near(v)
		}
	}
	for _, m := range f.Movers {
		h.Movers = append(h.Movers, [2]float64{near(m[0]), near(m[1])})
	}
	for _, m := range f.Moved {
		h.Moved = append(h.Moved, [3]any{valid(m.ID), near(m.X), near(m.Y)})
	}
	for _, s := range f.Trail {
		h.Trail = append(h.Trail, [3]float64{near(s.X), near(s.Y), float64(s.Mode)})
	}
	return h
}

// randomFrame makes a frame of numbers as runs have them, and of odd ones.
func randomFrame(r *rand.Rand, why, reason, id string) *frame {
	num := func() float64 {
		switch r.IntN(12) {
		case 0:
			return 0
		case 1:
			return -r.Float64() * 1e-5
		case 2:
			return math.Copysign(0.00005, r.Float64()-0.5)
		case 3:
			return r.NormFloat64() * 1e6
		}
		return r.NormFloat64() * 10
	}
	f := &frame{
		Tick: r.Int64(), Time: num(), Playing: r.IntN(2) == 0, Speed: []float64{0, 0.25, 1, 64}[r.IntN(4)], Viewers: r.IntN(300),
		Mode: r.IntN(5), Side: r.IntN(3) - 1, Since: num(), Why: why, Gap: num(), Leeway: num(), Way: num(),
		Switches: r.IntN(100), Contacts: r.IntN(100), Saturated: r.Float64(), Estimate: num(),
		Status: "running", Reason: reason, Hash: r.Uint64(), TrailFrom: r.IntN(1000),
	}
	if r.IntN(4) == 0 {
		f.Leeway = math.Inf(1)
	}
	if r.IntN(4) == 0 {
		f.Gap = math.NaN()
	}
	for i := range 3 {
		f.Pose[i], f.Belief[i] = num(), num()
	}
	for i := range f.Closest {
		f.Closest[i] = num()
	}
	f.Goal = [2]float64{num(), num()}
	for range r.IntN(30) {
		f.Ranges, f.Hits = append(f.Ranges, num()), append(f.Hits, r.IntN(2) == 0)
	}
	for range r.IntN(4) {
		f.Movers = append(f.Movers, [2]float64{num(), num()})
		f.Moved = append(f.Moved, movedSolid{id, num(), num()})
		f.Trail = append(f.Trail, watch.Spot{X: num(), Y: num(), Mode: r.IntN(5)})
	}
	return f
}

// The hand-written JSON against encoding/json.
func FuzzFrameReadsAsItWasWritten(f *testing.F) {
	f.Add(uint64(1), "something stood 0.47 m away", "", "desk")
	f.Add(uint64(2), "a \"quote\", a \\ and a \n", "\x00\x1f\x7f", "é\u2028\xff")
	f.Fuzz(func(t *testing.T, seed uint64, why, reason, id string) {
		r := rand.New(rand.NewPCG(seed, 0))
		for range 5 {
			fr := randomFrame(r, why, reason, id)
			if d := cmp.Diff(expect(fr), hear(t, fr.append(nil))); d != "" {
				t.Fatal(d)
			}
		}
	})
}

func TestFrameReadsAsItWasWritten(t *testing.T) {
	r := rand.New(rand.NewPCG(7, 0))
	for range 2000 {
		fr := randomFrame(r, "because", "so", "desk")
		if d := cmp.Diff(expect(fr), hear(t, fr.append(nil))); d != "" {
			t.Fatal(d)
		}
	}
}

func TestFrameGolden(t *testing.T) {
	f := frame{
		Tick: 200, Time: 1, Playing: true, Speed: 0.25, Viewers: 2, Pose: [3]float64{1, 4, -0.00001}, Belief: [3]float64{1.00004, 4.00006, 3.14159},
		Mode: 1, Side: -1, Since: 0.98, Why: `nearer than "0.50" m`, Ranges: []float64{3, 0.123}, Hits: []bool{false, true},
		Gap: 0.5, Leeway: math.Inf(1), Way: 0.45, Goal: [2]float64{11, 4}, Moved: []movedSolid{{"desk", 3, 3.5}},
		Status: "running", Hash: 0xabc, TrailFrom: 3, Trail: []watch.Spot{{X: 1, Y: 4, Mode: 1}},
	}
	want := `{"kind":"frame","tick":200,"time":1,"playing":true,"speed":0.25,"viewers":2,"pose":[1,4,0],"belief":[1,4.0001,3.1416],` +
		`"mode":1,"side":-1,"since":0.98,"why":"nearer than \"0.50\" m","ranges":[3,0.123],"hits":"01","gap":0.5,"leeway":null,"closest":null,` +
		`"way":0.45,"switches":0,"contacts":0,"saturated":0,"estimate_error":0,"movers":[],"goal":[11,4],"moved":[["desk",3,3.5]],` +
		`"status":"running","reason":"","hash":"0000000000000abc","trail_from":3,"trail":[[1,4,1]]}`
	if d := cmp.Diff(want, string(f.append(nil))); d != "" {
		t.Error(d)
	}
}

func BenchmarkFrame(b *testing.B) {
	f := randomFrame(rand.New(rand.NewPCG(1, 0)), "something stood 0.47 m away on the way to the goal, nearer than 0.50 m", "", "desk")
	f.Ranges, f.Hits = make([]float64, 24), make([]bool, 24)
	for i := range f.Ranges {
		f.Ranges[i] = 0.123 * float64(i)
	}
	buf := make([]byte, 0, 4096)
	b.ReportAllocs()
	for b.Loop() {
		buf = f.append(buf[:0])
	}
	b.SetBytes(int64(len(buf)))
}
