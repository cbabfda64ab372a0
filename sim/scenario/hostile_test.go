package scenario

import (
	"bytes"
	"fmt"
	"runtime"
	"strings"
	"testing"
	"time"
)

// TestHostileFiles: nothing that fits the size limit takes long to refuse or to accept.
func TestHostileFiles(t *testing.T) {
	fill := func(head, unit, tail string, times int) []byte {
		var b bytes.Buffer
		b.WriteString(head)
		for i := range times {
			if i > 0 {
				b.WriteByte(',')
			}
			b.WriteString(strings.ReplaceAll(unit, "#", fmt.Sprint(i)))
		}
		b.WriteString(tail)
		return b.Bytes()
	}
	open := `{"leeway": 1, "start": {"x_m": 1, "y_m": 1}, "goal": {"x_m": 11, "y_m": 7}, "floor": {"width_m": 400, "height_m": 8, `
	for _, c := range []struct {
		name, want string // want "": accepted
		text       []byte
	}{
		{"nothing but brackets", "levels deep", bytes.Repeat([]byte{'['}, MaxBytes)},
		{"nothing but braces", "levels deep", bytes.Repeat([]byte(`{"a":`), MaxBytes/5)},
		{"nothing but spaces", "empty", bytes.Repeat([]byte{' '}, MaxBytes)},
		{"too long", "longer than 4 MB", bytes.Repeat([]byte{' '}, MaxBytes+1)},
		{"a long text", "characters long", []byte(extended(`"name": "` + strings.Repeat("x", MaxBytes-200) + `"`))},
		{"a long number", "must be between", []byte(extended(`"seed": ` + strings.Repeat("9", 300)))},
		{"a very long number", "too large", []byte(extended(`"seed": ` + strings.Repeat("9", MaxBytes-200)))},
		{"a very long fraction", "", []byte(extended(`"robot": {"speed_m_s": 0.` + strings.Repeat("3", MaxBytes-200) + `}`))},
		{"many unknown fields", "more than 100 fields", fill(`{"leeway": 1, `, `"u#": 0`, `}`, 300_000)},
		{"many objects of unknown fields", "and ", fill(open+`"walls": [`, `{"pionts_m": 0, "points": 1}`, `]}}`, 59_000)},
		{"many values", "more than 1000000 values", fill(open+`"walls": [`, `0`, `]}}`, 2_000_000)},
		{"many wrong values", "may hold at most", fill(open+`"solids": [`, `0`, `]}}`, 900_000)},
		{"many walls", "may hold at most", fill(open+`"walls": [`, `{}`, `]}}`, 60_001)},
		{"many pieces", "straight pieces", fill(open+`"walls": [`, `{"points_m": [[9,2],[9,3],[9,4]]}`, `]}}`, 30_001)},
		{"many crossing solids", "and ", fill(open+`"solids": [`, `{"corners_m": [[5,5],[6,6],[6,5],[5,6]]}`, `]}}`, 5_000)},
		{"solids of very many corners", "may hold at most 200", fill(open+`"solids": [{"corners_m": [`, `[5,#]`, `]}]}}`, 300_000)},
		{"every wall there may be", "", fill(open+`"walls": [`, `{"points_m": [[9,2],[9,3]]}`, `]}}`, MaxPieces)},
		{"walls that grow in print", "canonical text", fill(open+`"walls": [`, `{"points_m": [[9.12345678901,2.12345678901],[9.12345678901,3]]}`, `]}}`, MaxPieces-10)},
		{"ids meant to collide", "", fill(open+`"walls": [`+string(fill("", `{"id":"w3#","points_m":[[9,2],[9,3]]}`, ",", 30_000)), `{"points_m":[[9,2],[9,3]]}`, `]}}`, 30_000)},
		{"every mover there may be", "", fill(open+`"movers": [`, `{"radius_m": 1, "route_m": [[9,2],[#,3]]}`, `]}}`, MaxMovers)},
		{"every edit there may be", "", append(fill(open+`"walls": [`, `{"points_m": [[9,2],[9,3]]}`, `]}, "edits": [`, 40_000),
			fill("", `{"tick": #, "what": "solid", "id": "w40000", "to_m": [9, 2]}`, `]}`, MaxEdits)...)},
		{"movers on the start", "no room", fill(open+`"movers": [`, `{"radius_m": 1, "route_m": [[1,2],[#,3]]}`, `]}}`, MaxMovers)},
	} {
		if testing.Short() && len(c.text) > 200_000 { // slow machines, the race detector
			continue
		}
		var before, after runtime.MemStats
		runtime.ReadMemStats(&before)
		start := time.Now()
		_, err := Parse(c.text)
		took := time.Since(start)
		runtime.ReadMemStats(&after)
		if c.want == "" && err != nil || c.want != "" && (err == nil || !strings.Contains(err.Error(), c.want)) {
			t.Errorf("%s: %.300v, want %q", c.name, err, c.want)
		}
		allocated := (after.TotalAlloc - before.TotalAlloc) >> 20
		t.Logf("%-32s %7d kB %6d ms %5d MB allocated", c.name, len(c.text)>>10, took.Milliseconds(), allocated)
		if took > 10*time.Second || allocated > 1000 {
			t.Errorf("%s takes %v and %d MB", c.name, took, allocated)
		}
		if err != nil && len(err.Error()) > 100_000 {
			t.Errorf("%s: a report of %d bytes", c.name, len(err.Error()))
		}
	}
}

// large is about as large as a file can be: every wall there may be.
func large(tb testing.TB) []byte {
	s := New(400, 300)
	for i := range MaxPieces - 4 {
		x, y := 2+float64(i%300), 2+float64(i/300)
		s.Floor.Walls = append(s.Floor.Walls, Wall{Points: []Point{{x, y}, {x + 0.25, y + 0.5}}})
	}
	s.normalise()
	return s.Print()
}

func BenchmarkParse(b *testing.B) {
	for name, text := range map[string][]byte{"small": mustParse(b, everything).Print(), "large": large(b)} {
		b.Run(name, func(b *testing.B) {
			b.SetBytes(int64(len(text)))
			b.ReportAllocs()
			for b.Loop() {
				if _, err := Parse(text); err != nil {
					b.Fatal(err)
				}
			}
		})
	}
}

func BenchmarkPrint(b *testing.B) {
	for name, text := range map[string][]byte{"small": mustParse(b, everything).Print(), "large": large(b)} {
		s := mustParse(b, string(text))
		b.Run(name, func(b *testing.B) {
			b.ReportAllocs()
			for b.Loop() {
				s.Print()
			}
		})
	}
}

func BenchmarkEncode(b *testing.B) {
	s := mustParse(b, everything)
	b.ReportAllocs()
	for b.Loop() {
		s.Encode()
	}
}

func BenchmarkSetNumber(b *testing.B) {
	s := mustParse(b, everything)
	b.ReportAllocs()
	for b.Loop() {
		if err := s.SetNumber("robot.speed_m_s", 0.5); err != nil {
			b.Fatal(err)
		}
	}
}
