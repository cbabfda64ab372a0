package live

import (
	"time"

	"leeway/sim"
	"leeway/sim/geom"
	"leeway/sim/shadow"
)

// helloEvery is how often a viewer may be told everything anew on its own wish.
const helloEvery = 250 * time.Millisecond

// joins and leaves run in the session's loop.
func (s *Session) joins(v *viewer) {
	s.viewers[v] = struct{}{}
	s.aloneSince.Store(0)
	v.wantsHello = true
	s.changed = true // the others see one more watching
	s.nextFrame = time.Now()
}

func (s *Session) leaves(v *viewer) {
	delete(s.viewers, v)
	s.dropGrips(v)
	s.changed = true
	if len(s.viewers) == 0 {
		s.aloneSince.Store(time.Now().UnixNano())
	}
}

// tell sends a frame, or a hello, when there is something to tell and it is time.
func (s *Session) tell(now time.Time) {
	if !s.changed && !s.anew || len(s.viewers) == 0 || now.Before(s.nextFrame) {
		return
	}
	if s.nextFrame = s.nextFrame.Add(frameEvery); s.nextFrame.Before(now) {
		s.nextFrame = now.Add(frameEvery)
	}
	s.changed = false
	era := s.eraNow()
	if era != s.era && now.Sub(s.eraAt) >= helloEvery || !s.known().continues(s.told) {
		s.anew = true
	}
	if s.anew {
		s.anew = false
		s.told, s.era, s.eraAt = s.known(), era, now
		hello := s.hello()
		for v := range s.viewers {
			v.putHello(hello)
			v.wantsHello, v.helloAt = false, now
		}
		return
	}
	s.changed = era != s.era // it is told later
	// The frame goes out before a hello to some, so that the next one continues
	// the tape for all of them alike.
	s.fillFrame(s.told)
	s.told = s.known()
	bytes := s.shown.append(nil)
	var hello []byte
	for v := range s.viewers {
		switch {
		case !v.wantsHello:
			v.putFrame(bytes)
		case now.Sub(v.helloAt) < helloEvery:
			v.putFrame(bytes)
			s.changed = true // it is told later
		default:
			if hello == nil {
				hello = s.hello()
			}
			v.putHello(hello)
			v.wantsHello, v.helloAt = false, now
		}
	}
}

// eraNow tells apart the moments between which the tape has a change that a frame
// does not show: of a number, or of the route of a mover.
func (s *Session) eraNow() int {
	n := 0
	for _, e := range s.robot().Edits() {
		if e.Tick > s.tick() {
			break
		}
		if e.Kind == sim.SetNumber || e.Kind == sim.MoveMover {
			n++
		}
	}
	return n
}

// fillFrame makes s.shown say what is the case where the tape is looked at, and
// what of the tape has not been told before.
func (s *Session) fillFrame(before told) {
	set, r, f := s.set(), s.robot(), &s.shown
	o := r.Outcome()
	f.Tick = set.Tick()
	f.Time = float64(f.Tick) * s.dt
	f.Playing, f.Speed, f.Viewers = s.playing, s.speed, len(s.viewers)
	p, b := r.Pose(), r.Belief()
	f.Pose = [3]float64{p.Pos.X, p.Pos.Y, p.Theta}
	f.Belief = [3]float64{b.X, b.Y, b.Theta}
	e := r.Engine()
	f.Mode, f.Side, f.Since, f.Why = e.Mode(), int(e.Side()), e.Since(), r.Why()
	scan := r.Scan()
	f.Ranges, f.Hits = scan.Range, scan.Hit
	f.Gap, f.Leeway = r.Gap(), o.Leeway
	f.Closest = [5]float64{o.LeewayPose.Pos.X, o.LeewayPose.Pos.Y, o.LeewayPoint.X, o.LeewayPoint.Y, o.LeewayAt}
	f.Way, f.Switches, f.Contacts = o.Way, o.Switches, o.Contacts
	f.Saturated, f.Estimate = o.Saturated, o.EstimateError

	f.Movers = f.Movers[:0]
	for i := range s.floor.Movers {
		f.Movers = append(f.Movers, pair(r.World().MoverAt(i)))
	}
	f.Goal = pair(s.place(thing{kind: sim.MoveGoal}))
	f.Moved = f.Moved[:0]
	for _, i := range s.moved {
		at := s.place(thing{sim.MoveSolid, i})
		f.Moved = append(f.Moved, movedSolid{s.floor.Solids[i].ID, at.X, at.Y})
	}
	f.Status, f.Reason, f.Hash = o.Status.String(), o.Reason, o.Hash

	f.Length, f.AtHead = s.tape.Length(), s.tape.AtHead()
	f.fillShadows(set)
	f.fillExits(r)
	f.Verdict.fillModels(set)
	length, why := s.shortestNow()
	f.Verdict.Shortest, f.Verdict.ShortestWhy = length, sentence(why)
	f.Tape.since(before, s.known(), &s.tape.Record, s.models())
}

// models returns how many models the tape has.
func (s *Session) models() int {
	if s.set().Shadows() {
		return int(shadow.Models)
	}
	return 1
}

func pair(v geom.Vec) [2]float64 { return [2]float64{v.X, v.Y} }
