// Package page writes the report of a comparison as one HTML page, to be read on a
// screen, printed on A4 and signed.
//
// The page stands alone: its style and its pictures are in it, it has no script, and
// a content security policy forbids it to load anything, so that it opens from any
// disk and tells no one. Names and texts that come from files are escaped. It has no
// date but the one that a person writes beside a signature: equal reports give equal
// bytes. Its size is bounded: pictures take samples, and long lists end with how much
// there is more, which stands in the figures as JSON.
package page
