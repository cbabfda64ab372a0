package replay

import "encoding/json"

// Film is a whole run as a replay shows it: in metres, seconds, radians and ticks,
// with every word already written. It knows nothing of how the run came about.
type Film struct {
	Name     string   `json:"name"`
	Purpose  string   `json:"purpose"`
	Asked    string   `json:"asked"` // a sentence
	Big      string   `json:"big"`   // the headline: "0.05 m"
	Of       string   `json:"of"`    // "of leeway, where 0.10 m is asked."
	Words    string   `json:"words"` // "This run falls short."
	Short    bool     `json:"short"`
	Ending   string   `json:"ending"` // how it ended, a sentence
	Failures []string `json:"failures"`
	Ways     []string `json:"ways"` // about the ways, a sentence each
	Brief    string   `json:"brief"`
	Advice   []Advice `json:"advice"`
	Caution  string   `json:"caution"`
	Link     string   `json:"link"` // opens the scenario; empty: it is too long
	Seed     string   `json:"seed"`
	Hash     string   `json:"hash"`
	Version  string   `json:"version"`
	Date     string   `json:"date"`

	Tick   float64    `json:"tick_s"` // s
	Length int64      `json:"length"` // ticks
	Bounds [4]float64 `json:"bounds"` // x0, y0, x1, y1

	Start    [3]float64 `json:"start"` // x, y, heading
	Goal     [3]float64 `json:"goal"`  // x, y, radius
	Hull     float64    `json:"hull"`
	Track    float64    `json:"track"` // between the wheels; 0: it has none
	Wheel    float64    `json:"wheel"` // radius
	Mount    float64    `json:"mount"`
	RangeMax float64    `json:"range_max"`
	Bearings []float64  `json:"bearings"` // of the beams
	Least    float64    `json:"least"`    // the leeway that is asked
	Top      float64    `json:"top"`      // the largest gap worth showing

	Modes  []Mode  `json:"modes"`
	Solids []Solid `json:"solids"`
	Movers []Mover `json:"movers"`
	Edits  []Edit  `json:"edits"` // in order of tick
	Models []Model `json:"models"`
	Table  []Row   `json:"table"`
	Spans  []Span  `json:"spans"` // in order of tick
	Whys   []Why   `json:"whys"`  // likewise
	Marks  []Mark  `json:"marks"` // likewise
	Pin    *Pin    `json:"pin"`

	Frames []Frame `json:"-"`
}

// The models, as they are counted everywhere in a film.
const (
	Robot = iota
	Point
	Unicycle
	Models
)

// Advice is one statement about the numbers of a design.
type Advice struct {
	Text  string `json:"text"`
	Holds bool   `json:"holds"`
}

// Mode is one mode and how it is painted: "goal", "wall", "avoid", "done", "fail" or "other".
type Mode struct {
	Name string `json:"name"`
	Look string `json:"look"`
}

// Solid is one thing that stands on the floor: "wall", "polygon" or "disc".
type Solid struct {
	Shape  string
	Points [][2]float64
	Radius float64
}

// MarshalJSON writes how many points there are; they themselves are packed.
func (s Solid) MarshalJSON() ([]byte, error) {
	return json.Marshal(struct {
		Shape  string  `json:"shape"`
		Points int     `json:"points"`
		Radius float64 `json:"radius,omitempty"`
	}{s.Shape, len(s.Points), s.Radius})
}

// Mover is the shape of one thing that moves by itself; frames say where it is.
type Mover struct {
	Radius  float64    `json:"radius,omitempty"`
	Half    [2]float64 `json:"half"`
	Heading float64    `json:"heading"`
}

// Edit is something that a person moved.
type Edit struct {
	Tick  int64   `json:"tick"`
	What  string  `json:"what"` // "goal", "solid", "mover" or "robot"
	Index int     `json:"index"`
	X     float64 `json:"x"` // where its anchor went: a solid's first point
	Y     float64 `json:"y"`
}

// Model is one of the models side by side.
type Model struct {
	Name   string `json:"name"`
	End    int64  `json:"end"`    // tick
	Ending string `json:"ending"` // "arrived"
	Good   bool   `json:"good"`   // the ending
}

// Row is one measure of all models, in the order point, unicycle, robot.
type Row struct {
	Label string `json:"label"`
	Cells []Cell `json:"cells"`
}

// Cell is one measure of one model.
type Cell struct {
	Text string `json:"text"`
	Bad  bool   `json:"bad,omitempty"`
}

// Span is a stretch of one mode of a model; it lasts to the next of that model.
type Span struct {
	Who  int   `json:"who"`
	Tick int64 `json:"tick"`
	Mode int   `json:"mode"`
	Side int   `json:"side"` // of the wall: 1 left, −1 right
}

// Why says why a model went into a mode.
type Why struct {
	Who  int    `json:"who"`
	Tick int64  `json:"tick"`
	Mode int    `json:"mode"`
	Text string `json:"text"`
}

// Mark is something that happened: "parting", "contact", "chatter", "ceiling", "end" or "change".
type Mark struct {
	Kind string `json:"kind"`
	Who  int    `json:"who"`
	Tick int64  `json:"tick"`
	Text string `json:"text"`
}

// Pin is the closest place.
type Pin struct {
	Hull  [2]float64 `json:"hull"`
	Solid [2]float64 `json:"solid"`
	Tick  int64      `json:"tick"`
	Text  string     `json:"text"` // "0.05 m"
	More  string     `json:"more"` // "closest, at 0:05.8", where there is room
}

// Frame is one moment.
type Frame struct {
	Tick   int64
	Models [Models]Body
	Belief [3]float64 // where the robot believed itself to be: x, y, heading
	Movers [][2]float64
	Ranges []float32 // what the robot's beams read
}

// Body is where a model is.
type Body struct{ X, Y, Heading, Gap float64 }
