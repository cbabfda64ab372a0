package studies

import (
	"bytes"
	"encoding/gob"

	"leeway/sim/study"
)

// Part is results of a study on their way into a store and back: Keep them as they
// come, and hand them to the next [study.Runner] as Known.
type Part struct {
	Keys    []study.Key
	Results []study.Result
}

// Add adds a result.
func (p *Part) Add(k study.Key, r study.Result) {
	p.Keys, p.Results = append(p.Keys, k), append(p.Results, r)
}

// Encode packs a part. Numbers keep every bit, infinities too, which JSON has not.
func (p *Part) Encode() ([]byte, error) {
	var b bytes.Buffer
	err := gob.NewEncoder(&b).Encode(p)
	return b.Bytes(), err
}

// DecodeParts unpacks parts, in any order, into what a Runner takes as Known.
func DecodeParts(parts ...[]byte) (map[study.Key]study.Result, error) {
	known := map[study.Key]study.Result{}
	for _, data := range parts {
		var p Part
		if err := gob.NewDecoder(bytes.NewReader(data)).Decode(&p); err != nil {
			return nil, err
		}
		for i := range min(len(p.Keys), len(p.Results)) {
			known[p.Keys[i]] = p.Results[i]
		}
	}
	return known, nil
}
