package main

import (
	"fmt"

	"bentray/pipeline/demo"
)

// solution is what one way to correct a survey leaves.
type solution struct {
	name   string
	pick   func(*demo.Band) demo.Errors
	result *demo.Comparison
}

func corrected(b *demo.Band) demo.Errors { return b.Corrected }
func raw(b *demo.Band) demo.Errors       { return b.Raw }

// compareRemedies runs the remedies of a survey of images and shows what each leaves,
// beside doing nothing and the survey's own correction.
func compareRemedies(s *streams, survey *demo.Survey, own *demo.Comparison) error {
	solutions := []solution{{"raw", raw, own}}
	for _, r := range survey.Remedies {
		c, _, err := correctSurvey(s, survey.With(r))
		if err != nil {
			return err
		}
		solutions = append(solutions, solution{r.Name, corrected, c})
	}
	solutions = append(solutions, solution{"invert", corrected, own})
	printSolutions(s, solutions, own.All.Points)
	printSolutionBands(s, solutions, own.Bands)
	return nil
}

// printSolutions shows the errors of all points, a row for each solution.
func printSolutions(s *streams, solutions []solution, points int64) {
	fmt.Fprintf(s.out, "\nError of the %s corrected points against the truth, in millimetres (z: plus is too shallow)\n\n", grouped(points))
	fmt.Fprintf(s.out, "  %-14s|  height z                     |  plan\n", "")
	fmt.Fprintf(s.out, "  %-14s|%9s %9s %9s |%9s %9s %9s\n", "solve", "bias", "rms", "largest", "mean", "rms", "largest")
	for _, v := range solutions {
		e := v.pick(&v.result.All)
		fmt.Fprintf(s.out, "  %-14s|", v.name)
		for _, m := range []float64{e.ZBias, e.ZRMS, e.ZMax} {
			fmt.Fprintf(s.out, "%9s ", fixed(1000*m, 2))
		}
		fmt.Fprintf(s.out, "|%9s %9s %9s\n", fixed(1000*e.PlanMean, 2), fixed(1000*e.PlanRMS, 2), fixed(1000*e.PlanMax, 2))
	}
}

// printSolutionBands shows the bias in z by depth, a column for each solution.
func printSolutionBands(s *streams, solutions []solution, bands []demo.Band) {
	fmt.Fprintf(s.out, "\n  %-14s %9s |  bias in height z, by depth\n  %-14s %9s |", "", "", "true depth, m", "points")
	for _, v := range solutions {
		fmt.Fprintf(s.out, "%10s", v.name)
	}
	fmt.Fprintln(s.out)
	for i := range bands {
		fmt.Fprintf(s.out, "  %3.0f to %2.0f      %9s |", bands[i].From, bands[i].To, grouped(bands[i].Points))
		for _, v := range solutions {
			fmt.Fprintf(s.out, "%10s", fixed(1000*v.pick(&v.result.Bands[i]).ZBias, 2))
		}
		fmt.Fprintln(s.out)
	}
}
