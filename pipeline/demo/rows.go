package demo

import (
	"math"
	"path"
	"strconv"
	"strings"
)

const (
	cloudColumns      = "x,y,z,gps_time,intensity,return_number,classification,point_source_id,remark\n"
	truthColumns      = "x,y,z,depth,outcome\n"
	trajectoryColumns = "gps_time,x,y,z\n"
)

// Classes of LAS 1.4 R15 (ASPRS 2019), tables 17 and 18.
const (
	classGround     = 2
	classBathymetry = 40
)

// tile is a cloud and its truth, row by row. The truth is CSV, the cloud CSV or
// Parquet as its name says.
type tile struct {
	name   string  // below the folder of tiles, with slashes
	header string  // of a CSV tile
	cloud  []byte  // of a CSV tile, without its header
	table  columns // of a Parquet tile
	truth  []byte
	rows   int
}

// truthName names the truth of a tile below its folder.
func truthName(tile string) string {
	return strings.TrimSuffix(tile, path.Ext(tile)) + ".csv"
}

// newTiles returns the tiles of the lines to and fro, cut from west to east, and
// that of the line across. Half of the lines' tiles are Parquet.
func newTiles() []*tile {
	return namedTiles("tile_01.csv", "tile_02.parquet", "tile_03.csv", "tile_04.parquet", path.Join("cross_line", "tile_05.csv"))
}

func namedTiles(names ...string) []*tile {
	var tiles []*tile
	for _, name := range names {
		tiles = append(tiles, &tile{name: name, header: cloudColumns, truth: []byte(truthColumns)})
	}
	return tiles
}

// tileOf returns the place of a shot's tile.
func tileOf(l *flightLine, s *shot) int {
	if l.folder != "" {
		return 4
	}
	return min(max(int((s.apparent.x-cornerX)/(widthM/4)), 0), 3)
}

// add appends a shot.
func (t *tile) add(s *shot) {
	if t.isParquet() {
		t.table.add(s)
	} else {
		t.cloud = s.appendRow(t.cloud)
	}
	t.truth = appendTruth(t.truth, s.bed, s.depth, s.outcome)
	t.rows++
}

// appendRow appends the row of the cloud. A lost shot has no coordinates.
func (s *shot) appendRow(b []byte) []byte {
	if s.lost {
		b = append(b, ",,"...)
	} else {
		b = appendVec(b, s.apparent, 3)
	}
	b = appendFixed(append(b, ','), takeOffS*1e6+s.timeUS, 6)
	for _, n := range s.numbers() {
		b = strconv.AppendInt(append(b, ','), int64(n), 10)
	}
	b = append(b, ',')
	if strings.Contains(s.remark, ",") {
		b = append(append(append(b, '"'), s.remark...), '"')
	} else {
		b = append(b, s.remark...)
	}
	return append(b, '\n')
}

// numbers are intensity, return_number, classification and point_source_id.
func (s *shot) numbers() [4]int32 {
	class, returnNumber := int32(classGround), int32(1)
	if s.depth > 0 {
		class, returnNumber = classBathymetry, 2
	}
	return [4]int32{int32(s.intensity), returnNumber, class, int32(s.line)}
}

// appendTruth appends a row of the truth.
func appendTruth(b []byte, bed vec, depth float64, outcome string) []byte {
	b = appendVec(b, bed, 4)
	b = appendNumber(append(b, ','), depth, 4)
	b = append(append(b, ','), outcome...)
	return append(b, '\n')
}

// appendTrajectory appends the records of a line that there are.
func (l *flightLine) appendTrajectory(b []byte) []byte {
	for i, p := range l.position {
		if l.isRecorded(i) {
			b = appendFixed(b, (takeOffS+l.startS())*recordsPerS+int64(i), 1)
			b = append(appendVec(append(b, ','), p, 3), '\n')
		}
	}
	return b
}

func appendVec(b []byte, v vec, decimals int) []byte {
	b = appendNumber(b, v.x, decimals)
	b = appendNumber(append(b, ','), v.y, decimals)
	return appendNumber(append(b, ','), v.z, decimals)
}

func appendNumber(b []byte, v float64, decimals int) []byte {
	return appendFixed(b, int64(math.Round(v*math.Pow10(decimals))), decimals)
}

// appendFixed appends n parts of 10^-decimals; decimals is above 0.
func appendFixed(b []byte, n int64, decimals int) []byte {
	if n < 0 {
		b, n = append(b, '-'), -n
	}
	scale := int64(math.Pow10(decimals))
	b = append(strconv.AppendInt(b, n/scale, 10), '.')
	for part := scale / 10; part > 0; part /= 10 {
		b = append(b, byte('0'+n/part%10))
	}
	return b
}
