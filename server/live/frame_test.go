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

	"leeway/sim/drive"
	"leeway/sim/geom"
	"leeway/sim/logic"
	"leeway/sim/shadow"
)

// heard is a frame as a client reads it.
type heard struct {
	Kind      string        `json:"kind"`
	Tick      int64         `json:"tick"`
	Time      float64       `json:"time"`
	Playing   bool          `json:"playing"`
	Speed     float64       `json:"speed"`
	Viewers   int           `json:"viewers"`
	Pose      [3]float64    `json:"pose"`
	Belief    [3]float64    `json:"belief"`
	Mode      int           `json:"mode"`
	Side      int           `json:"side"`
	Since     float64       `json:"since"`
	Why       string        `json:"why"`
	Ranges    []float64     `json:"ranges"`
	Hits      string        `json:"hits"`
	Gap       *float64      `json:"gap"`
	Leeway    *float64      `json:"leeway"`
	Closest   *[5]float64   `json:"closest"`
	Way       float64       `json:"way"`
	Switches  int           `json:"switches"`
	Contacts  int           `json:"contacts"`
	Saturated float64       `json:"saturated"`
	Estimate  float64       `json:"estimate_error"`
	Movers    [][2]float64  `json:"movers"`
	Goal      [2]float64    `json:"goal"`
	Moved     [][3]any      `json:"moved"`
	Status    string        `json:"status"`
	Reason    string        `json:"reason"`
	Hash      string        `json:"hash"`
	Length    int64         `json:"length"`
	AtHead    bool          `json:"at_head"`
	Shadows   []shadowHeard `json:"shadows"`
	Exits     []exitHeard   `json:"exits"`
	Verdict   verdictHeard  `json:"verdict"`
	Tape      tapeHeard     `json:"tape"`
}

type shadowHeard struct {
	Pose   [3]float64 `json:"pose"`
	Mode   int        `json:"mode"`
	Side   int        `json:"side"`
	Status string     `json:"status"`
	Gap    *float64   `json:"gap"`
}

type exitHeard struct {
	To     int          `json:"to"`
	Name   string       `json:"name"`
	Hold   float64      `json:"hold"`
	Held   float64      `json:"held"`
	Gauges []gaugeHeard `json:"gauges"`
}

type gaugeHeard struct {
	Label   string  `json:"label"`
	Text    string  `json:"text"`
	Met     bool    `json:"met"`
	Share   float64 `json:"share"`
	Mark    float64 `json:"mark"`
	Release float64 `json:"release"`
}

type verdictHeard struct {
	Shortest *float64     `json:"shortest"`
	Why      string       `json:"shortest_why"`
	Models   []modelHeard `json:"models"`
}

type modelHeard struct {
	Who         int      `json:"who"`
	Status      string   `json:"status"`
	Time        float64  `json:"time"`
	Leeway      *float64 `json:"leeway"`
	Way         float64  `json:"way"`
	Switches    int      `json:"switches"`
	Contacts    int      `json:"contacts"`
	Saturated   float64  `json:"saturated"`
	Estimate    float64  `json:"estimate_error"`
	Largest     float64  `json:"largest"`
	LargestAt   float64  `json:"largest_at"`
	RMS         float64  `json:"rms"`
	Parting     string   `json:"parting"`
	PartingTick int64    `json:"parting_tick"`
}

// tapeHeard is what a hello or a frame says of the tape, as a client reads it.
type tapeHeard struct {
	Every     int64       `json:"every"`
	Length    int64       `json:"length"`
	From      int         `json:"from"`
	Rows      [][]float64 `json:"rows"`
	SpansFrom int         `json:"spans_from"`
	Spans     [][4]int64  `json:"spans"`
	MarksFrom int         `json:"marks_from"`
	Marks     []markHeard `json:"marks"`
}

type markHeard struct {
	Kind string `json:"kind"`
	Who  int    `json:"who"`
	Tick int64  `json:"tick"`
	Text string `json:"text"`
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
		Length: f.Length, AtHead: f.AtHead, Exits: []exitHeard{},
		Verdict: verdictHeard{Shortest: maybe(f.Verdict.Shortest), Models: []modelHeard{}},
		Tape: tapeHeard{
			From: f.Tape.From, Rows: [][]float64{}, SpansFrom: f.Tape.SpansFrom, Spans: [][4]int64{},
			MarksFrom: f.Tape.MarksFrom, Marks: []markHeard{},
		},
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
	for _, x := range f.Shadows {
		h.Shadows = append(h.Shadows, shadowHeard{
			[3]float64{near(x.Pose[0]), near(x.Pose[1]), near(x.Pose[2])}, x.Mode, x.Side, valid(x.Status), maybe(x.Gap),
		})
	}
	for _, x := range f.Exits {
		e := exitHeard{x.To, valid(x.Name), near(x.Hold), near(x.Held), []gaugeHeard{}}
		for _, g := range x.Gauges {
			e.Gauges = append(e.Gauges, gaugeHeard{valid(g.Label), valid(g.Text), g.Met, near(g.Share), near(g.Mark), near(g.Release)})
		}
		h.Exits = append(h.Exits, e)
	}
	if h.Verdict.Shortest == nil {
		h.Verdict.Why = valid(f.Verdict.ShortestWhy)
	}
	for _, m := range f.Verdict.Models {
		h.Verdict.Models = append(h.Verdict.Models, modelHeard{
			int(m.Who), valid(m.Status), near(m.Time), maybe(m.Leeway), near(m.Way), m.Switches, m.Contacts, near(m.Saturated),
			near(m.Estimate), near(m.Largest), near(m.LargestAt), near(m.RMS), valid(m.Parting), m.PartingTick,
		})
	}
	for i := range f.Tape.Rows {
		row := &f.Tape.Rows[i]
		h.Tape.Rows = append(h.Tape.Rows, expectRow(row, f.Tape.Models))
	}
	for _, x := range f.Tape.Spans {
		h.Tape.Spans = append(h.Tape.Spans, [4]int64{int64(x.Who), x.Tick, int64(x.Mode), int64(x.Side)})
	}
	for _, x := range f.Tape.Marks {
		h.Tape.Marks = append(h.Tape.Marks, markHeard{x.Kind.String(), int(x.Who), x.Tick, valid(x.Text)})
	}
	return h
}

// expectRow says what a client should read of a row.
func expectRow(row *shadow.Row, models int) []float64 {
	model := func(m *shadow.RowModel) []float64 {
		return []float64{near(m.Pose.Pos.X), near(m.Pose.Pos.Y), near(m.Pose.Theta), float64(m.Mode), float64(m.Side), near(m.Gap)}
	}
	out := append([]float64{float64(row.Tick)}, model(&row.Models[shadow.Robot])...)
	for _, v := range []float64{
		row.Belief.X, row.Belief.Y, row.Belief.Theta, row.Want.X, row.Want.Y, row.V, row.W,
		row.Wheels.Left, row.Wheels.Right, row.Command.Left, row.Command.Right,
	} {
		out = append(out, near(v))
	}
	for w := shadow.Point; int(w) < models; w++ {
		ended := 0.0
		if row.Models[w].Ended {
			ended = 1
		}
		out = append(append(out, model(&row.Models[w])...), ended)
	}
	return out
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
		Status: "running", Reason: reason, Hash: r.Uint64(),
		Length: r.Int64(), AtHead: r.IntN(2) == 0, Verdict: verdict{Shortest: num(), ShortestWhy: reason},
		Tape: additions{From: r.IntN(1000), Models: 1 + 2*r.IntN(2), SpansFrom: r.IntN(100), MarksFrom: r.IntN(100)},
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
	}
	if f.Tape.Models > 1 {
		for range 2 {
			f.Shadows = append(f.Shadows, shadowNow{[3]float64{num(), num(), num()}, r.IntN(5), r.IntN(3) - 1, reason, num()})
		}
	}
	for range r.IntN(4) {
		x := exitNow{To: r.IntN(5), Name: id, Hold: num(), Held: num()}
		for range r.IntN(3) {
			x.Gauges = append(x.Gauges, logic.Gauge{Label: why, Text: id, Met: r.IntN(2) == 0, Share: num(), Mark: num(), Release: num()})
		}
		f.Exits = append(f.Exits, x)
	}
	for w := range f.Tape.Models {
		f.Verdict.Models = append(f.Verdict.Models, measures{
			Who: shadow.Who(w), Status: "arrived", Time: num(), Leeway: num(), Way: num(), Switches: r.IntN(9), Contacts: r.IntN(9), Saturated: num(),
			Estimate: num(), Largest: num(), LargestAt: num(), RMS: num(), Parting: why, PartingTick: r.Int64N(1000),
		})
	}
	for range r.IntN(4) {
		row := shadow.Row{
			Tick: r.Int64N(1 << 40), Belief: drive.Estimate{X: num(), Y: num(), Theta: num()}, Want: geom.Vec{X: num(), Y: num()}, V: num(), W: num(),
			Wheels: drive.Wheels{Left: num(), Right: num()}, Command: drive.Wheels{Left: num(), Right: num()},
		}
		for w := range f.Tape.Models {
			row.Models[w] = shadow.RowModel{
				Pose: geom.Pose{Pos: geom.Vec{X: num(), Y: num()}, Theta: num()}, Mode: int8(r.IntN(50)), Side: logic.Side(r.IntN(3) - 1), Ended: r.IntN(2) == 0, Gap: num(),
			}
		}
		f.Tape.Rows = append(f.Tape.Rows, row)
		f.Tape.Spans = append(f.Tape.Spans, shadow.Span{Who: shadow.Who(r.IntN(3)), Tick: r.Int64N(1000), Mode: r.IntN(5), Side: logic.Side(r.IntN(3) - 1)})
		f.Tape.Marks = append(f.Tape.Marks, shadow.Event{Kind: shadow.EventKind(r.IntN(5)), Who: shadow.Who(r.IntN(3)), Tick: r.Int64N(1000), Text: why})
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
	row := shadow.Row{Tick: 200, Belief: drive.Estimate{X: 1, Y: 2, Theta: 3}, Want: geom.Vec{X: 0.4}, V: 0.39, W: -0.1, Wheels: drive.Wheels{Left: 7, Right: 8}, Command: drive.Wheels{Left: 9, Right: 10}}
	for w := range shadow.Models {
		row.Models[w] = shadow.RowModel{Pose: geom.Pose{Pos: geom.Vec{X: 1 + float64(w), Y: 4}, Theta: 0.5}, Mode: int8(w), Side: logic.LeftSide, Gap: 0.25, Ended: w == shadow.Unicycle}
	}
	f := frame{
		Tick: 200, Time: 1, Playing: true, Speed: 0.25, Viewers: 2, Pose: [3]float64{1, 4, -0.00001}, Belief: [3]float64{1.00004, 4.00006, 3.14159},
		Mode: 1, Side: -1, Since: 0.98, Why: `nearer than "0.50" m`, Ranges: []float64{3, 0.123}, Hits: []bool{false, true},
		Gap: 0.5, Leeway: math.Inf(1), Way: 0.45, Goal: [2]float64{11, 4}, Moved: []movedSolid{{"desk", 3, 3.5}},
		Status: "running", Hash: 0xabc, Length: 300,
		Shadows: []shadowNow{{[3]float64{1, 2, 3}, 2, 1, "running", 0.5}},
		Exits: []exitNow{{To: 1, Name: "wall-following", Hold: 0.1, Held: 0.02, Gauges: []logic.Gauge{
			{Label: "The gap", Text: "0.44 ≥ 0.53 m", Met: true, Share: 0.25, Mark: 0.5, Release: 0.75}}}},
		Verdict: verdict{Shortest: math.NaN(), ShortestWhy: "No way.", Models: []measures{
			{Who: shadow.Point, Status: "arrived", Time: 2, Leeway: 0.1, Way: 3, Switches: 4, Contacts: 5, Saturated: 0.6, Largest: 7, LargestAt: 8, RMS: 9, Parting: "At 0:01.0 …", PartingTick: 200}}},
		Tape: additions{
			From: 10, Rows: []shadow.Row{row}, Models: 3, SpansFrom: 4, Spans: []shadow.Span{{Who: shadow.Unicycle, Tick: 199, Mode: 1, Side: logic.RightSide}},
			MarksFrom: 2, Marks: []shadow.Event{{Kind: shadow.PartingMark, Who: shadow.Point, Tick: 200, Text: "At 0:01.0 …"}},
		},
	}
	want := `{"kind":"frame","tick":200,"time":1,"playing":true,"speed":0.25,"viewers":2,"pose":[1,4,0],"belief":[1,4.0001,3.1416],` +
		`"mode":1,"side":-1,"since":0.98,"why":"nearer than \"0.50\" m","ranges":[3,0.123],"hits":"01","gap":0.5,"leeway":null,"closest":null,` +
		`"way":0.45,"switches":0,"contacts":0,"saturated":0,"estimate_error":0,"movers":[],"goal":[11,4],"moved":[["desk",3,3.5]],` +
		`"status":"running","reason":"","hash":"0000000000000abc","length":300,"at_head":false,` +
		`"shadows":[{"pose":[1,2,3],"mode":2,"side":1,"status":"running","gap":0.5}],` +
		`"exits":[{"to":1,"name":"wall-following","hold":0.1,"held":0.02,"gauges":[{"label":"The gap","text":"0.44 ≥ 0.53 m","met":true,"share":0.25,"mark":0.5,"release":0.75}]}],` +
		`"verdict":{"shortest":null,"shortest_why":"No way.","models":[{"who":1,"status":"arrived","time":2,"leeway":0.1,"way":3,"switches":4,"contacts":5,"saturated":0.6,` +
		`"estimate_error":0,"largest":7,"largest_at":8,"rms":9,"parting":"At 0:01.0 …","parting_tick":200}]},` +
		`"tape":{"from":10,"rows":[[200,1,4,0.5,0,1,0.25,1,2,3,0.4,0,0.39,-0.1,7,8,9,10,2,4,0.5,1,1,0.25,0,3,4,0.5,2,1,0.25,1]],` +
		`"spans_from":4,"spans":[[2,199,1,-1]],"marks_from":2,"marks":[{"kind":"parting","who":1,"tick":200,"text":"At 0:01.0 …"}]}}`
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
