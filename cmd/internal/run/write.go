package run

import (
	"context"
	"crypto/sha256"
	"encoding/hex"
	"io"
	"os"
	"runtime"

	"axisfold/cmd/internal/report"
)

// write writes what belongs to the whole table. The manifest comes last: it lists all
// other files.
func (w *work) write(ctx context.Context) error {
	s := w.study
	for _, t := range report.Tables {
		if !t.Ready(s) {
			continue
		}
		if err := w.folder.write("tables/"+t.Name, func(out io.Writer) error { return t.Write(s, out) }); err != nil {
			return err
		}
	}
	var err error
	if s.Table.Files, err = w.inputs(ctx); err != nil {
		return err
	}
	resolved, err := w.cfg.Resolved()
	if err != nil {
		return err
	}
	for _, f := range []struct {
		name string
		fill func(io.Writer) error
	}{
		{"run.yaml", func(out io.Writer) error { _, err := out.Write(resolved); return err }},
		{"results.json", func(out io.Writer) error { return report.WriteResults(s, out) }},
		{"model.json", func(out io.Writer) error { return report.WriteModel(s, out) }},
		{"summary.txt", func(out io.Writer) error { return report.WriteSummary(s, out) }},
	} {
		if err := w.folder.write(f.name, f.fill); err != nil {
			return err
		}
	}
	return w.writeManifest()
}

// inputs hashes the input files, or the rows that a server gave.
func (w *work) inputs(ctx context.Context) ([]report.File, error) {
	var out []report.File
	for _, path := range w.table.Files() {
		f, err := hashFile(ctx, path)
		if err != nil {
			return nil, err
		}
		f.Path = relativeTo(w.cfg.Dir(), path)
		out = append(out, f)
	}
	if d := w.table.Digest(); d != nil {
		out = append(out, report.File{Path: w.cfg.Read.Format, SHA256: hex.EncodeToString(d)})
	}
	return out, nil
}

func hashFile(ctx context.Context, path string) (report.File, error) {
	file, err := os.Open(path)
	if err != nil {
		return report.File{}, err
	}
	defer file.Close()
	sum := sha256.New()
	n, err := io.CopyBuffer(sum, &stopping{ctx, file}, make([]byte, 1<<20))
	return report.File{Path: path, SHA256: hex.EncodeToString(sum.Sum(nil)), Bytes: n}, err
}

// stopping reads until ctx ends.
type stopping struct {
	ctx context.Context
	r   io.Reader
}

func (s *stopping) Read(b []byte) (int, error) {
	if err := s.ctx.Err(); err != nil {
		return 0, err
	}
	return s.r.Read(b)
}

func (w *work) writeManifest() error {
	d := w.study.Decomposition
	threads := w.options.Threads
	if threads <= 0 {
		threads = runtime.GOMAXPROCS(0)
	}
	runFile, err := hashFile(context.Background(), w.cfg.Path)
	if err != nil {
		return err
	}
	m := report.Manifest{Axisfold: report.FormatVersion, Version: w.options.Version, Go: runtime.Version(),
		Platform: runtime.GOOS + "/" + runtime.GOARCH,
		RunFile:  report.RunFile{Path: relativeTo(w.folder.final, w.cfg.Path), SHA256: runFile.SHA256, Set: w.options.Set},
		Inputs:   w.study.Table.Files, Outputs: w.folder.outputs, Seed: w.cfg.Seed, Threads: threads,
		Route: d.Route, Reason: d.Reason, Matrix: d.Matrix}
	return w.folder.write(manifestName, func(out io.Writer) error { return report.WriteManifest(&m, out) })
}
