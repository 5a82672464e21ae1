package store

import (
	"bytes"
	"fmt"
	"testing"
)

// One edit of a sheet, kept on the disk: a draft of the size a full sheet has.
func BenchmarkUpdate(b *testing.B) {
	s := openNew(b)
	d := create1(b, s, "d")
	body := bytes.Repeat([]byte("x"), 4000)
	for i := 0; b.Loop(); i++ {
		var err error
		d, err = s.Update(b.Context(), d.ID, d.Version, Change{Draft: fmt.Appendf(body, "%d", i)})
		if err != nil {
			b.Fatal(err)
		}
	}
}

// One revision with the results of 24 points.
func BenchmarkSaveRevision(b *testing.B) {
	s := openNew(b)
	d := create1(b, s, "d")
	n := NewRevision{DesignJSON: make([]byte, 4000), Draft: make([]byte, 4000), Points: make([]byte, 60_000), Findings: make([]byte, 2000)}
	for b.Loop() {
		if _, err := s.SaveRevision(b.Context(), d.ID, d.Version, n); err != nil {
			b.Fatal(err)
		}
	}
}

// A start on a data file with revisions, all of it checked.
func BenchmarkOpen(b *testing.B) {
	for _, revisions := range []int{0, 1000} {
		b.Run(fmt.Sprintf("revisions=%d", revisions), func(b *testing.B) {
			path := dataFile(b)
			s := openAt(b, path)
			d := create1(b, s, "d")
			for range revisions {
				if _, err := s.SaveRevision(b.Context(), d.ID, d.Version, NewRevision{Points: make([]byte, 60_000)}); err != nil {
					b.Fatal(err)
				}
			}
			closeNow(b, s)
			for b.Loop() {
				closeNow(b, openAt(b, path))
			}
		})
	}
}
