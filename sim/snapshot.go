package sim

import (
	"leeway/sim/drive"
	"leeway/sim/floor"
	"leeway/sim/logic"
	"leeway/sim/ring"
)

// CopyFrom makes r stand exactly where src stands: stepping both from there gives
// the same hashes. It keeps r's memory, so that one Run can be brought back to
// many places; a zero Run will do. It is how the tape goes back in time.
func (r *Run) CopyFrom(src *Run) {
	if r == src {
		return
	}
	world, rg, dr, en := r.world, r.ring, r.drive, r.engine
	if world == nil {
		world, rg, dr, en = new(floor.World), new(ring.Ring), new(drive.Drive), new(logic.Engine)
	}
	world.CopyFrom(src.world)
	rg.CopyFrom(src.ring)
	dr.CopyFrom(src.drive)
	en.CopyFrom(src.engine)
	edits := append(r.edits[:0], src.edits...)
	switches := append(r.switches[:0], src.switches...)
	contacts := append(r.contacts[:0], src.contacts...)
	*r = *src
	r.world, r.ring, r.drive, r.engine = world, rg, dr, en
	r.edits, r.switches, r.contacts = edits, switches, contacts
	r.input.Scan = rg.Scan()
}
