package main

import (
	"errors"
	"fmt"
	"path/filepath"
	"strconv"
	"strings"

	"bentray/pipeline"
	"bentray/pipeline/demo"
)

type demoCommand struct {
	Folder string `arg:"" help:"The folder to write to: a new or an empty one, or that of an earlier demo."`
}

func (demoCommand) Help() string {
	return `Three made-up surveys, a cove and a river by laser and a pool in a drone's images, are written with their job files, corrected by these jobs, and held against the truth and against doing nothing; the images also against the usual remedies. The whole takes a few seconds and some 100 MB of disk.

Example:

    bentray demo demo-out

Exit codes: 0 done, and the correction meets the truth; 1 it does not, or the files cannot be written; 3 some tiles failed; 64 the folder holds something else, nothing was written; 130 interrupted.`
}

// Run writes the surveys, corrects them and reports.
func (c *demoCommand) Run(s *streams) error {
	cove, river, pool, err := demo.Write(c.Folder)
	if err != nil {
		return err
	}
	for i, survey := range []*demo.Survey{cove, river, pool} {
		if i > 0 {
			fmt.Fprintln(s.out)
		}
		if err := runSurvey(s, survey); err != nil {
			return err
		}
	}
	printPlaces(s, cove, river, pool)
	fmt.Fprintf(s.out, "\nTry next\n  bentray plan %s\n  bentray run %[1]s --redo\n  bentray surface %s --png %s\n  bentray plan %s\n",
		cove.Job, river.Job, filepath.Join(c.Folder, "surface.png"), pool.Job)
	return nil
}

// runSurvey corrects one survey and reports.
func runSurvey(s *streams, survey *demo.Survey) error {
	comparison, seconds, err := correctSurvey(s, survey)
	if err != nil {
		return err
	}
	fmt.Fprintf(s.out, "%s: %s points in %s (%s), corrected in %.1f s\n\n",
		survey.Title, grouped(survey.Points), plural(len(survey.Tiles), "tile"), formats(survey.Tiles), seconds)
	printOutcomes(s, comparison)
	if len(survey.Remedies) > 0 {
		err = compareRemedies(s, survey, comparison)
	} else {
		printErrors(s, comparison)
	}
	if err := errors.Join(err, comparison.Verify()); err != nil {
		return err
	}
	printRest(s, survey)
	return nil
}

// correctSurvey runs a survey's job and compares what it made with the truth.
func correctSurvey(s *streams, survey *demo.Survey) (c *demo.Comparison, seconds float64, err error) {
	j, err := loadJob(survey.Job)
	if err != nil {
		return nil, 0, err
	}
	summary, err := pipeline.Run(s.ctx, j, pipeline.Options{Redo: true})
	if err != nil {
		return nil, 0, err
	}
	if err := verdict(summary); err != nil {
		printFailures(s, summary)
		return nil, 0, err
	}
	c, err = demo.Compare(survey)
	return c, summary.Seconds, err
}

// formats counts tiles by format.
func formats(tiles []string) string {
	parquet := 0
	for _, name := range tiles {
		if strings.HasSuffix(name, ".parquet") {
			parquet++
		}
	}
	if parquet == 0 {
		return "CSV"
	}
	return fmt.Sprintf("%d CSV, %d Parquet", len(tiles)-parquet, parquet)
}

// meanings says why points of the demo have their outcomes.
var meanings = map[string]string{
	"corrected":  "under water: put back where the bed is",
	"outside":    "beyond the water polygon, or in its hole around the rock",
	"dry":        "on the shore, at or above the water level",
	"no_origin":  "measured in a gap of the trajectory: not guessed",
	"no_surface": "measured in a gap of the gauge: not guessed",
	"few_rays":   "known from one image alone, which tells no depth",
	"invalid":    "rows without coordinates",
}

func printOutcomes(s *streams, c *demo.Comparison) {
	for _, o := range outcomeRows(c.Outcomes) {
		fmt.Fprintf(s.out, "  %-10s %8s  %4.1f %%  %s\n", o.name, grouped(o.count), o.percent, meanings[o.name])
	}
	if c.Unexpected == 0 {
		fmt.Fprintf(s.out, "  Each point has the outcome that the simulation gives it, and each row is there.\n")
	}
}

// printErrors shows the errors of the corrected points, before and after.
func printErrors(s *streams, c *demo.Comparison) {
	fmt.Fprintf(s.out, "\nError of the %s corrected points against the truth (z: minus is too deep)\n", grouped(c.All.Points))
	printBands(s, c, "doing nothing, in metres", 1, 3, func(b *demo.Band) demo.Errors { return b.Raw })
	printBands(s, c, "corrected, in millimetres", 1000, 2, func(b *demo.Band) demo.Errors { return b.Corrected })
}

// printBands shows one kind of errors by depth; scale is the number of printed
// units in a metre.
func printBands(s *streams, c *demo.Comparison, head string, scale float64, decimals int, pick func(*demo.Band) demo.Errors) {
	fmt.Fprintf(s.out, "\n  %-27s|  height z                 |  plan\n", head)
	fmt.Fprintf(s.out, "  %-14s %11s |%8s %8s %8s |%8s %8s %8s\n", "true depth, m", "points", "bias", "rms", "largest", "mean", "rms", "largest")
	for i := range c.Bands {
		b := &c.Bands[i]
		printBand(s, fmt.Sprintf("%3.0f to %2.0f", b.From, b.To), b.Points, pick(b), scale, decimals)
	}
	printBand(s, "all bands", c.All.Points, pick(&c.All), scale, decimals)
}

func printBand(s *streams, name string, points int64, e demo.Errors, scale float64, decimals int) {
	fmt.Fprintf(s.out, "  %-14s %11s |", name, grouped(points))
	for _, v := range []float64{e.ZBias, e.ZRMS, e.ZMax} {
		fmt.Fprintf(s.out, "%8s ", fixed(scale*v, decimals))
	}
	fmt.Fprintf(s.out, "|%8s %8s %8s\n", fixed(scale*e.PlanMean, decimals), fixed(scale*e.PlanRMS, decimals), fixed(scale*e.PlanMax, decimals))
}

// fixed writes a number with so many decimals, and 0 without a sign.
func fixed(v float64, decimals int) string {
	text := strconv.FormatFloat(v, 'f', decimals, 64)
	if strings.Trim(text, "-0.") == "" {
		return strings.TrimPrefix(text, "-")
	}
	return text
}

// printRest says what the correction leaves.
func printRest(s *streams, survey *demo.Survey) {
	switch {
	case survey.Waterline != "":
		fmt.Fprint(s.out, `
  What is left is rounding, and some tenths of a millimetre of the level: the surface
  is a plane fitted to a waterline with 4 mm of noise and 12 % of blunders up to 2 m,
  and a gauge lifts it as the river rises. Zones hold a side channel of its own level
  and a brackish reach.
`)
	case survey.Cameras != "":
		fmt.Fprint(s.out, `
  vertical multiplies depths by the ratio of indices, as if all images were taken from
  straight above; average takes the mean of what each image would give by itself; intersect
  bends the lines from the images to the raw point, though the rays that made it passed it by.
  invert finds the point whose bent rays the software would have put where the raw point is.
  What it leaves is rounding: half a millimetre of the cloud, and a third more in depth.
`)
	default:
		fmt.Fprint(s.out, `
  What is left is rounding: the tiles hold whole millimetres, like many clouds.
  In a real survey the level, the index and the sensor's own errors come on top.
`)
	}
}

func printPlaces(s *streams, cove, river, pool *demo.Survey) {
	fmt.Fprintf(s.out, "\nFiles\n")
	slash := string(filepath.Separator)
	for _, f := range [][2]string{
		{cove.Job, "the job: what is corrected, with which water, surface and rays"},
		{cove.Raw + slash, "the tiles as measured"},
		{cove.Trajectory, "where the laser was, with a gap"},
		{cove.Polygons, "the extent of the water"},
		{cove.Corrected + slash, "the corrected tiles, a receipt beside each"},
		{cove.Truth + slash, "where each point really is, row by row as the tiles, in CSV"},
		{river.Job, "the river's job; its tiles and their truth lie beside it"},
		{river.Waterline, "the water's edge on both banks, with blunders"},
		{river.Polygons, "zones: their water, and a level"},
		{river.Gauge, "the level over time, with a gap"},
		{pool.Job, "the pool's job; the jobs of the remedies lie beside it"},
		{pool.Cameras, "where each image was taken from, its angles and its size"},
	} {
		fmt.Fprintf(s.out, "  %-*s  %s\n", len(river.Waterline), f[0], f[1])
	}
}
