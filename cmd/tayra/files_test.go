package main

import (
	"bytes"
	"errors"
	"fmt"
	"os"
	"path/filepath"
	"strings"
	"sync"
	"testing"
)

func read(t *testing.T, path string) string {
	t.Helper()
	data, err := os.ReadFile(path)
	if err != nil {
		t.Fatal(err)
	}
	return string(data)
}

// onlyFiles fails when a folder holds anything but the named files.
func onlyFiles(t *testing.T, folder string, names ...string) {
	t.Helper()
	entries, err := os.ReadDir(folder)
	if err != nil {
		t.Fatal(err)
	}
	var got []string
	for _, e := range entries {
		got = append(got, e.Name())
	}
	if strings.Join(got, " ") != strings.Join(names, " ") {
		t.Errorf("the folder holds %q, want %q", got, names)
	}
}

// TestWriteFilesRace: of many writers to one new name one wins, and its bytes
// are whole.
func TestWriteFilesRace(t *testing.T) {
	folder := t.TempDir()
	path := filepath.Join(folder, "record.json")
	const writers = 16
	var won sync.Map
	var wait sync.WaitGroup
	for i := range writers {
		wait.Go(func() {
			data := bytes.Repeat([]byte{byte('a' + i)}, 100_000)
			err := writeFiles([]output{{"--json", path, data}}, false)
			var file *fileError
			switch {
			case err == nil:
				won.Store(i, true)
			case !errors.As(err, &file) || file.problem != "exists already":
				t.Errorf("writer %d: %v", i, err)
			}
		})
	}
	wait.Wait()
	winners := 0
	won.Range(func(i, _ any) bool {
		winners++
		if want := strings.Repeat(string(rune('a'+i.(int))), 100_000); read(t, path) != want {
			t.Errorf("writer %d won and its bytes are not there", i)
		}
		return true
	})
	if winners != 1 {
		t.Errorf("%d writers won", winners)
	}
	onlyFiles(t, folder, "record.json")
}

// TestWriteFilesAllOrNone: when a name is taken after everything was looked at,
// what was already in place is taken away, and what it replaced is put back.
func TestWriteFilesAllOrNone(t *testing.T) {
	for _, force := range []bool{false, true} {
		t.Run(fmt.Sprint("force ", force), func(t *testing.T) {
			folder := t.TempDir()
			a, b := filepath.Join(folder, "a"), filepath.Join(folder, "b")
			want := []string{"b"}
			if force {
				write(t, folder, "a", "old a")
				want = []string{"a", "b"}
			}
			targets, err := lookAt([]output{{"--pdf", a, []byte("new a")}, {"--json", b, []byte("new b")}}, force, nil)
			if err != nil {
				t.Fatal(err)
			}
			for _, x := range targets {
				if err := x.stage(); err != nil {
					t.Fatal(err)
				}
			}
			// A folder takes the second name: neither a link nor a rename can.
			if err := os.Mkdir(b, 0o777); err != nil {
				t.Fatal(err)
			}
			if err := targets[0].place(force, true); err != nil {
				t.Fatal(err)
			}
			if read(t, a) != "new a" {
				t.Error("the first file is not in place")
			}
			if err := targets[1].place(force, true); err == nil {
				t.Fatal("a folder was replaced")
			}
			undo(targets)
			onlyFiles(t, folder, want...)
			if force && read(t, a) != "old a" {
				t.Errorf("the old file is now %q", read(t, a))
			}
		})
	}
}

// TestWriteFilesWithoutLinks: where the file system has no links, a name is
// still never taken from somebody else.
func TestWriteFilesWithoutLinks(t *testing.T) {
	folder := t.TempDir()
	taken, free := filepath.Join(folder, "taken"), filepath.Join(folder, "free")
	targets, err := lookAt([]output{{"--pdf", taken, []byte("new")}, {"--json", free, []byte("new")}}, false, nil)
	if err != nil {
		t.Fatal(err)
	}
	write(t, folder, "taken", "old")
	for _, x := range targets {
		if err := x.stage(); err != nil {
			t.Fatal(err)
		}
	}
	if err := targets[0].reserve(); !errors.Is(err, os.ErrExist) {
		t.Errorf("a taken name was reserved: %v", err)
	}
	if err := targets[1].reserve(); err != nil {
		t.Error(err)
	}
	undo(targets[:1])
	onlyFiles(t, folder, "free", "taken")
	if read(t, taken) != "old" || read(t, free) != "new" {
		t.Errorf("taken %q, free %q", read(t, taken), read(t, free))
	}
}

// TestWriteFilesKeepsMode: a replaced file keeps who may read it.
func TestWriteFilesKeepsMode(t *testing.T) {
	folder := t.TempDir()
	path := filepath.Join(folder, "private.json")
	write(t, folder, "private.json", "old")
	if err := os.Chmod(path, 0o600); err != nil {
		t.Fatal(err)
	}
	if err := writeFiles([]output{{"--json", path, []byte("new")}}, true); err != nil {
		t.Fatal(err)
	}
	info, err := os.Stat(path)
	if err != nil || info.Mode().Perm() != 0o600 || read(t, path) != "new" {
		t.Errorf("%v %v %q", info.Mode(), err, read(t, path))
	}
}
