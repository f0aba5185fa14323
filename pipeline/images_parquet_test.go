package pipeline

import (
	"fmt"
	"strings"
	"testing"
)

// In Parquet a wrong view is named by its row, and ids are texts in both files.
func TestImagesInParquet(t *testing.T) {
	for _, test := range []struct {
		name, cloud, cameras string
		types                map[string]string
		want                 string
	}{
		{"unknown", "x,y,z,views\n5,6,-9,a b\n5,6,-9,a c\n", "camera,x,y,z\na,0,0,60\nb,20,5,60\n", nil, `row 2: views has an unknown id: camera "c" is none of the 2 known, want their ids, with blanks or ";" between`},
		{"numbers", "x,y,z,views\n5,6,-9,1 2\n5,6,-9,2\n", "camera,x,y,z\n1,0,0,60\n2,20,5,60\n", map[string]string{"camera": "INT64"}, `cameras.parquet: column "camera" is INT64, want a text (BYTE_ARRAY)`},
		{"texts of numbers", "x,y,z,views\n5,6,-9,1 2\n5,6,-9,2\n", "camera,x,y,z\n1,0,0,60\n2,20,5,60\n", map[string]string{"camera": "text"}, ""},
		{"one number a point", "x,y,z,views\n5,6,-9,2\n5,6,-9,1\n", "camera,x,y,z\n1,0,0,60\n2,20,5,60\n", map[string]string{"camera": "text", "views": "INT32"}, `raw/a.parquet: column "views" is INT32, want a text (BYTE_ARRAY)`},
	} {
		t.Run(test.name, func(t *testing.T) {
			folder := t.TempDir()
			files{"raw/a.parquet": parquetOf(t, test.cloud, 0, test.types), "cameras.parquet": parquetOf(t, test.cameras, 0, test.types)}.write(t, folder)
			s, err := Run(t.Context(), loadJob(t, folder, inFormat(imageJob, "parquet")+seaWater+"[surface]\nlevel = 0\n"), Options{})
			is := fmt.Sprint(err)
			if err == nil {
				is = s.Files[0].Error
			}
			if !strings.HasSuffix(is, test.want) || test.want == "" && is != "" {
				t.Errorf("the file says %q, want %q", is, test.want)
			}
		})
	}
}
