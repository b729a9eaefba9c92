package table

import (
	"archive/zip"
	"errors"
	"os"
	"path/filepath"
	"testing"
)

// agree reads a file on one thread and on three: rows or an Error, the same both times,
// and where numbers is set the same numbers.
func agree(t *testing.T, o Options, numbers bool) {
	t.Helper()
	want, wantErr := collect(o, chunkBytes, 1)
	got, err := collect(o, chunkBytes, 3)
	var e *Error
	switch {
	case err != nil && !errors.As(err, &e):
		t.Fatal(err)
	case (err == nil) != (wantErr == nil) || err != nil && err.Error() != wantErr.Error():
		t.Fatalf("%v, on one thread: %v", err, wantErr)
	case err == nil && numbers && !sameNumbers(got.data, want.data):
		t.Fatalf("%v, on one thread: %v", got.data, want.data)
	}
}

func seeded(f *testing.F) {
	seeds, err := filepath.Glob("testdata/fuzz/" + f.Name() + "/*")
	if err != nil || len(seeds) == 0 {
		f.Fatalf("no seeds: %v", err)
	}
}

// FuzzParquet does not compare numbers: of a damaged page whose values are short the
// library may give what its memory held before.
func FuzzParquet(f *testing.F) {
	seeded(f)
	f.Fuzz(func(t *testing.T, file []byte) {
		agree(t, Options{Files: []string{writeFile(t, "x.parquet", string(file))}, Format: "parquet"}, false)
	})
}

func FuzzSQLite(f *testing.F) {
	seeded(f)
	f.Fuzz(func(t *testing.T, file []byte) {
		agree(t, Options{Files: []string{writeFile(t, "x.db", string(file))}, Format: "sqlite"}, true)
	})
}

// FuzzSpreadsheet changes the parts of a workbook: under compression and checksums there
// would be little to find.
func FuzzSpreadsheet(f *testing.F) {
	seeded(f)
	f.Fuzz(func(t *testing.T, sheet, texts, styles []byte) {
		path := filepath.Join(t.TempDir(), "x.xlsx")
		file, err := os.Create(path)
		if err != nil {
			t.Fatal(err)
		}
		w := zip.NewWriter(file)
		const links = "http://schemas.openxmlformats.org/officeDocument/2006/relationships"
		for name, text := range map[string]string{
			"_rels/.rels":     `<Relationships><Relationship Id="a" Type="` + links + `/officeDocument" Target="xl/workbook.xml"/></Relationships>`,
			"xl/workbook.xml": `<workbook xmlns:r="` + links + `"><sheets><sheet name="S" r:id="b"/></sheets></workbook>`,
			"xl/_rels/workbook.xml.rels": `<Relationships><Relationship Id="b" Type="` + links + `/worksheet" Target="s.xml"/><Relationship Id="c" Type="` + links +
				`/sharedStrings" Target="t.xml"/><Relationship Id="d" Type="` + links + `/styles" Target="y.xml"/></Relationships>`,
			"xl/s.xml": string(sheet), "xl/t.xml": string(texts), "xl/y.xml": string(styles),
		} {
			part, err := w.CreateHeader(&zip.FileHeader{Name: name, Method: zip.Store})
			if err != nil {
				t.Fatal(err)
			}
			part.Write([]byte(text))
		}
		if err := errors.Join(w.Close(), file.Close()); err != nil {
			t.Fatal(err)
		}
		agree(t, Options{Files: []string{path}, Format: "xlsx", Missing: []string{"", "NA"}}, true)
	})
}
