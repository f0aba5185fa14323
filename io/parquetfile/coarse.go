package parquetfile

import (
	"encoding/binary"
	"fmt"
	"math"
)

// finestStep is the step in metres that FLOAT coordinates may have: below it
// their rounding is lost in any survey's own noise.
const finestStep = 0.001

// checkStep refuses FLOAT coordinates whose statistics show a step that is too
// coarse; where there are none it is found while decoding.
func (f *File) checkStep() error {
	for _, c := range f.raw {
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

// checkDecodedStep refuses FLOAT coordinates with a value whose distance to the
// next FLOAT exceeds the finest step.
func (c *cursor) checkDecodedStep(values []float64) error {
	if c.leaf.kind != floats || c.file.options.Coarse {
		return nil
	}
	largest := 0.0
	for _, v := range values {
		if a := math.Abs(v); a > largest && a <= math.MaxFloat32 {
			largest = a
		}
	}
	unit := c.file.options.Unit
	if unit == 0 {
		unit = 1
	}
	if step := floatStep(largest) * unit; step > finestStep {
		return fmt.Errorf("%s: column %q is FLOAT, whose step at %g is %.2g m, want at most %g m; store it as DOUBLE or accept this with coarse = true in [input]",
			c.file.path, c.leaf.name, largest, step, finestStep)
	}
	return nil
}

// floatStep returns the distance of v to the next larger float32 magnitude.
func floatStep(v float64) float64 {
	f := float32(v)
	return math.Abs(float64(math.Nextafter32(f, math.MaxFloat32)) - float64(f))
}
