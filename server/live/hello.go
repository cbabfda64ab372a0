package live

import (
	"encoding/json"
	"math"

	"leeway/server/brief"
	"leeway/server/watch"
	"leeway/sim/drive"
	"leeway/sim/geom"
	"leeway/sim/shadow"
	"leeway/sim/steer"
)

// hello is everything that a viewer needs to draw a session.
type hello struct {
	Kind        string       `json:"kind"`
	Session     string       `json:"session"`
	Name        string       `json:"name"`
	Purpose     string       `json:"purpose"`
	File        string       `json:"file"`
	Tick        float64      `json:"tick_s"`
	Playing     bool         `json:"playing"`
	Speed       float64      `json:"speed"`
	Viewers     int          `json:"viewers"`
	IdleMinutes float64      `json:"idle_minutes"`
	Bounds      [4]float64   `json:"bounds"`
	Start       [3]float64   `json:"start"`
	Goal        [3]float64   `json:"goal"`
	Hull        float64      `json:"hull"`
	Track       float64      `json:"track"`
	Wheel       float64      `json:"wheel"`
	Mount       float64      `json:"mount"`
	RangeMax    float64      `json:"range_max"`
	Bearings    []float64    `json:"bearings"`
	Motion      string       `json:"motion"`
	AllRound    bool         `json:"all_round"`
	Modes       []helloMode  `json:"modes"`
	Solids      []helloSolid `json:"solids"`
	Movers      []helloMover `json:"movers"`
	Brief       []brief.Part `json:"brief"`
	Asked       helloAsked   `json:"asked"`

	Shadows  bool          `json:"shadows"`
	Advice   []helloAdvice `json:"advice"`
	Ceiling  *float64      `json:"ceiling"`   // m/s, of the look-ahead rule; null: there is none
	WheelMax *float64      `json:"wheel_max"` // rad/s; null: wheels have no limit

	// Written by hand, see record.go and frame.go.
	Tape  json.RawMessage `json:"tape"`
	Frame json.RawMessage `json:"frame"`
}

type helloAdvice struct {
	About string `json:"about"`
	Holds bool   `json:"holds"`
	Text  string `json:"text"`
}

type helloMode struct {
	Name string `json:"name"`
	Look string `json:"look"`
}

type helloSolid struct {
	ID     string       `json:"id"`
	Shape  string       `json:"shape"`
	Points [][2]float64 `json:"points"`
	Radius float64      `json:"radius,omitempty"`
	Fixed  bool         `json:"fixed,omitempty"`
}

type helloMover struct {
	ID      string       `json:"id"`
	Radius  float64      `json:"radius"`
	Half    [2]float64   `json:"half"`
	Heading float64      `json:"heading"`
	Route   [][2]float64 `json:"route"`
	Loop    bool         `json:"loop"`
}

type helloAsked struct {
	Within   float64 `json:"within_s"`
	Leeway   float64 `json:"leeway_m"`
	Switches int     `json:"switches"` // −1: not asked
}

// hello returns the message. It holds all that is known of the tape, and a frame
// that adds nothing to it.
func (s *Session) hello() []byte {
	r, c := s.robot(), s.robot().Config()
	goal := s.place(thing{kind: goalKind})
	h := hello{
		Kind: "hello", Session: s.id, Name: s.sc.Name, Purpose: s.sc.Purpose, File: string(s.canonical()),
		Tick: s.dt, Playing: s.playing, Speed: s.speed, Viewers: len(s.viewers),
		IdleMinutes: s.lab.opt.Idle.Minutes(),
		Bounds:      [4]float64{0, 0, s.sc.Floor.Width, s.sc.Floor.Height},
		Start:       [3]float64{c.Start.Pos.X, c.Start.Pos.Y, c.Start.Theta},
		Goal:        [3]float64{goal.X, goal.Y, c.GoalRadius},
		Hull:        c.Hull, Track: c.Drive.Track, Wheel: c.Drive.WheelRadius,
		Mount: c.Ring.Mount, RangeMax: c.Ring.Max, Bearings: rounded(r.Scan().Bearing),
		Motion: motion(c.Drive.Model), AllRound: c.Ring.AllRound,
		Modes: []helloMode{}, Solids: []helloSolid{}, Movers: []helloMover{},
		Brief: brief.Of(s.standing()),
		Asked: helloAsked{c.Asked.Within, c.Asked.Leeway, c.Asked.Switches},
	}
	for i := range c.Logic.Modes {
		m := &c.Logic.Modes[i]
		h.Modes = append(h.Modes, helloMode{m.Name, string(watch.Look(m))})
	}
	for i := range s.floor.Solids {
		solid := r.World().SolidAt(i)
		fixed := i >= len(s.sc.Floor.Walls)+len(s.sc.Floor.Solids) // the border comes last
		h.Solids = append(h.Solids, helloSolid{
			solid.ID, string(watch.Shape(solid.Kind)), pairs(solid.Points, geom.Vec{}), tidy(solid.Radius), fixed,
		})
	}
	for i := range s.floor.Movers {
		m := &s.floor.Movers[i]
		shift := s.place(thing{moverKind, i}).Sub(m.Route[0])
		h.Movers = append(h.Movers, helloMover{
			m.ID, tidy(m.Radius), [2]float64{tidy(m.Half.X), tidy(m.Half.Y)}, tidy(m.Heading), pairs(m.Route, shift), m.Loop,
		})
	}
	h.Shadows, h.Advice = s.set().Shadows(), []helloAdvice{}
	for _, a := range shadow.Advise(*c) {
		h.Advice = append(h.Advice, helloAdvice(a))
	}
	if c.Drive.Model == drive.TwoWheels {
		if c.Steer.Rule == steer.LookAhead {
			h.Ceiling = orNull(c.Steer.Ceiling())
		}
		if c.Drive.MaxWheelSpeed > 0 {
			h.WheelMax = orNull(c.Drive.MaxWheelSpeed)
		}
	}
	all := s.known()
	var whole additions
	whole.since(told{every: all.every}, all, &s.tape.Record, s.models())
	h.Tape = whole.appendWhole(nil, all.every, s.tape.Length())
	s.fillFrame(all)
	s.shown.Moved = s.shown.Moved[:0] // the solids above are where they are now
	h.Frame = s.shown.append(nil)

	b, err := json.Marshal(&h)
	if err != nil {
		// Every number has been checked or tidied.
		s.lab.opt.Log.Error("a hello cannot be written", "session", s.id, "error", err)
		return problem("session", "this session cannot be shown")
	}
	return b
}

func motion(m drive.Model) string {
	switch m {
	case drive.Point:
		return "point"
	case drive.Unicycle:
		return "unicycle"
	}
	return "two_wheels"
}

// orNull returns a number, or nil where there is none.
func orNull(v float64) *float64 {
	if !finite(v) {
		return nil
	}
	v = tidy(v)
	return &v
}

// tidy rounds to what frames are written with, so that a thing is at the same
// place in either.
func tidy(v float64) float64 {
	if !finite(v) {
		return 0
	}
	return math.Round(v*places) / places
}

func rounded(vs []float64) []float64 {
	out := make([]float64, len(vs))
	for i, v := range vs {
		out[i] = tidy(v)
	}
	return out
}

func pairs(vs []geom.Vec, shift geom.Vec) [][2]float64 {
	out := make([][2]float64, len(vs))
	for i, v := range vs {
		v = v.Add(shift)
		out[i] = [2]float64{tidy(v.X), tidy(v.Y)}
	}
	return out
}
