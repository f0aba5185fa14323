package pipeline

import (
	"context"
	"crypto/sha256"
	"encoding/binary"
	"encoding/hex"
	"fmt"
	"hash"
	"math"
	"slices"
	"strings"

	"golang.org/x/sync/errgroup"

	"bentray/geo"
	"bentray/io/cloud"
	"bentray/pipeline/receipt"
)

// surfacePoints is what the clouds' own points on the water are used for.
const surfacePoints = "surface points"

// gridOfClouds makes the grid from the clouds' own surface points: all files of
// the job are read, whichever of them a run does, so that tiles agree at their
// seams. The points take part in the fingerprint, the files they came in do not.
func (s *survey) gridOfClouds(ctx context.Context, clouds []input) error {
	parts := s.readSurfacePoints(ctx, clouds)
	if err := ctx.Err(); err != nil {
		return err
	}
	var points geo.SurfacePoints
	var sums, unread []string
	for k := range parts {
		if err := parts[k].err; err != nil {
			unread = append(unread, clouds[k].name+strings.TrimPrefix(err.Error(), clouds[k].path))
			continue
		}
		if parts[k].points.Given() > 0 {
			sums = append(sums, string(parts[k].hash.Sum(nil)))
		}
		points.Join(&parts[k].points)
	}
	classes := s.job.Surface.Grid.Classes
	switch {
	case len(unread) == len(clouds):
		return fmt.Errorf("%s: [surface.grid] classes: none of the clouds can be read: %w", s.job.Path, parts[0].err)
	case points.Given() == 0:
		return fmt.Errorf("%s: [surface.grid] classes: no point of the clouds has a classification of %v", s.job.Path, classes)
	case len(unread) > 0:
		s.cautions = append(s.cautions, fmt.Sprintf("%d of %d clouds could not be read for their surface points: %s", len(unread), len(clouds), firstOf(unread)))
	}
	if err := s.addAuxiliary(surfacePoints, receipt.File{
		Path: fmt.Sprintf("classification %v of the clouds", classes), Bytes: int64(bytesPerPoint * points.Given()), SHA256: jointSum(sums),
	}); err != nil {
		return fmt.Errorf("surface points of classification %v: %w", classes, err)
	}
	if err := s.makeGrid(&points); err != nil {
		return fmt.Errorf("%s: [surface.grid] classes: %w", s.job.Path, err)
	}
	return nil
}

// firstOf lists the first texts for a person.
func firstOf(texts []string) string {
	const most = 3
	list := strings.Join(texts[:min(len(texts), most)], "; ")
	if more := len(texts) - most; more > 0 {
		list += fmt.Sprintf("; and %d more", more)
	}
	return list
}

// jointSum is the SHA-256 of the files' sums, in an order of their own: the names of
// the files do not matter.
func jointSum(sums []string) string {
	slices.Sort(sums)
	sum := sha256.Sum256([]byte(strings.Join(sums, "")))
	return hex.EncodeToString(sum[:])
}

// surfacePart is what one cloud gives to the grid.
type surfacePart struct {
	points geo.SurfacePoints
	hash   hash.Hash // of the points: x, y, z (m) and UTC, as they come
	err    error     // then the rest counts for nothing; the file fails by itself when it is done
}

// bytesPerPoint is what is hashed of a surface point.
const bytesPerPoint = 32

// readSurfacePoints reads the clouds' surface points, as many files at once as
// there are workers. Parts come in the order of the clouds.
func (s *survey) readSurfacePoints(ctx context.Context, clouds []input) []surfacePart {
	parts := make([]surfacePart, len(clouds))
	var bytes int64
	for _, in := range clouds {
		bytes += in.bytes
	}
	s.watch.Begin(surfacePoints, len(clouds), bytes)
	var g errgroup.Group
	g.SetLimit(s.workers)
	for k, in := range clouds {
		g.Go(func() error {
			r := surfaceReader{survey: s, hash: sha256.New()}
			err := inFile(in.path, r.read(ctx, in))
			parts[k] = surfacePart{r.points, r.hash, err}
			return nil
		})
	}
	_ = g.Wait() // parts have their errors
	return parts
}

// surfaceReader reads the surface points of one cloud.
type surfaceReader struct {
	*survey
	points  geo.SurfacePoints
	hash    hash.Hash
	request *reading
	class   int
	columns [4][]float64 // x, y, z, UTC of a chunk's surface points
	bytes   []byte
}

// read takes the points of a file.
func (r *surfaceReader) read(ctx context.Context, in input) error {
	if err := ctx.Err(); err != nil {
		return err
	}
	file, err := r.openCloud(in, "")
	if err != nil {
		return err
	}
	defer file.Close()
	columns := file.Columns()
	if r.proves != nil {
		if columns, err = r.ownColumns(columns); err != nil {
			return err
		}
	}
	if err := r.findColumns(columns); err != nil {
		return err
	}
	if r.proves != nil {
		r.request.takeRaw(len(columns))
	}
	if err := file.Begin(r.request.request, cloud.Layout{}, nil); err != nil {
		return err
	}
	return cloud.EachChunk(untilDone{file, ctx}, func(c *cloud.Chunk) {
		r.take(c)
		r.watch.Read(c.Consumed)
	})
}

// findColumns finds x, y, z, classification and, where there is one, the time. The
// checks are those that the file is held to when it is corrected.
func (r *surfaceReader) findColumns(columns []cloud.Column) (err error) {
	q := &reading{}
	r.request = q
	if q.xyz, err = cloud.Coordinates(columns, r.job.Input.Columns); err != nil {
		return err
	}
	for k, unit := range [3]float64{r.plan, r.plan, r.height} {
		if err := checkLength(columns[q.xyz[k]]); err != nil {
			return err
		}
		q.request.Steps[q.number(q.xyz[k])] = finestLength / unit
	}
	if r.class, err = q.need(r.job, columns, "classification", "[surface.grid] classes looks at it"); err != nil {
		return err
	}
	return q.findTime(r.survey, columns)
}

// take adds a chunk's surface points.
func (r *surfaceReader) take(c *cloud.Chunk) {
	r.toScale(c, r.request)
	for k := range r.columns {
		r.columns[k] = r.columns[k][:0]
	}
	for i, v := range c.Numbers[r.class] {
		if !slices.Contains(r.job.Surface.Grid.Classes, int(v)) || v != math.Trunc(v) {
			continue
		}
		utc := math.NaN()
		if r.request.time >= 0 {
			utc = r.times.UTC(c.Numbers[r.request.time][i])
		}
		for k, v := range [...]float64{c.Numbers[0][i] * r.plan, c.Numbers[1][i] * r.plan, c.Numbers[2][i] * r.height, utc} {
			r.columns[k] = append(r.columns[k], v)
		}
	}
	r.points.Add(r.columns[0], r.columns[1], r.columns[2], r.columns[3])
	r.addToHash()
}

// addToHash hashes what the chunk gave, point by point, so that the sum does not
// depend on where chunks end.
func (r *surfaceReader) addToHash() {
	r.bytes = r.bytes[:0]
	for i := range r.columns[0] {
		for k := range r.columns {
			r.bytes = binary.LittleEndian.AppendUint64(r.bytes, math.Float64bits(r.columns[k][i]))
		}
	}
	r.hash.Write(r.bytes)
}

// untilDone is a file that is read until its context is done.
type untilDone struct {
	cloud.Rewriter
	ctx context.Context
}

// Next takes the next rows, or returns the context's error.
func (u untilDone) Next(c *cloud.Chunk) error {
	if err := u.ctx.Err(); err != nil {
		return err
	}
	return u.Rewriter.Next(c)
}
