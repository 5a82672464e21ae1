// Package mutants proves that the tests of the physics can fail. It moves each
// constant in the code of budget and of its parts by 1 %, a count by one, and turns
// each sign and comparison, one at a time, and looks whether a test notices: those of
// the package that the change is in, then those of the packages that rely on it.
//
// All mutants are built into one program that is told which of them to be, so that
// trying one costs a run of tests and no build.
package mutants

import (
	"flag"
	"fmt"
	"os"
	"regexp"
	"runtime"
	"sync"
	"testing"
	"time"
)

var (
	part  = flag.String("part", "", "try the mutants of this `part`, such as 3/12; 1/1 are all")
	limit = flag.Duration("limit", 0, "start no mutant after this time")
	say   = flag.Bool("say", false, "say of each mutant what noticed it")
	only  = flag.String("only", "", "try those alone whose names match the `expression`")
)

const list = "../../testdata/mutants.txt"

// TestMutants reads which mutants there are and which are excused and, if asked, tries
// some of them.
func TestMutants(t *testing.T) {
	tree, err := load("../..", "./budget/...")
	if err != nil {
		t.Fatal(err)
	}
	f := find(tree, "lossbook/budget/proof")
	text, err := os.ReadFile(list)
	if err != nil {
		t.Fatal(err)
	}
	reasons, err := excused(string(text))
	if err != nil {
		t.Fatal(list, err)
	}
	known := map[string]bool{}
	for _, m := range f.mutants {
		known[m.key()] = true
	}
	for key := range reasons {
		if !known[key] {
			t.Errorf("excused, but the code has nothing like it:\n%s", key)
		}
	}
	t.Logf("%d mutants, %d of them excused", len(f.mutants), len(reasons))
	if len(f.mutants) < 2000 {
		t.Error("too few to be all")
	}
	if *part != "" {
		judge(t, f, reasons)
	}
}

// judge tries the mutants of a part, and wants those noticed that are not excused, and
// only those.
func judge(t *testing.T, f *finder, reasons map[string]string) {
	mutants, err := divide(f.mutants, *part, *only)
	if err != nil {
		t.Fatal(err)
	}
	c, err := open(f, t.TempDir(), mutants)
	if err != nil {
		t.Fatal(err)
	}
	begun := time.Now()
	tally := map[string]int{}
	each(mutants, func(m *mutant) {
		if *limit > 0 && time.Since(begun) > *limit {
			tally["not tried for want of time"]++
			return
		}
		lock.Unlock()
		start := time.Now()
		noticed, err := c.try(m)
		took := time.Since(start).Seconds()
		lock.Lock()
		if err != nil {
			t.Errorf("%s: %v", m.key(), err)
			return
		}
		what, complaint := verdict(noticed, reasons[m.key()])
		if tally[what]++; complaint != "" {
			t.Errorf("%s (%.1f s):\n%s", complaint, took, m.key())
		} else if *say {
			t.Logf("%s %s (%.1f s): %s", what, noticed, took, m.key())
		}
	})
	t.Logf("part %s: %d mutants, %v, %.0f s", *part, len(mutants), tally, time.Since(begun).Seconds())
	if tally["noticed"] == 0 {
		t.Error("none was noticed: nothing was proved")
	}
}

// verdict says what a mutant counts as, and what is wrong with that: one that no test
// notices needs an excuse, and one that is noticed needs none.
func verdict(noticed, excuse string) (what, complaint string) {
	switch {
	case noticed == "" && excuse == "":
		return "not noticed", "no test notices"
	case noticed == "":
		return "excused", ""
	case excuse != "":
		return "noticed", noticed + " notices what is excused as: " + excuse
	}
	return "noticed", ""
}

var lock sync.Mutex

// each calls do for every mutant, several at a time, holding the lock.
func each(mutants []*mutant, do func(m *mutant)) {
	queue := make(chan *mutant)
	var all sync.WaitGroup
	for range runtime.GOMAXPROCS(0) {
		all.Go(func() {
			for m := range queue {
				lock.Lock()
				do(m)
				lock.Unlock()
			}
		})
	}
	for _, m := range mutants {
		queue <- m
	}
	close(queue)
	all.Wait()
}

// divide takes every n-th mutant, so that each part holds some of all packages.
func divide(all []*mutant, part, only string) (some []*mutant, err error) {
	var k, n int
	if _, err := fmt.Sscanf(part, "%d/%d", &k, &n); err != nil || k < 1 || k > n {
		return nil, fmt.Errorf("-part %q is not like 3/12", part)
	}
	pattern, err := regexp.Compile(only)
	if err != nil {
		return nil, err
	}
	for i, m := range all {
		if i%n == k-1 && pattern.MatchString(m.key()) {
			some = append(some, m)
		}
	}
	return some, nil
}
