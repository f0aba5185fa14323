package csvfile

import (
	"errors"
	"slices"
	"strings"
	"testing"

	"bentray/io/cloud"
)

// wantLetters is a check that takes letters only.
func wantLetters(text []byte) error {
	if strings.ContainsAny(string(text), "0123456789") {
		return errors.New("has a digit, want letters")
	}
	return nil
}

const checkedText = "x,y,z,a,b\n1,2,3,p,q\n4,5,6,r,7\n7,8,9,s,t\n"

func TestCheckStopsAtItsRow(t *testing.T) {
	f, err := openText("a.csv", checkedText, Options{}, 0)
	if err != nil {
		t.Fatal(err)
	}
	_, err = rewrite(f, cloud.Request{Texts: []int{3, 4}, Checks: []func([]byte) error{nil, wantLetters}}, [3]int{0, 1, 2})
	if want := "a.csv: line 3: b has a digit, want letters"; err == nil || err.Error() != want {
		t.Errorf("got %v, want %s", err, want)
	}
}

// TestCheckDiverts wants no text of a diverted row among those of the others.
func TestCheckDiverts(t *testing.T) {
	f, err := openText("a.csv", checkedText, Options{Divert: true}, 0)
	if err != nil {
		t.Fatal(err)
	}
	r, err := rewrite(f, cloud.Request{Texts: []int{3, 4}, Checks: []func([]byte) error{nil, wantLetters}}, [3]int{0, 1, 2})
	if err != nil || len(r.rejects) != 1 || r.rejects[0].Line != 3 || r.rejects[0].Reason != "b has a digit, want letters" {
		t.Fatalf("got rejects %v, %v", r.rejects, err)
	}
	if !slices.Equal(r.texts[0], []string{"p", "s"}) || !slices.Equal(r.texts[1], []string{"q", "t"}) {
		t.Errorf("got texts %q", r.texts)
	}
}
