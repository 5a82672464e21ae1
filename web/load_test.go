package web

import (
	"bufio"
	"encoding/json"
	"flag"
	"fmt"
	"io"
	"net/http"
	"net/url"
	"os"
	"os/exec"
	"path/filepath"
	"regexp"
	"slices"
	"strconv"
	"strings"
	"sync"
	"testing"
	"time"

	"lossbook/assets"
	"lossbook/store"
)

// load is how many edits a second TestLoad sends, for ten seconds; without it it sends
// a few, to see that the answers are right.
var load = flag.Int("load", 0, "edits of sheets a second")

// TestLoad edits sheets of the built program, each of many people at a sheet of their
// own. The edits are due at fixed times, whether or not the server keeps up, and what
// is told of an answer counts from when its edit was due: waiting counts.
//
//	go test ./web -count=1 -run '^TestLoad$' -load 200 -v
func TestLoad(t *testing.T) {
	rate, count, people := 40, 60, 6
	if *load > 0 {
		rate, count, people = *load, 10**load, 40
	}
	server := build(t)
	edits := editsOf(t)
	seats := make([]*seat, people)
	for i := range seats {
		seats[i] = server.sit()
	}
	start, times := time.Now(), make([]time.Duration, count)
	var group sync.WaitGroup
	for n, s := range seats {
		group.Go(func() {
			for i := n; i < count; i += people {
				due := start.Add(time.Duration(i) * time.Second / time.Duration(rate))
				time.Sleep(time.Until(due))
				if err := s.edit(edits[i%len(edits)]); err != nil {
					t.Errorf("edit %d: %v", i, err)
					return
				}
				times[i] = time.Since(due)
			}
		})
	}
	group.Wait()
	took := time.Since(start)
	slices.Sort(times)
	t.Logf("%d edits in %.1f s, %d a second asked for: p50 %v, p99 %v, longest %v; memory %s",
		count, took.Seconds(), rate, times[count/2], times[count*99/100], times[count-1], server.memory())
}

// change is one entry changed, and what the answer must then show.
type change struct {
	value   string
	figures []string
}

// editsOf works out what a sheet must show for a few values of one entry.
func editsOf(t *testing.T) []change {
	t.Helper()
	var edits []change
	seen := map[string]bool{}
	for n := range 7 {
		draft := loadDraft(t)
		draft["switch.rds_on"] = strconv.Itoa(10+2*n) + "m"
		kept, _, err := draft.stored()
		if err != nil {
			t.Fatal(err)
		}
		s := standing(draft, store.Design{ID: 1, Version: 1, Draft: kept}, nil)
		v, err := s.model(t.Context())
		if err != nil || v.Answers.Head == nil || v.Answers.Head.Loss == "" {
			t.Fatalf("no figures: %v, %v", s.wrong, err)
		}
		edits = append(edits, change{draft["switch.rds_on"], []string{v.Answers.Head.Efficiency, v.Answers.Head.Loss}})
		seen[v.Answers.Head.Efficiency] = true
	}
	if len(seen) < 5 {
		t.Fatalf("the edits change too little to be told apart: %v", edits)
	}
	return edits
}

func loadDraft(t *testing.T) Draft {
	t.Helper()
	d, _, err := decodeDesign(assets.Samples()[1].JSON)
	if err != nil {
		t.Fatal(err)
	}
	return draftOf(d)
}

// built is the program, running.
type built struct {
	t       *testing.T
	url     string
	process *os.Process
}

// build builds the program as anybody would, starts it on an empty data file and stops
// it at the end of the test.
func build(t *testing.T) *built {
	t.Helper()
	folder := t.TempDir()
	program := filepath.Join(folder, "lossbook")
	if out, err := exec.Command("go", "build", "-o", program, "lossbook").CombinedOutput(); err != nil {
		t.Fatalf("%v\n%s", err, out)
	}
	c := exec.Command(program, "-listen", "127.0.0.1:0", "-data", filepath.Join(folder, "data.db"))
	c.Stderr = os.Stderr
	out, err := c.StdoutPipe()
	if err != nil {
		t.Fatal(err)
	}
	if err := c.Start(); err != nil {
		t.Fatal(err)
	}
	t.Cleanup(func() {
		c.Process.Signal(os.Interrupt)
		if err := c.Wait(); err != nil {
			t.Errorf("it stopped with %v", err)
		}
	})
	line, err := bufio.NewReader(out).ReadString('\n')
	found := regexp.MustCompile(`^Lossbook at (http://[^/]+)/ `).FindStringSubmatch(line)
	if err != nil || found == nil {
		t.Fatalf("it began with %q, %v", line, err)
	}
	return &built{t, found[1], c.Process}
}

// memory is what the program holds now and held at most, as the system counts it.
func (b *built) memory() string {
	status, err := os.ReadFile(fmt.Sprintf("/proc/%d/status", b.process.Pid))
	if err != nil {
		return "unknown here"
	}
	of := func(name string) string {
		_, after, _ := strings.Cut(string(status), name+":")
		value, _, _ := strings.Cut(after, "\n")
		return strings.TrimSpace(value)
	}
	return of("VmRSS") + ", at most " + of("VmHWM")
}

// seat is a person at a sheet.
type seat struct {
	client  *http.Client
	address string
	form    url.Values
	version string
}

// sit makes a design and opens its sheet.
func (b *built) sit() *seat {
	b.t.Helper()
	draft := loadDraft(b.t)
	design, wrong := draft.design()
	if len(wrong) > 0 {
		b.t.Fatal(wrong)
	}
	answer, err := http.Post(b.url+"/api/v1/designs", "application/json", strings.NewReader(text(b.t, designRequest{design})))
	if err != nil {
		b.t.Fatal(err)
	}
	defer answer.Body.Close()
	body, err := io.ReadAll(answer.Body)
	if err != nil || answer.StatusCode != http.StatusCreated {
		b.t.Fatalf("%s %s %v", answer.Status, body, err)
	}
	var made designResource
	if err := json.Unmarshal(body, &made); err != nil {
		b.t.Fatal(err)
	}
	s := &seat{client: &http.Client{}, address: b.url + sheetAddress(made.ID), version: strconv.FormatInt(made.Version, 10),
		form: url.Values{"structure": {draft.structure()}}}
	for name, entry := range draft {
		s.form.Set(name, entry)
	}
	return s
}

var nextVersion = regexp.MustCompile(`name="version" value="(\d+)"`)

// edit sends the whole form with one entry changed, as a sheet does while one types,
// and reads the answer.
func (s *seat) edit(c change) error {
	s.form.Set("switch.rds_on", c.value)
	s.form.Set("version", s.version)
	r, err := http.NewRequest("POST", s.address, strings.NewReader(s.form.Encode()))
	if err != nil {
		return err
	}
	r.Header.Set("Content-Type", "application/x-www-form-urlencoded")
	r.Header.Set("HX-Request", "true")
	answer, err := s.client.Do(r)
	if err != nil {
		return err
	}
	defer answer.Body.Close()
	body, err := io.ReadAll(answer.Body)
	version := nextVersion.FindSubmatch(body)
	if err != nil || answer.StatusCode != http.StatusOK || version == nil {
		return fmt.Errorf("%s, %v: %.500s", answer.Status, err, body)
	}
	s.version = string(version[1])
	for _, figure := range c.figures {
		if !strings.Contains(string(body), figure) {
			return fmt.Errorf("with %s it shows no %s", c.value, figure)
		}
	}
	return nil
}
