package parquetfile

import (
	"encoding/binary"
	"fmt"
	"math"
)

// finestStep is the step in metres that FLOAT coordinates may have: below it
// their rounding is lost in any survey's own noise.
const finestStep = 0.001

// finestStep returns it in the unit of the coordinates.
func (o *Options) finestStep() float64 {
	if o.Unit == 0 {
		return finestStep
	}
	return finestStep / o.Unit
}

// checkStep refuses FLOAT columns whose statistics show a step that is too
// coarse; where there are none it is found while decoding.
func (f *File) checkStep() error {
	for _, c := range f.cursors() {
		if c.leaf.kind != floats {
			continue
		}
		for _, g := range f.groups {
			s := g.Columns[c.index].MetaData.Statistics
			if s == nil {
				continue
			}
			for _, b := range [][]byte{s.Min, s.Max, s.MinValue, s.MaxValue} {
				if len(b) != 4 {
					continue
				}
				v := float64(math.Float32frombits(binary.LittleEndian.Uint32(b)))
				if err := c.checkDecodedStep([]float64{v}); err != nil {
					return err
				}
			}
		}
	}
	return nil
}

// checkDecodedStep refuses FLOAT columns with a value whose distance to the next
// FLOAT exceeds the step that was asked for.
func (c *cursor) checkDecodedStep(values []float64) error {
	if c.leaf.kind != floats || c.step == 0 || c.file.options.Coarse {
		return nil
	}
	largest := 0.0
	for _, v := range values {
		if a := math.Abs(v); a > largest && a <= math.MaxFloat32 {
			largest = a
		}
	}
	if step := floatStep(largest); step > c.step {
		return fmt.Errorf("%s: column %q is FLOAT, whose step at %g is %.2g, want at most %.2g; store it as DOUBLE or accept this with coarse = true in [input]",
			c.file.path, c.leaf.name, largest, step, c.step)
	}
	return nil
}

// floatStep returns the distance of v to the next larger float32 magnitude.
func floatStep(v float64) float64 {
	f := float32(v)
	return math.Abs(float64(math.Nextafter32(f, math.MaxFloat32)) - float64(f))
}
