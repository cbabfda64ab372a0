package live

import (
	"encoding/json"
	"errors"
	"fmt"
	"math"
	"strings"
	"unicode"
	"unicode/utf8"
)

// message is what a viewer may say.
type message struct {
	Kind string `json:"kind"`

	// drag
	What string  `json:"what"`
	ID   string  `json:"id"`
	X    float64 `json:"x"`
	Y    float64 `json:"y"`
	Done bool    `json:"done"`

	// number, choice, speed
	Path  string          `json:"path"`
	Value json.RawMessage `json:"value"`

	Tick *int64 `json:"tick"` // seek
	On   *bool  `json:"on"`   // shadows

	number float64 // Value of a number or speed
	choice string  // Value of a choice
}

// parseMessage reads a viewer's message. The error is for the viewer.
func parseMessage(data []byte) (*message, error) {
	var m message
	if err := json.Unmarshal(data, &m); err != nil {
		return nil, errors.New("that message is not JSON of the kind that Leeway understands")
	}
	switch m.Kind {
	case "play", "pause", "tick", "back", "restart", "resync":
	case "seek":
		if m.Tick == nil {
			return nil, errors.New("a seek says which tick to look at")
		}
	case "shadows":
		if m.On == nil {
			return nil, errors.New("the shadows are to be on or off")
		}
	case "drag":
		if math.Abs(m.X) > farAway || math.Abs(m.Y) > farAway {
			return nil, errors.New("that place is out of this world")
		}
	case "speed", "number":
		if err := json.Unmarshal(m.Value, &m.number); err != nil || string(m.Value) == "null" {
			return nil, fmt.Errorf("the value of a %s is a number", m.Kind)
		}
	case "choice":
		if err := json.Unmarshal(m.Value, &m.choice); err != nil || string(m.Value) == "null" {
			return nil, errors.New("the value of a choice is one of its options")
		}
	default:
		return nil, errors.New("that message is of no kind that Leeway understands")
	}
	return &m, nil
}

// farAway, in metres, is beyond any floor.
const farAway = 1e6

// note is a message of one sentence to a viewer.
type note struct {
	Kind  string `json:"kind"`
	About string `json:"about,omitempty"`
	Text  string `json:"text"`
}

func (n note) bytes() []byte {
	b, err := json.Marshal(n)
	if err != nil {
		panic("live: three strings cannot be written: " + err.Error())
	}
	return b
}

// problem says that something could not be done; about is the path of a field,
// "drag", or "message".
func problem(about, text string) []byte { return note{"problem", about, sentence(text)}.bytes() }

// notice says what has been done that may surprise.
func notice(text string) []byte { return note{Kind: "notice", Text: sentence(text)}.bytes() }

// ended says that there is nothing more to come.
func ended(text string) []byte { return note{Kind: "ended", Text: sentence(text)}.bytes() }

// sentence gives a text a capital letter and a full stop.
func sentence(s string) string {
	r, n := utf8.DecodeRuneInString(s)
	if n == 0 {
		return s
	}
	s = string(unicode.ToUpper(r)) + s[n:]
	if !strings.ContainsAny(s[len(s)-1:], ".!?") {
		s += "."
	}
	return s
}
