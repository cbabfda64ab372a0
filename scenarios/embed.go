// Package scenarios holds the scenarios that come with Leeway, each of which shows one thing.
// The files are in canonical form; the tests keep them so and run every one to its end.
package scenarios

import (
	"embed"
	"slices"
)

//go:generate go test -run ^TestFiles$ -update

//go:embed *.json
var files embed.FS

// Entry is one shipped scenario: its name in addresses and commands, and its file.
type Entry struct {
	Slug string
	Data []byte
}

// order is the order of display, from the plainest floor to the odd ones.
var order = [...]string{
	"crossing",
	"wall",
	"pocket",
	"doors",
	"office",
	"pillars",
	"cart",
	"passage",
	"sparse",
	"lag",
	"drift",
	"walled",
}

// All returns the shipped scenarios in order of display.
func All() []Entry {
	var out []Entry
	for _, slug := range order {
		e, _ := Find(slug)
		out = append(out, e)
	}
	return out
}

// Find returns the shipped scenario with this slug.
func Find(slug string) (Entry, bool) {
	if !slices.Contains(order[:], slug) {
		return Entry{}, false
	}
	data, err := files.ReadFile(slug + ".json")
	if err != nil {
		return Entry{}, false
	}
	return Entry{slug, data}, true
}
