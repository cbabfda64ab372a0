package floor

// WithMovers returns a map of the same solids with other movers. It shares the
// index of m, so that it costs next to nothing: an index holds what stands.
// The error is [Faults].
func (m *Map) WithMovers(movers []Mover) (*Map, error) {
	if err := check(Config{Movers: movers}); err != nil {
		return nil, err
	}
	n := *m
	n.movers = make([]timetable, len(movers))
	for i, v := range movers {
		n.movers[i] = newTimetable(v)
	}
	return &n, nil
}

// ResetOn is Reset on another map: w becomes what m.NewWorld returns, in the
// memory it has.
func (w *World) ResetOn(m *Map) { w.stand(m) }
