package run

import (
	"context"
	"path/filepath"

	"axisfold/cmd/internal/report"
	"axisfold/configs"
	"axisfold/pca/table"
)

// Preview is what can be told of a run before it.
type Preview struct {
	Files     []string
	Channels  []string // that would be decomposed
	Responses []string
	Notes     []report.Note
	Folder    string
	Replaces  bool // an earlier run's folder stands there
	// Rows were looked at, all rows where Whole, and Complete of them have no gap in a
	// channel in use. Minds says what in them would stop the run or spoil its result.
	Rows, Complete int64
	Whole          bool
	Minds          []string
}

// Look checks all of a run that needs no computing: the run file against the heads of the
// table's files, whether the folder may be written, and the first rows.
func Look(ctx context.Context, cfg *configs.File, o Options) (*Preview, error) {
	p := &Preview{Folder: finalFolder(cfg, o)}
	if err := mayReplace(p.Folder, cfg.Path, o.Replace); err != nil {
		return nil, err
	}
	_, err := readManifest(p.Folder)
	p.Replaces = err == nil
	t, err := table.Open(ctx, readOptions(cfg, o.Threads))
	if err != nil {
		return nil, err
	}
	r, err := assignRoles(cfg, t.Columns())
	if err != nil {
		return nil, err
	}
	if p.Files = t.Files(); len(p.Files) == 0 {
		p.Files = []string{cfg.Read.Format}
	}
	p.Channels, p.Responses = r.labels[:r.channels], r.labels[r.channels:]
	for _, n := range t.Notes() {
		p.Notes = append(p.Notes, report.Note{Column: n.Column, Text: n.Text})
	}
	p.Notes = append(p.Notes, r.notes...)
	f, err := foresee(ctx, t, r, cfg, o)
	if err != nil {
		return nil, err
	}
	p.Rows, p.Complete, p.Whole, p.Minds = f.rows, f.complete, f.whole, f.minds
	return p, nil
}

// finalFolder is where the run folder goes.
func finalFolder(cfg *configs.File, o Options) string {
	if o.Out != "" {
		return filepath.Clean(o.Out)
	}
	return filepath.Clean(cfg.Resolve(cfg.Write.Folder))
}
