package logic

import "fmt"

// The names of things as they are written in files, in the order of the
// constants. Names of readings end in their unit.
var (
	behaviourNames = [numBehaviours]string{"stop", "goal_seeking", "wall_following", "avoidance"}
	sideRuleNames  = [numSideRules]string{"better", "left", "right"}
	endingNames    = [numEndings]string{"goes_on", "arrived", "gave_up"}
	relationNames  = [numRelations]string{"below", "at_least"}
	readingNames   = [NumReadings]string{
		"goal_distance_m", "goal_bearing_rad", "nearest_m", "ahead_m", "front_m", "left_m", "right_m",
		"free_way_m", "best_distance_m", "gain_m", "alignment", "time_in_mode_s", "way_in_mode_m", "closed",
		"meet_distance_m", "time_since_meeting_s", "line_offset_m",
	}
)

// String returns the name as written in files.
func (b Behaviour) String() string { return nameOf(behaviourNames[:], b, "behaviour") }

// String returns the name as written in files.
func (r Reading) String() string { return nameOf(readingNames[:], r, "reading") }

// String returns the name as written in files.
func (r SideRule) String() string { return nameOf(sideRuleNames[:], r, "side rule") }

// String returns the name as written in files.
func (e Ending) String() string { return nameOf(endingNames[:], e, "ending") }

// String returns the name as written in files.
func (r Relation) String() string { return nameOf(relationNames[:], r, "relation") }

// String returns "left", "right" or "none".
func (s Side) String() string {
	switch s {
	case LeftSide:
		return "left"
	case RightSide:
		return "right"
	}
	return "none"
}

// BehaviourNamed returns the behaviour with this name.
func BehaviourNamed(name string) (Behaviour, bool) { return named[Behaviour](behaviourNames[:], name) }

// ReadingNamed returns the reading with this name.
func ReadingNamed(name string) (Reading, bool) { return named[Reading](readingNames[:], name) }

// SideRuleNamed returns the side rule with this name.
func SideRuleNamed(name string) (SideRule, bool) { return named[SideRule](sideRuleNames[:], name) }

// EndingNamed returns the ending with this name.
func EndingNamed(name string) (Ending, bool) { return named[Ending](endingNames[:], name) }

// RelationNamed returns the relation with this name.
func RelationNamed(name string) (Relation, bool) { return named[Relation](relationNames[:], name) }

func nameOf[T ~uint8](names []string, i T, what string) string {
	if int(i) < len(names) {
		return names[i]
	}
	return fmt.Sprintf("%s %d", what, uint8(i))
}

func named[T ~uint8](names []string, name string) (T, bool) {
	for i, n := range names {
		if n == name {
			return T(i), true
		}
	}
	return 0, false
}
