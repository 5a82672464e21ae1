package store

import (
	"fmt"
	"sync"
	"sync/atomic"
	"testing"
	"unsafe"

	"modernc.org/libc"
	sqlite3 "modernc.org/sqlite/lib"
)

// The database asks its file layer to put a file on the disk by xSync
// (sqlite.org/c3ref/io_methods.html). The layer that it uses is told to count that, for
// logs, before it does it.

var (
	logSyncs   atomic.Int64
	realOpen   func(tls *libc.TLS, vfs, name, file uintptr, flags int32, out uintptr) int32
	realSync   func(tls *libc.TLS, file uintptr, flags int32) int32
	counted    sqlite3.Tsqlite3_io_methods // those of the layer, with xSync in between
	countSyncs = sync.OnceFunc(func() {
		tls := libc.NewTLS()
		defer tls.Close()
		vfs := at[sqlite3.Tsqlite3_vfs](sqlite3.Xsqlite3_vfs_find(tls, 0))
		realOpen = *(*func(*libc.TLS, uintptr, uintptr, uintptr, int32, uintptr) int32)(unsafe.Pointer(&struct{ p uintptr }{vfs.FxOpen}))
		vfs.FxOpen = pointerTo(openCounted)
	})
)

func openCounted(tls *libc.TLS, vfs, name, file uintptr, flags int32, out uintptr) int32 {
	rc := realOpen(tls, vfs, name, file, flags, out)
	if rc != sqlite3.SQLITE_OK || flags&sqlite3.SQLITE_OPEN_WAL == 0 {
		return rc
	}
	f := at[sqlite3.Tsqlite3_file](file)
	once.Do(func() {
		counted = *at[sqlite3.Tsqlite3_io_methods](f.FpMethods)
		realSync = *(*func(*libc.TLS, uintptr, int32) int32)(unsafe.Pointer(&struct{ p uintptr }{counted.FxSync}))
		counted.FxSync = pointerTo(syncCounted)
	})
	f.FpMethods = uintptr(unsafe.Pointer(&counted))
	return rc
}

var once sync.Once

func syncCounted(tls *libc.TLS, file uintptr, flags int32) int32 {
	logSyncs.Add(1)
	return realSync(tls, file, flags)
}

// at is what lies at an address of the database's.
func at[T any](address uintptr) *T { return *(**T)(unsafe.Pointer(&address)) }

// pointerTo is a function as the database calls it.
func pointerTo[F any](f F) uintptr { return *(*uintptr)(unsafe.Pointer(&f)) }

// A save is on the disk before it is acknowledged: of a hundred, each puts the log there.
func TestEachSaveReachesTheDisk(t *testing.T) {
	countSyncs()
	s := openNew(t)
	d := create1(t, s, "d")
	const saves = 100
	before := logSyncs.Load()
	for i := range saves {
		from := logSyncs.Load()
		if i%2 == 0 {
			save1(t, s, d, fmt.Sprint(i))
		} else {
			changed, err := s.Update(t.Context(), d.ID, d.Version, Change{Name: d.Name, Draft: fmt.Appendf(nil, `{"n":"%d"}`, i)})
			if err != nil {
				t.Fatal(err)
			}
			d = changed
		}
		if logSyncs.Load() == from {
			t.Fatalf("save %d is acknowledged before it is on the disk", i+1)
		}
	}
	t.Logf("%d saves, the log was put on the disk %d times", saves, logSyncs.Load()-before)
	from := logSyncs.Load()
	for range saves {
		if _, err := s.Design(t.Context(), d.ID); err != nil {
			t.Fatal(err)
		}
	}
	if n := logSyncs.Load() - from; n != 0 {
		t.Errorf("reading puts the log on the disk %d times: what is counted?", n)
	}
}
