package sim

import (
	"math"
	"testing"

	"leeway/sim/logic"
)

// No config that passes Check is known to make a pose that is not finite, so the
// watch over it is tested from inside.
func TestANumberThatIsNotFiniteEndsTheRun(t *testing.T) {
	l := logic.Default(logic.DefaultNumbers(0.2, 0.4, 0.1))
	r := &Run{cfg: Config{Logic: l}, engine: logic.New(l)}
	r.pose.Pos.X = math.NaN()
	r.judge()
	if r.measures.Status != Diverged || r.measures.Reason == "" {
		t.Errorf("%v: %q", r.measures.Status, r.measures.Reason)
	}
}
