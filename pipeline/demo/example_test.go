package demo_test

import (
	"context"
	"fmt"
	"log"
	"os"

	"bentray/pipeline"
	"bentray/pipeline/demo"
	"bentray/pipeline/job"
)

func Example() {
	folder, err := os.MkdirTemp("", "demo")
	if err != nil {
		log.Fatal(err)
	}
	defer os.RemoveAll(folder)
	cove, river, pool, err := demo.Write(folder)
	if err != nil {
		log.Fatal(err)
	}
	for _, survey := range []*demo.Survey{cove, river, pool} {
		j, err := job.Load(survey.Job)
		if err != nil {
			log.Fatal(err)
		}
		if _, err := pipeline.Run(context.Background(), j, pipeline.Options{}); err != nil {
			log.Fatal(err)
		}
		comparison, err := demo.Compare(survey)
		if err != nil {
			log.Fatal(err)
		}
		fmt.Println(comparison.Points, "points, doing nothing:", comparison.All.Raw.ZMax > 1, "corrected:", comparison.Verify())
	}
	// Output:
	// 200000 points, doing nothing: true corrected: <nil>
	// 59809 points, doing nothing: true corrected: <nil>
	// 32410 points, doing nothing: true corrected: <nil>
}
