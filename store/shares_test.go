package store

import (
	"bytes"
	"errors"
	"io/fs"
	"os"
	"path/filepath"
	"strings"
	"testing"

	"github.com/google/go-cmp/cmp"
)

func share1(t testing.TB, s *Store, d Design, number int, note string) (Share, string) {
	t.Helper()
	made, token, err := s.CreateShare(t.Context(), d.ID, number, note)
	if err != nil {
		t.Fatal(err)
	}
	return made, token
}

// wantOpens checks which revision a token opens; 0 stands for none.
func wantOpens(t *testing.T, s *Store, token string, number int) {
	t.Helper()
	r, err := s.ShareByToken(t.Context(), token)
	if number == 0 && !errors.Is(err, ErrNotFound) || number > 0 && (err != nil || r.Number != number) {
		t.Errorf("it opens revision %d (%v), want %d", r.Number, err, number)
	}
}

func TestShareOpensItsRevision(t *testing.T) {
	s := openNew(t)
	d := create1(t, s, "d")
	want := save1(t, s, d, "one")
	save1(t, s, d, "two")
	made, token := share1(t, s, d, 1, "for Ada")
	other, second := share1(t, s, d, 2, "")
	if len(token) < 26 || token == second { // 5 bits a letter: 26 hold 130
		t.Errorf("tokens %q and %q", token, second)
	}
	got, err := s.ShareByToken(t.Context(), token)
	if err != nil || cmp.Diff(want, got) != "" {
		t.Errorf("opened (%v):\n%s", err, cmp.Diff(want, got))
	}
	wantOpens(t, s, second, 2)
	list, err := s.Shares(t.Context(), d.ID, 1)
	if err != nil || cmp.Diff([]Share{made}, list) != "" || made.Note != "for Ada" || other.ID == made.ID {
		t.Errorf("listed (%v):\n%s", err, cmp.Diff([]Share{made}, list))
	}
}

func TestTokensThatOpenNothing(t *testing.T) {
	s := openNew(t)
	d := create1(t, s, "d")
	save1(t, s, d, "")
	_, token := share1(t, s, d, 1, "")
	wrong := []string{"", "1", "%", strings.ToLower(token), token + "A", token[1:], token + "\x00", " " + token,
		string(hashToken(token)), strings.Repeat("A", 1<<16), "' OR 1=1 --"}
	for _, guess := range wrong {
		wantOpens(t, s, guess, 0)
	}
	wantOpens(t, s, token, 1)
}

func TestShareOfWhatIsNotThere(t *testing.T) {
	s := openNew(t)
	d := create1(t, s, "d")
	save1(t, s, d, "")
	made, _ := share1(t, s, d, 1, "")
	binned := create1(t, s, "binned")
	save1(t, s, binned, "")
	if err := s.Delete(t.Context(), binned.ID); err != nil {
		t.Fatal(err)
	}
	for _, at := range []struct {
		design int64
		number int
	}{{d.ID, 2}, {d.ID, 0}, {99, 1}, {binned.ID, 1}} {
		_, _, created := s.CreateShare(t.Context(), at.design, at.number, "")
		_, listed := s.Shares(t.Context(), at.design, at.number)
		one, all := s.RevokeShare(t.Context(), at.design, at.number, made.ID), s.RevokeShares(t.Context(), at.design, at.number)
		for _, err := range []error{created, listed, one, all} {
			if !errors.Is(err, ErrNotFound) {
				t.Errorf("%+v: %v, want ErrNotFound", at, err)
			}
		}
	}
	if err := s.RevokeShare(t.Context(), d.ID, 1, made.ID+1); !errors.Is(err, ErrNotFound) {
		t.Errorf("no such link: %v", err)
	}
}

func TestRevokeShare(t *testing.T) {
	s := openNew(t)
	s.now = fixedClock()
	d := create1(t, s, "d")
	save1(t, s, d, "one")
	save1(t, s, d, "two")
	first, gone := share1(t, s, d, 1, "first")
	_, kept := share1(t, s, d, 1, "second")
	_, other := share1(t, s, d, 2, "other")
	if err := s.RevokeShare(t.Context(), d.ID, 2, first.ID); !errors.Is(err, ErrNotFound) {
		t.Errorf("revoked at another revision: %v", err)
	}
	wantOpens(t, s, gone, 1)
	for range 2 { // twice does nothing more
		if err := s.RevokeShare(t.Context(), d.ID, 1, first.ID); err != nil {
			t.Fatal(err)
		}
	}
	wantOpens(t, s, gone, 0)
	wantOpens(t, s, kept, 1)
	list, _ := s.Shares(t.Context(), d.ID, 1)
	if len(list) != 2 || list[0].Note != "second" || !list[0].RevokedAt.IsZero() || list[1].RevokedAt.IsZero() {
		t.Fatalf("listed %+v", list)
	}
	when := list[1].RevokedAt
	if err := s.RevokeShares(t.Context(), d.ID, 1); err != nil {
		t.Fatal(err)
	}
	wantOpens(t, s, kept, 0)
	wantOpens(t, s, other, 2)
	if list, _ = s.Shares(t.Context(), d.ID, 1); !list[1].RevokedAt.Equal(when) || !list[0].RevokedAt.After(when) {
		t.Errorf("revoked at %v and %v, the first was at %v", list[1].RevokedAt, list[0].RevokedAt, when)
	}
}

func TestSharesOfABinnedDesign(t *testing.T) {
	s := openNew(t)
	d := create1(t, s, "d")
	save1(t, s, d, "")
	_, token := share1(t, s, d, 1, "")
	if err := s.Delete(t.Context(), d.ID); err != nil {
		t.Fatal(err)
	}
	wantOpens(t, s, token, 0)
	if _, err := s.Restore(t.Context(), d.ID); err != nil {
		t.Fatal(err)
	}
	wantOpens(t, s, token, 1)
}

// Nobody who reads the data file can open a link.
func TestTokenIsNotInTheFile(t *testing.T) {
	path := dataFile(t)
	s := openAt(t, path)
	d := create1(t, s, "d")
	save1(t, s, d, "")
	_, token := share1(t, s, d, 1, "a note to be found")
	looked := 0
	for _, closed := range []bool{false, true} {
		if closed {
			closeNow(t, s)
		}
		var all []byte
		for _, name := range filesBelow(t, filepath.Dir(path)) {
			b, err := os.ReadFile(filepath.Join(filepath.Dir(path), name))
			if err != nil && !errors.Is(err, fs.ErrNotExist) {
				t.Fatal(err)
			}
			all = append(all, b...)
		}
		if bytes.Contains(all, []byte("a note to be found")) && bytes.Contains(all, hashToken(token)) {
			looked++
		}
		if bytes.Contains(all, []byte(token)) {
			t.Errorf("the token is in the file; closed: %t", closed)
		}
	}
	if looked != 2 {
		t.Errorf("the link itself was found %d times, want 2", looked)
	}
}

func TestSharesAreOnlyRevoked(t *testing.T) {
	s := openNew(t)
	d := create1(t, s, "d")
	save1(t, s, d, "one")
	save1(t, s, d, "two")
	_, live := share1(t, s, d, 1, "")
	dead, revoked := share1(t, s, d, 1, "")
	if err := s.RevokeShare(t.Context(), d.ID, 1, dead.ID); err != nil {
		t.Fatal(err)
	}
	for _, attempt := range []string{
		`UPDATE shares SET revoked_at = NULL WHERE id = 2`,
		`UPDATE shares SET revoked_at = 1 WHERE id = 2`,
		`UPDATE shares SET revision = 2, revoked_at = 1 WHERE id = 1`,
		`UPDATE shares SET revision = 2 WHERE id = 1`,
		`UPDATE shares SET token_hash = zeroblob(32), revoked_at = 1 WHERE id = 1`,
		`UPDATE shares SET note = 'x', revoked_at = 1 WHERE id = 1`,
		`UPDATE shares SET created_at = 1, revoked_at = 1 WHERE id = 1`,
		`UPDATE shares SET id = 9, revoked_at = 1 WHERE id = 1`,
		`INSERT INTO shares (revision, token_hash, note, created_at) VALUES (99, zeroblob(32), '', 1)`,
		`INSERT INTO shares (revision, token_hash, note, created_at) VALUES (1, 'short', '', 1)`,
		`INSERT INTO shares (revision, token_hash, note, created_at) SELECT revision, token_hash, note, created_at FROM shares`,
	} {
		if err := raw(t, s, attempt); err == nil {
			t.Errorf("went through: %s", attempt)
		}
	}
	wantOpens(t, s, live, 1)
	wantOpens(t, s, revoked, 0)
}

// A file from before there were links takes them, and keeps its old self beside it.
func TestSharesInAnOldFile(t *testing.T) {
	path := filepath.Join(t.TempDir(), "lossbook.db")
	if err := copyFile(filepath.Join(oldDatabases, "layout-1.sqlite"), path); err != nil {
		t.Fatal(err)
	}
	s, err := open(t.Context(), path, current(t), goldenTime)
	if err != nil {
		t.Fatal(err)
	}
	defer s.Close()
	list, err := s.Designs(t.Context())
	if err != nil || len(list) != 2 {
		t.Fatal(list, err)
	}
	want, err := s.Revision(t.Context(), list[0].ID, 1)
	if err != nil {
		t.Fatal(err)
	}
	_, token := share1(t, s, list[0], 1, "")
	got, err := s.ShareByToken(t.Context(), token)
	if err != nil || cmp.Diff(want, got) != "" {
		t.Errorf("opened (%v):\n%s", err, cmp.Diff(want, got))
	}
	if kept, err := filepath.Glob(path + ".layout-1.*"); err != nil || len(kept) != 1 {
		t.Errorf("kept of the old file: %v, %v", kept, err)
	}
}
