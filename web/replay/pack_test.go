package replay

import (
	"bytes"
	"compress/flate"
	"encoding/base64"
	"encoding/binary"
	"encoding/json"
	"flag"
	"io"
	"math"
	"math/rand/v2"
	"os"
	"reflect"
	"testing"
)

var update = flag.Bool("update", false, "write the golden files anew")

// sample is a film of n frames with movers, beams, edits, and numbers of all kinds.
func sample(n int) *Film {
	rng := rand.New(rand.NewPCG(1, 2))
	f := &Film{
		Name: "The bay", Purpose: "Does it get out?", Asked: "Asked: to reach the goal.", Big: "0.05 m", Of: "of leeway.", Words: "It holds.",
		Ending: "It came to rest.", Caution: "Take care.", Seed: "7", Hash: "0123456789abcdef", Version: "v1", Link: "http://127.0.0.1:8321/open#1a",
		Tick: 0.005, Length: int64(n-1) * 20, Bounds: [4]float64{0, 0, 12, 8}, Start: [3]float64{1, 4, 0.5}, Goal: [3]float64{11, 4, 0.15},
		Hull: 0.21, Track: 0.3, Wheel: 0.05, Mount: 0.19, RangeMax: 3, Bearings: []float64{0, math.Pi / 2, -math.Pi / 2}, Least: 0.05, Top: 1,
		Modes:  []Mode{{"goal-seeking", "goal"}, {"wall-following", "wall"}, {"arrived", "done"}},
		Solids: []Solid{{Shape: "disc", Points: [][2]float64{{6, 4}}, Radius: 0.3}, {Shape: "wall", Points: [][2]float64{{-1.5, 2}, {3.25, 2.001}}}},
		Movers: []Mover{{Half: [2]float64{0.4, 0.25}}, {Radius: 0.25}},
		Edits:  []Edit{{Tick: 30, What: "solid", X: 7, Y: 4}, {Tick: 50, What: "robot", X: 2, Y: 2}, {Tick: 70, What: "goal", X: 10, Y: 1}},
		Spans:  []Span{{Robot, 0, 0, 0}, {Point, 0, 0, 0}, {Unicycle, 0, 0, 0}, {Robot, 41, 1, 1}, {Robot, 60, 1, -1}, {Robot, 90, 2, 0}},
		Whys:   []Why{{Robot, 41, 1, "Something stood 0.29 m away."}, {Robot, 90, 2, "The goal was 0.10 m away."}},
		Marks:  []Mark{{"contact", Robot, 44, "At 0:00.2 it touched."}, {"parting", Point, 44, "At 0:00.2 they parted."}, {"end", Robot, 95, "The robot came to rest."}},
		Pin:    &Pin{[2]float64{5, 4}, [2]float64{5.3, 4}, 44, "0.05 m", "closest, at 0:00.2"},
	}
	for w, name := range []string{"robot", "point", "unicycle"} {
		f.Models = append(f.Models, Model{Name: name, End: f.Length - int64(5*w), Ending: "arrived", Good: true})
	}
	x := 1.0
	for i := range n {
		x += 0.1 * (rng.Float64() - 0.3)
		k := Frame{Tick: int64(i) * 20, Belief: [3]float64{x + 0.01, 4, 0.5}, Movers: [][2]float64{{x / 2, -3.5}, {5, 5}}}
		for w := range k.Models {
			k.Models[w] = Body{x, 4 + float64(w) - rng.Float64(), float64(i)*0.7 - 10, rng.Float64() - 0.01}
		}
		for range f.Bearings {
			k.Ranges = append(k.Ranges, 3*rng.Float32())
		}
		f.Frames = append(f.Frames, k)
	}
	return f
}

// unpacked reads what pack wrote, by a way of its own.
func unpacked(t testing.TB, text string) (head map[string]any, columns map[string][][]float64) {
	t.Helper()
	packed, err := base64.StdEncoding.DecodeString(text)
	if err != nil {
		t.Fatal(err)
	}
	raw, err := io.ReadAll(flate.NewReader(bytes.NewReader(packed)))
	if err != nil {
		t.Fatal(err)
	}
	r := bytes.NewReader(raw)
	n, err := binary.ReadUvarint(r)
	if err != nil {
		t.Fatal(err)
	}
	body := bytes.NewReader(raw[len(raw)-r.Len()+int(n):])
	if err := json.Unmarshal(raw[len(raw)-r.Len():][:n], &head); err != nil {
		t.Fatal(err)
	}
	columns = map[string][][]float64{}
	for _, c := range head["columns"].([]any) {
		c := c.(map[string]any)
		name := c["name"].(string)
		for range int(c["count"].(float64)) {
			var column []float64
			last := int64(0)
			for range int(head["frames"].(float64)) {
				d, err := binary.ReadVarint(body)
				if err != nil {
					t.Fatalf("%s: %v", name, err)
				}
				last += d
				column = append(column, float64(last)*c["quantum"].(float64))
			}
			columns[name] = append(columns[name], column)
		}
	}
	last := [2]int64{}
	for _, s := range head["solids"].([]any) {
		for range int(s.(map[string]any)["points"].(float64)) {
			var p []float64
			for k := range last {
				d, err := binary.ReadVarint(body)
				if err != nil {
					t.Fatalf("points: %v", err)
				}
				last[k] += d
				p = append(p, float64(last[k])/1000)
			}
			columns["points"] = append(columns["points"], p)
		}
	}
	if body.Len() > 0 {
		t.Errorf("%d bytes are left", body.Len())
	}
	return head, columns
}

func TestFramesComeBackToHalfAQuantum(t *testing.T) {
	f := sample(50)
	text, err := pack(f, 1, true)
	if err != nil {
		t.Fatal(err)
	}
	head, columns := unpacked(t, text)
	if head["name"] != f.Name || head["length"] != float64(f.Length) || len(head["marks"].([]any)) != len(f.Marks) {
		t.Errorf("the head is another: %v", head)
	}
	check := func(name string, i, k int, want, within float64) {
		t.Helper()
		if got := columns[name][i][k]; math.Abs(got-want) > within+1e-9 {
			t.Errorf("%s %d of frame %d is %v, was %v", name, i, k, got, want)
		}
	}
	if want := [][]float64{{6, 4}, {-1.5, 2}, {3.25, 2.001}}; !reflect.DeepEqual(columns["points"], want) {
		t.Errorf("the points came back as %v", columns["points"])
	}
	for k, frame := range f.Frames {
		check("tick", 0, k, float64(frame.Tick), 0)
		for w, name := range []string{"robot", "point", "unicycle"} {
			check(name+".x", 0, k, frame.Models[w].X, 0.0005)
			check(name+".y", 0, k, frame.Models[w].Y, 0.0005)
			check(name+".heading", 0, k, frame.Models[w].Heading, 0.0005)
			check(name+".gap", 0, k, frame.Models[w].Gap, 0.0005)
		}
		for i := range frame.Belief {
			check("belief", i, k, frame.Belief[i], 0.0005)
		}
		for i := range frame.Movers {
			check("movers", 2*i, k, frame.Movers[i][0], 0.0005)
			check("movers", 2*i+1, k, frame.Movers[i][1], 0.0005)
		}
		for i := range frame.Ranges {
			check("beams", i, k, float64(frame.Ranges[i]), 0.005)
		}
	}
}

// The modules are tested on the same film: see ../jstest/replay-film.test.mjs.
func TestFilmOfTheModuleTests(t *testing.T) {
	const golden = "testdata/film.txt"
	text, err := pack(sample(50), 1, true)
	if err != nil {
		t.Fatal(err)
	}
	if *update {
		if err := os.WriteFile(golden, []byte(text+"\n"), 0o666); err != nil {
			t.Fatal(err)
		}
	}
	kept, err := os.ReadFile(golden)
	if err != nil {
		t.Fatal(err)
	}
	head, columns := unpacked(t, string(bytes.TrimSpace(kept)))
	wantHead, want := unpacked(t, text)
	if !reflect.DeepEqual(head, wantHead) || !reflect.DeepEqual(columns, want) {
		t.Errorf("%s holds another film; go test ./web/replay -update writes it anew", golden)
	}
}

func TestWhatDoesNotFitIsThinned(t *testing.T) {
	f := sample(4000)
	all, err := fit(f, 1<<30)
	if err != nil {
		t.Fatal(err)
	}
	last := len(all) + 1
	for room := len(all); room > 3000; room = room * 2 / 3 {
		text, err := fit(f, room)
		if err != nil {
			break
		}
		head, columns := unpacked(t, text)
		ticks := columns["tick"][0]
		if len(text) > room || ticks[0] != 0 || ticks[len(ticks)-1] != float64(f.Length) {
			t.Errorf("%d bytes for %d, from tick %v to %v of %d", len(text), room, ticks[0], ticks[len(ticks)-1], f.Length)
		}
		if len(text) > last {
			t.Error("less room, more bytes")
		}
		last = len(text)
		if head["bearings"] == nil {
			t.Error("the bearings went with the beams")
		}
	}
	if last > len(all)/8 {
		t.Errorf("it was thinned from %d to %d bytes only", len(all), last)
	}
	if _, err := fit(f, 500); err == nil {
		t.Error("it fits into nothing")
	}
}

func TestStrangeNumbersDoNotSpread(t *testing.T) {
	f := sample(3)
	f.Frames[1].Models[0] = Body{math.NaN(), math.Inf(1), math.Inf(-1), 1e300}
	text, err := pack(f, 1, true)
	if err != nil {
		t.Fatal(err)
	}
	_, columns := unpacked(t, text)
	after := f.Frames[2].Models[0]
	for name, want := range map[string]float64{"robot.x": after.X, "robot.y": after.Y, "robot.heading": after.Heading, "robot.gap": after.Gap} {
		if got := columns[name][0][2]; math.Abs(got-want) > 0.001 {
			t.Errorf("%s after it is %v, was %v", name, got, want)
		}
	}
}

func TestFilmsThatAreNone(t *testing.T) {
	for what, spoil := range map[string]func(*Film){
		"no frames":       func(f *Film) { f.Frames = nil },
		"no modes":        func(f *Film) { f.Modes = nil },
		"two models":      func(f *Film) { f.Models = f.Models[:2] },
		"a mover more":    func(f *Film) { f.Movers = append(f.Movers, Mover{Radius: 1}) },
		"a beam more":     func(f *Film) { f.Bearings = append(f.Bearings, 1) },
		"frames mixed up": func(f *Film) { f.Frames[0], f.Frames[1] = f.Frames[1], f.Frames[0] },
	} {
		f := sample(3)
		spoil(f)
		if err := Write(io.Discard, f); err == nil {
			t.Errorf("a film with %s is written", what)
		}
	}
}
