package run

import (
	"context"
	"errors"
	"io"
	"os"
	"path/filepath"
	"strings"
	"syscall"
	"testing"

	"axisfold/configs"
)

// full is a disk with room for so many bytes.
type full struct{ left int }

type fullFile struct {
	*os.File
	disk *full
}

func (f fullFile) Write(b []byte) (int, error) {
	if len(b) > f.disk.left {
		n, _ := f.File.Write(b[:f.disk.left])
		f.disk.left = 0
		return n, &os.PathError{Op: "write", Path: f.Name(), Err: syscall.ENOSPC}
	}
	f.disk.left -= len(b)
	return f.File.Write(b)
}

// A disk that fills up, after whatever number of bytes, ends the run with an error that
// names the file, and leaves the earlier folder as it was and nothing else.
func TestDiskFull(t *testing.T) {
	dir := t.TempDir()
	manyRows(t, dir, 200, 4)
	path := filepath.Join(dir, "run.yaml")
	if err := os.WriteFile(path, []byte("axisfold: 1\nread: {files: x.csv}\nregress: {response: y}\ndraw:\n"), 0o666); err != nil {
		t.Fatal(err)
	}
	cfg, err := configs.Load(path, nil)
	if err != nil {
		t.Fatal(err)
	}
	out := filepath.Join(dir, "out")
	if _, _, err := Execute(context.Background(), cfg, Options{Out: out}); err != nil {
		t.Fatal(err)
	}
	before, err := os.ReadFile(filepath.Join(out, manifestName))
	if err != nil {
		t.Fatal(err)
	}
	entries := names(t, dir)
	failed := 0
	for room := 0; ; room += 9973 {
		disk := &full{left: room}
		_, _, err := Execute(context.Background(), cfg, Options{Out: out, open: func(path string) (io.WriteCloser, error) {
			file, err := os.Create(path)
			return fullFile{file, disk}, err
		}})
		if err == nil {
			break
		}
		failed++
		var folder *FolderError
		if !errors.As(err, &folder) || !strings.Contains(err.Error(), "no space left on device") {
			t.Fatalf("room for %d bytes: %v", room, err)
		}
		if now := names(t, dir); now != entries {
			t.Fatalf("room for %d bytes: left behind %s, before %s", room, now, entries)
		}
		if after, err := os.ReadFile(filepath.Join(out, manifestName)); err != nil || string(after) != string(before) {
			t.Fatalf("room for %d bytes: the earlier folder changed (%v)", room, err)
		}
	}
	if failed < 5 {
		t.Errorf("only %d runs met a full disk", failed)
	}
}
