package main

import (
	"context"
	"errors"
	"fmt"
	"math"
	"slices"
	"strings"

	"github.com/spf13/cobra"
	"gonum.org/v1/plot/vg"

	"keelfall/cmd/internal/report"
	"keelfall/configs"
	"keelfall/plots"
	"keelfall/solver/heat"
	"keelfall/solver/race"
	"keelfall/solver/state"
)

// newHistoryCmd prints and draws the column's thermal history.
func newHistoryCmd(s Streams) *cobra.Command {
	var asked string
	cmd, _ := newPartCmd(s, "history FILE", "Temperature through time: events, markers' pressure-temperature paths, clocks",
		func(ctx context.Context, o *options, p *race.Problem, st *state.State) (*part, error) {
			past, err := history(ctx, p, asked)
			if err != nil {
				return nil, o.atEvent(err)
			}
			past.Stand(st)
			drawn := &plots.Thermal{History: past.History, Shown: past.Shown, Events: p.Events, Fit: p.GeothermFit, HasTimeZero: p.HasTimeZero, TimeZero: p.TimeZero}
			drawn.Elevation, drawn.Force = past.Elevations()
			return &part{name: "history", text: report.HistoryPage(past), value: report.History(past),
				table: report.HistoryTable(past), more: report.HistoryTables(past),
				figures: func(w vg.Length) ([]plots.Figure, error) {
					f, err := plots.History(drawn, w)
					if err != nil || !drawn.HasPaths() {
						return []plots.Figure{f}, err
					}
					paths, err := plots.Paths(drawn, w)
					return []plots.Figure{f, paths}, err
				},
				warnings: past.Warnings()}, nil
		})
	cmd.Long = `Follows the column's temperature from the start to the end of drip.window: conduction,
stretching and the events of the experiment, with melting and reaction where rocks have
them. Prints what happens, the column against time, how high it stands by isostasy and
the force that drives, every marker's path, when clocks close, and the geotherm's fit to
samples where it was fitted.

The root neither drips nor is it cut by shear zones here: keelfall run judges that.`
	cmd.Example = `  keelfall history arc.yaml --out arc
  keelfall history arc.yaml --times "0 Myr,5 Myr,85 Ma"`
	cmd.Flags().StringVar(&asked, "times", "", "times of the geotherms: \"0 Myr,5 Myr,85 Ma\" (default: the start, the ends of events and of the window, at most 6)")
	return cmd
}

// atEvent words an event that is not possible, before the run or on its way, by file and line.
func (o *options) atEvent(err error) error {
	var wrong *heat.EventError
	if !errors.As(err, &wrong) {
		return err
	}
	e, _, again := o.load()
	if again != nil {
		return errors.Join(err, again)
	}
	return e.AtEvent(wrong.Index, wrong.Err.Error())
}

// history runs a problem's thermal history; asked is a list of times or empty.
func history(ctx context.Context, p *race.Problem, asked string) (*report.Past, error) {
	plan, err := race.HeatPlan(p)
	if err != nil {
		return nil, err
	}
	plan.Events = p.Events // those that do nothing too, so that an index is the experiment's
	window := p.Drip.Window
	shown, err := timesOf(p, asked)
	if err != nil {
		return nil, usageError{err}
	}
	if _, err := heat.Begin(plan); err != nil { // before time passes: the plan's mistakes are the input's
		return nil, usageError{err}
	}
	past := &report.Past{Problem: p, Shown: shown, Rows: rowTimes(window)}
	h, err := heat.Run(ctx, plan, window, merged(window, shown, past.Rows, contactTimes(p.Events, window)))
	if err != nil {
		return nil, err
	}
	past.History = h
	return past, past.ReadClocks()
}

// timesOf are the times asked for, in order, or the usual ones.
func timesOf(p *race.Problem, list string) ([]float64, error) {
	if list == "" {
		return usualTimes(p.Events, p.Drip.Window), nil
	}
	var out []float64
	for _, s := range strings.Split(list, ",") {
		s = strings.TrimSpace(s)
		t, err := timeOf(p, s)
		if err != nil {
			return nil, fmt.Errorf("--times: %w", err)
		}
		if !(t >= 0 && t <= p.Drip.Window*(1+1e-12)) {
			return nil, fmt.Errorf("--times: %s lies outside the window, 0 to %.6g Myr; drip.window sets its end", s, p.Drip.Window/report.Myr)
		}
		out = append(out, math.Min(t, p.Drip.Window))
	}
	slices.Sort(out)
	return slices.Compact(out), nil
}

// timeOf reads a time since the start or an age.
func timeOf(p *race.Problem, s string) (float64, error) {
	if !strings.HasSuffix(s, "Ma") {
		return configs.ParseQuantity(s, "duration")
	}
	if !p.HasTimeZero {
		return 0, errors.New(s + " is an age and the experiment has no time-zero; write Myr since the start")
	}
	age, err := configs.ParseQuantity(s, "age")
	return p.TimeZero - age, err
}

// mostGeotherms is how many geotherms are drawn where nobody asked for times.
const mostGeotherms = 6

// usualTimes are the start, the end of every event and the window's end; where those
// are too many, the ones that lie closest to another go.
func usualTimes(events []heat.Event, window float64) []float64 {
	out := []float64{0}
	for i := range events {
		e := &events[i]
		t := e.To
		if e.Verb == "intrude" && e.Times > 1 {
			t = e.From + float64(e.Times-1)*e.Every
		}
		if t > 0 && t < window {
			out = append(out, t)
		}
	}
	slices.Sort(out)
	out = append(slices.Compact(out), window)
	for len(out) > 2 {
		least, at := math.Inf(1), 0
		for i := 1; i < len(out)-1; i++ {
			if gap := math.Min(out[i]-out[i-1], out[i+1]-out[i]); gap < least {
				least, at = gap, i
			}
		}
		if len(out) <= mostGeotherms && least > 0.01*window {
			break
		}
		out = slices.Delete(out, at, at+1)
	}
	return out
}

// rowTimes are about ten times, round in Myr, and the window's end.
func rowTimes(window float64) []float64 {
	least := window / report.Myr / 10
	step := math.Pow(10, math.Floor(math.Log10(least)))
	for _, m := range []float64{1, 2, 2.5, 5, 10} {
		if m*step >= least*(1-1e-9) {
			step *= m
			break
		}
	}
	var out []float64
	for i := 0; float64(i)*step*report.Myr < window*(1-1e-6); i++ {
		out = append(out, float64(i)*step*report.Myr)
	}
	return append(out, window)
}

// contactTimes are times at which the contacts are drawn: evenly through the window,
// and just before and at every instant at which rock comes or goes at once; of very many
// sheets at some, because each time costs a whole geotherm.
func contactTimes(events []heat.Event, window float64) []float64 {
	const parts, most = 60, 100
	var out []float64
	for i := range parts + 1 {
		out = append(out, window*float64(i)/parts)
	}
	for i := range events {
		e := &events[i]
		for k := 0; k < max(1, e.Times); k += 1 + e.Times/most {
			t := e.From + float64(k)*e.Every
			out = append(out, t, e.To)
			if e.Verb == "intrude" || e.Verb == "remove" {
				out = append(out, t-5e-4*window)
			}
		}
	}
	return out
}

// merged sorts times within the window into one list. What is within a billionth of the
// window of a time of an earlier list is that time, though rounded differently.
func merged(window float64, lists ...[]float64) []float64 {
	var all []float64
	for _, t := range slices.Concat(lists...) {
		there := slices.ContainsFunc(all, func(u float64) bool { return math.Abs(t-u) <= 1e-9*window })
		if t >= 0 && t <= window && !there {
			all = append(all, t)
		}
	}
	slices.Sort(all)
	return all
}
