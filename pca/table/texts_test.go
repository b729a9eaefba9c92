package table

import (
	"context"
	"errors"
	"os"
	"path/filepath"
	"testing"
)

// What is not a column of numbers is told with its words; a text among numbers comes with
// the error about it.
func TestTexts(t *testing.T) {
	path := filepath.Join(t.TempDir(), "x.csv")
	if err := os.WriteFile(path, []byte("a,kind,b,when\n1,x,2,noon\n3,y,oops,noon\n4,x,6,night\n"), 0o666); err != nil {
		t.Fatal(err)
	}
	table, err := Open(context.Background(), Options{Files: []string{path}, Time: "when"})
	if err != nil {
		t.Fatal(err)
	}
	texts := table.Texts()
	if len(texts) != 2 || texts[0].Name != "kind" || texts[0].Position != 2 || texts[0].Filled != 3 || texts[0].Words["x"] != 2 || len(texts[0].Words) != 2 ||
		texts[1].Name != "when" || texts[1].Words["noon"] != 2 {
		t.Errorf("%+v", texts)
	}
	var fault *Error
	err = table.Each(context.Background(), 1, func(int, *Block) error { return nil }, func(*Block) error { return nil })
	if !errors.As(err, &fault) || fault.Cell != "oops" || fault.Line != 3 || fault.Name != "b" {
		t.Errorf("%#v", fault)
	}
}
