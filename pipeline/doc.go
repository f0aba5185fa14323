// Package pipeline runs and plans jobs: it finds the files, joins reading,
// correction and writing over chunks of rows, and keeps the batch's promises.
//
// The way of one file:
//
//	Next -> Decode -> correct -> Encode -> Put -> commit, receipt
//
// Next and Put are in order, one goroutine each a file; what stands between
// them runs side by side over chunks. Up to Options.Workers files are open at
// once and as many chunks are in work, over all files together. Chunks come
// from one pool, which bounds the memory whatever the size of a file.
//
// What is written does not depend on the number of workers: chunks are cut by
// the input's bytes, written in order, and counted in ways that do not depend
// on order.
//
// The rooms: files.go finds inputs and names outputs; survey.go reads what all
// files of a job share; correction.go corrects one chunk; columns.go lays out
// what is added; flow.go moves the chunks of a file; file.go does one file;
// run.go does them all; lock.go keeps others out; plan.go looks ahead.
package pipeline
