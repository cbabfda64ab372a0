package sim

import (
	"fmt"
	"math"

	"leeway/sim/drive"
	"leeway/sim/floor"
	"leeway/sim/geom"
	"leeway/sim/logic"
)

const (
	// farthest is how far, in metres, anything solid is looked for.
	farthest = 1000
	// lookBeyond is how much farther than the smallest leeway so far the
	// nearest solid is looked for, in metres. More makes one answer last longer
	// and cost more; 0.5 m is near the best on floors from 50 to 50,000 walls.
	lookBeyond = 0.5
	// roomGuard, in metres, keeps rounding in the budget of room from hiding a
	// touch: far above rounding, far below anything that matters.
	roomGuard = 1e-7
	// overlap is the depth, in metres, from which a hull counts as pushed into
	// something rather than resting on it.
	overlap = 1e-6
	// A robot stands still below these, m/s and rad/s.
	restSpeed, restTurn = 0.01, 0.05
)

// measureLeeway brings the smallest gap up to date. It asks the floor only when
// the budget of room says that the answer could matter.
func (r *Run) measureLeeway() {
	m := &r.measures
	if r.room > r.cfg.Hull+max(m.Leeway, 0)+roomGuard {
		return
	}
	within := min(r.cfg.Hull+max(m.Leeway, 0)+lookBeyond, farthest)
	n, ok := r.world.Nearest(r.pose.Pos, within)
	if !ok {
		r.room = within - roomGuard
		return
	}
	r.room = n.Distance - roomGuard
	gap := n.Distance - r.cfg.Hull
	if gap < m.Leeway {
		m.Leeway, m.LeewayAt = gap, r.time()
		m.LeewayPose, m.LeewayPoint = r.pose, n.Point
	}
	if gap < -overlap {
		r.touch(floor.Contact{Point: n.Point, Ref: n.Ref})
	}
}

const hashSeed = 0x6c65657761790001

func mix(h, x uint64) uint64 {
	h ^= x
	h *= 0x9e3779b97f4a7c15
	return h ^ h>>29
}

// hashTick folds the state after this tick into the state hash.
func (r *Run) hashTick() {
	e := r.drive.Estimate()
	w := r.drive.Turning()
	h := r.measures.Hash
	for _, f := range [...]float64{r.pose.Pos.X, r.pose.Pos.Y, r.pose.Theta, e.X, e.Y, e.Theta, w.Left, w.Right, r.u.X, r.u.Y} {
		h = mix(h, math.Float64bits(f+0)) // +0 makes one zero of −0 and 0
	}
	r.measures.Hash = mix(h, uint64(r.engine.Mode())<<8|uint64(uint8(r.engine.Side())))
}

// judge ends the run when it is time, and says why.
func (r *Run) judge() {
	m := &r.measures
	switch mode := r.cfg.Logic.Modes[r.engine.Mode()]; {
	case !r.pose.Pos.Finite() || math.IsNaN(r.pose.Theta) || math.IsInf(r.pose.Theta, 0):
		r.end(Diverged, "The robot's pose stopped being a finite number: a number of the scenario is far out of proportion.")
	case r.cfg.OnContact == EndsTheRun && m.Contacts > 0:
		c := r.contacts[len(r.contacts)-1]
		r.end(Struck, fmt.Sprintf("The hull touched something at %.2f, %.2f after %s, and a touch ends this run.", c.Point.X, c.Point.Y, seconds(c.Time)))
	case mode.Ending == logic.EndsArrived && r.atRest():
		off := r.fromGoal()
		if off <= r.cfg.GoalRadius {
			r.end(Arrived, fmt.Sprintf("The robot came to rest %.2f m from the goal after %s.", off, seconds(r.time())))
		} else {
			r.end(Missed, fmt.Sprintf("The robot stopped where it believed the goal to be, and stood %.2f m from it (%.2f m is asked).", off, r.cfg.GoalRadius))
		}
	case mode.Ending == logic.EndsGaveUp && r.atRest():
		why := ""
		if s, ok := r.engine.LastSwitch(); ok {
			why = ": " + r.cfg.Logic.Why(s)
		}
		r.end(GaveUp, fmt.Sprintf("The robot gave up after %s, %.2f m from the goal%s", seconds(r.time()), r.fromGoal(), why))
	case float64(r.tick-r.since)*r.dt >= r.cfg.Asked.Within:
		r.end(TimedOut, fmt.Sprintf("After %s the robot was %.2f m from the goal, in %s.", seconds(r.cfg.Asked.Within), r.fromGoal(), mode.Name))
	}
}

// fromGoal returns the true distance from the plan point to the goal.
func (r *Run) fromGoal() float64 {
	p := r.pose.Pos.AddScaled(r.input.Ahead, geom.Heading(r.pose.Theta))
	return r.goal.Sub(p).Norm()
}

func (r *Run) atRest() bool {
	if r.cfg.Drive.Model == drive.Point {
		return r.u == geom.Vec{}
	}
	v, w := r.drive.Twist()
	return math.Abs(v) < restSpeed && math.Abs(w) < restTurn
}

func (r *Run) end(s Status, reason string) {
	r.measures.Status, r.measures.Reason = s, reason
	r.ended = r.tick
}

func seconds(t float64) string { return fmt.Sprintf("%.1f s", t) }

// String returns the status as it is written on screen and in files.
func (s Status) String() string {
	names := [...]string{"running", "arrived", "timed out", "struck", "gave up", "missed", "diverged"}
	if int(s) < len(names) {
		return names[s]
	}
	return fmt.Sprintf("status %d", uint8(s))
}
