package cli

import (
	"bytes"
	"os"
	"os/exec"
	"testing"
)

// The demonstration's tables are what their generator makes, byte for byte.
func TestDemoTables(t *testing.T) {
	for _, name := range []string{"pump-hall", "bearing-temperatures"} {
		c := exec.Command("go", "run", "./testdata/demo", "-table", name)
		c.Dir = "../../.."
		var out, errs bytes.Buffer
		c.Stdout, c.Stderr = &out, &errs
		if err := c.Run(); err != nil {
			t.Fatalf("%v\n%s", err, errs.String())
		}
		want, err := os.ReadFile("../../../testdata/demo/" + name + ".csv")
		if err != nil {
			t.Fatal(err)
		}
		if !bytes.Equal(out.Bytes(), want) {
			t.Errorf("%s.csv is not what the generator makes", name)
		}
	}
}
