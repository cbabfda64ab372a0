package report

import (
	"fmt"
	"math"
	"strconv"
	"strings"

	"leeway/sim"
	"leeway/sim/drive"
	"leeway/sim/ring"
	"leeway/sim/shadow"
	"leeway/sim/steer"
	"leeway/web/page"
)

// traits says of each model, in the order of Columns, what it has: every
// idealisation and every imperfection, as they are when the run starts.
func (f *Finished) traits() ([]page.ReportRow, error) {
	c, err := f.Scenario.Config()
	if err != nil {
		return nil, err
	}
	rows := []page.ReportRow{
		{Label: "Motion"}, {Label: "Steering"}, {Label: "Wheels"}, {Label: "Delays"}, {Label: "Sight"}, {Label: "Noise"}, {Label: "Position"},
	}
	for _, w := range Columns {
		run, err := sim.NewOn(f.floor, shadow.Config(c, w))
		if err != nil {
			return nil, err
		}
		rc := run.Config()
		for i, text := range []string{motion(rc), steering(rc), wheels(rc), delays(rc), sight(rc), noise(&rc.Ring), position(rc)} {
			rows[i].Cells = append(rows[i].Cells, page.ReportCell{Text: text})
		}
	}
	return rows, nil
}

func motion(c *sim.Config) string {
	switch c.Drive.Model {
	case drive.Point:
		return "goes wherever it is told, at once and without turning"
	case drive.Unicycle:
		return "must turn before it goes; drives and turns at once as it is told"
	}
	text := fmt.Sprintf("two driven wheels %s m apart; must turn before it goes", short(c.Drive.Track))
	if !limited(c) && !delayed(c) {
		text = "must turn before it goes; drives and turns at once as it is told"
	}
	for _, s := range []struct {
		what  string
		scale float64
	}{{"track", c.Drive.TrackScale}, {"left wheel", c.Drive.LeftScale}, {"right wheel", c.Drive.RightScale}} {
		if s.scale != 0 && s.scale != 1 {
			text += fmt.Sprintf("; %s %s × what it believes", s.what, short(s.scale))
		}
	}
	return text
}

func steering(c *sim.Config) string {
	switch {
	case c.Drive.Model == drive.Point:
		return "none needed"
	case c.Steer.Rule == steer.LookAhead:
		return fmt.Sprintf("a point %s m ahead of the axle follows the plan", short(c.Steer.Ahead))
	}
	law := [...]string{"slowing by the cosine of the error", "at full speed meanwhile", fmt.Sprintf("standing beyond %s°", short(degrees(c.Steer.TurnBeyond)))}[c.Steer.Speed]
	return fmt.Sprintf("turns toward where it is to go with a gain of %s/s, %s", short(c.Steer.Gain), law)
}

func wheels(c *sim.Config) string {
	if c.Drive.Model == drive.Point {
		return "none"
	}
	slip := ""
	if s := c.Drive.Slip; s > 0 {
		slip = fmt.Sprintf("; wheels slip by %s mm over 1 m", short(math.Round(1e5*math.Sqrt(s))/100))
	}
	if !limited(c) {
		return "no limits" + slip
	}
	var limits []string
	if c.Drive.MaxWheelSpeed > 0 {
		limits = append(limits, fmt.Sprintf("%s rad/s (%s m/s)", short(c.Drive.MaxWheelSpeed), short(c.Drive.MaxWheelSpeed*c.Drive.WheelRadius)))
	}
	if c.Drive.MaxWheelAccel > 0 {
		limits = append(limits, short(c.Drive.MaxWheelAccel)+" rad/s²")
	}
	gives := [...]string{"keeps the curve", "keeps the turn", "is clipped by itself"}[c.Steer.Saturation]
	return "at most " + strings.Join(limits, " and ") + "; a wheel at its limit " + gives + slip
}

func limited(c *sim.Config) bool {
	return c.Drive.Model == drive.TwoWheels && (c.Drive.MaxWheelSpeed > 0 || c.Drive.MaxWheelAccel > 0)
}

func delayed(c *sim.Config) bool {
	return c.Drive.Model == drive.TwoWheels && (c.Drive.Lag > 0 || c.Drive.DeadTime > 0)
}

func delays(c *sim.Config) string {
	if !delayed(c) {
		return "none: it does at once as it is told"
	}
	return fmt.Sprintf("a lag of %s s after a dead time of %s s", short(c.Drive.Lag), short(c.Drive.DeadTime))
}

func sight(c *sim.Config) string {
	g := &c.Ring
	period := short(float64(g.Period) * c.Tick)
	if g.AllRound {
		text := fmt.Sprintf("all round: %d beams out to %s m", ring.FanSize, short(g.Max))
		if g.Noiseless {
			text += " and the exact distance of the nearest thing"
		}
		return text + fmt.Sprintf(", every %s s", period)
	}
	text := fmt.Sprintf("%d beams from %s m out to %s m, every %s s", len(g.Bearings), short(g.Min), short(g.Max), period)
	if g.InTurn {
		text += ", one after the other"
	}
	if g.Cone > 0 {
		text += fmt.Sprintf(", each a cone of %s°", short(degrees(g.Cone)))
	}
	return text
}

func noise(g *ring.Config) string {
	if g.Noiseless {
		return "none"
	}
	text := fmt.Sprintf("σ of %s m", short(g.NoiseBase))
	if g.NoiseGain > 0 {
		text += fmt.Sprintf(" plus %s %% of the range", short(100*g.NoiseGain))
	}
	if g.Dropout > 0 {
		text += fmt.Sprintf("; %s %% of echoes lost", short(100*g.Dropout))
	}
	if g.Random > 0 {
		text += fmt.Sprintf("; %s %% of readings random", short(100*g.Random))
	}
	if g.Quantum > 0 {
		text += fmt.Sprintf("; steps of %s m", short(g.Quantum))
	}
	return text
}

func position(c *sim.Config) string {
	d := &c.Drive
	if !d.DeadReckoning {
		return "knows its true pose"
	}
	var text string
	switch {
	case d.Model == drive.Point:
		text = "counts its way"
	case d.CountsPerTurn > 0:
		text = fmt.Sprintf("counts its way, %d counts a turn", d.CountsPerTurn)
	default:
		text = "counts its way with perfect encoders"
	}
	if d.FixEvery > 0 {
		return text + fmt.Sprintf("; a fix every %s s, good to %s m and %s°", short(d.FixEvery), short(d.FixNoise), short(degrees(d.FixTurnNoise)))
	}
	return text + "; no fix ever"
}

// shared says what all models have in common: what none of them knows of.
func (f *Finished) shared() []string {
	c := f.Run.Config()
	touch := "A touch scrapes: the hull slides along without friction, and the wheels go on counting."
	if c.OnContact == sim.EndsTheRun {
		touch = "A touch ends the run."
	}
	out := []string{
		fmt.Sprintf("The floor is flat; what stands on it is rigid, known to nobody beforehand, and met by a disc of radius %s m.", short(c.Hull)),
		"Nothing has mass: what limits the machine are the wheels, lag and dead time above. It neither tips nor skids; its wheels slip by no more than is said.",
		"Beams see every material alike, in one plane: there is no glass, nothing black, nothing that hangs over, and no beam takes another's echo.",
		touch,
		fmt.Sprintf("The logic decides every %s s and takes no time to do so; time goes in steps of %s s.", short(float64(c.DecideEvery)*c.Tick), short(c.Tick)),
	}
	if len(c.Floor.Movers) > 0 {
		out = append(out, "Movers keep to their timetable, whatever is in their way.")
	}
	return append(out, "This is one run with one seed. Another seed gives other noise, and may give another outcome.")
}

func short(v float64) string { return strconv.FormatFloat(math.Round(v*1e6)/1e6, 'f', -1, 64) }

func degrees(rad float64) float64 { return rad * 180 / math.Pi }
