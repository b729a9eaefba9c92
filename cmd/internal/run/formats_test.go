package run

import (
	"context"
	"database/sql"
	"encoding/csv"
	"encoding/json"
	"fmt"
	"math/rand/v2"
	"net/url"
	"os"
	"path/filepath"
	"reflect"
	"slices"
	"strconv"
	"strings"
	"testing"

	"github.com/jackc/pgx/v5/pgconn"
	"github.com/parquet-go/parquet-go"
	"github.com/xuri/excelize/v2"
	_ "modernc.org/sqlite"

	"axisfold/configs"
	"axisfold/pca"
	"axisfold/pca/table"
)

// postgresVariable names the environment variable with the connection string of a server
// where tests may make tables.
const postgresVariable = "AXISFOLD_TEST_POSTGRES"

// printedTable is a published table of texts, as it stands in its file.
func printedTable(t *testing.T, name string) (header []string, rows [][]string) {
	t.Helper()
	f, err := os.Open(filepath.Join("../../../testdata/reference/classic", name))
	if err != nil {
		t.Fatal(err)
	}
	defer f.Close()
	all, err := csv.NewReader(f).ReadAll()
	if err != nil {
		t.Fatal(err)
	}
	return all[0], all[1:]
}

// typed is the value of a cell: a number, a text, or nil where the cell is empty.
func typed(text string) any {
	if text == "" {
		return nil
	}
	if v, err := strconv.ParseFloat(text, 64); err == nil {
		return v
	}
	return text
}

// writers write a table in each format and return what read needs.
var writers = map[string]func(t *testing.T, dir string, header []string, rows [][]string) string{
	"csv": func(t *testing.T, dir string, header []string, rows [][]string) string {
		return writeDelimited(t, dir, "x.csv", ',', header, rows)
	},
	"tsv": func(t *testing.T, dir string, header []string, rows [][]string) string {
		return writeDelimited(t, dir, "x.tsv", '\t', header, rows)
	},
	"xlsx": func(t *testing.T, dir string, header []string, rows [][]string) string {
		book := excelize.NewFile()
		defer book.Close()
		for i, row := range append([][]string{header}, rows...) {
			for j, text := range row {
				cell, _ := excelize.CoordinatesToCellName(j+1, i+1)
				if err := book.SetCellValue("Sheet1", cell, typed(text)); err != nil {
					t.Fatal(err)
				}
			}
		}
		if err := book.SaveAs(filepath.Join(dir, "x.xlsx")); err != nil {
			t.Fatal(err)
		}
		return "files: x.xlsx"
	},
	"sqlite": func(t *testing.T, dir string, header []string, rows [][]string) string {
		db, err := sql.Open("sqlite", filepath.Join(dir, "x.db"))
		if err != nil {
			t.Fatal(err)
		}
		defer db.Close()
		if _, err := db.Exec("begin;" + strings.Join(statements(header, rows, "real", "text"), ";") + ";commit"); err != nil {
			t.Fatal(err)
		}
		return "files: x.db"
	},
	"parquet": func(t *testing.T, dir string, header []string, rows [][]string) string {
		return writeParquet(t, dir, header, rows)
	},
	"postgres": func(t *testing.T, dir string, header []string, rows [][]string) string {
		server := os.Getenv(postgresVariable)
		if server == "" {
			t.Skipf("no server to test with: %s is not set; .ci/run starts one", postgresVariable)
		}
		conn, err := pgconn.Connect(t.Context(), server)
		if err != nil {
			t.Fatal(err)
		}
		defer conn.Close(context.Background())
		all := append([]string{"drop table if exists x"}, statements(header, rows, "double precision", "text")...)
		if err := conn.Exec(t.Context(), strings.Join(all, ";")).Close(); err != nil {
			t.Fatal(err)
		}
		return "format: postgres, connection: " + postgresVariable + ", query: select * from x order by number"
	},
}

func writeDelimited(t *testing.T, dir, name string, separator rune, header []string, rows [][]string) string {
	t.Helper()
	f, err := os.Create(filepath.Join(dir, name))
	if err != nil {
		t.Fatal(err)
	}
	defer f.Close()
	w := csv.NewWriter(f)
	w.Comma = separator
	if err := w.WriteAll(append([][]string{header}, rows...)); err != nil {
		t.Fatal(err)
	}
	return "files: " + name
}

// statements make the table x.
func statements(header []string, rows [][]string, number, text string) []string {
	var columns []string
	for j, name := range header {
		kind := number
		if _, ok := typed(rows[0][j]).(string); ok {
			kind = text
		}
		columns = append(columns, fmt.Sprintf("%q %s", name, kind))
	}
	out := []string{"create table x (" + strings.Join(columns, ", ") + ")"}
	for _, row := range rows {
		var values []string
		for _, cell := range row {
			switch v := typed(cell).(type) {
			case nil:
				values = append(values, "null")
			case float64:
				values = append(values, cell)
			case string:
				values = append(values, "'"+strings.ReplaceAll(v, "'", "''")+"'")
			}
		}
		out = append(out, "insert into x values ("+strings.Join(values, ", ")+")")
	}
	return out
}

// writeParquet goes through a struct made for the table: its columns keep their order.
func writeParquet(t *testing.T, dir string, header []string, rows [][]string) string {
	t.Helper()
	var fields []reflect.StructField
	for j, name := range header {
		field := reflect.StructField{Name: fmt.Sprint("F", j), Type: reflect.TypeFor[*float64](), Tag: reflect.StructTag(`parquet:"` + name + `,optional,zstd"`)}
		if _, ok := typed(rows[0][j]).(string); ok {
			field.Type = reflect.TypeFor[*string]()
		}
		fields = append(fields, field)
	}
	record := reflect.StructOf(fields)
	f, err := os.Create(filepath.Join(dir, "x.parquet"))
	if err != nil {
		t.Fatal(err)
	}
	defer f.Close()
	w := parquet.NewWriter(f, parquet.SchemaOf(reflect.New(record).Interface()), parquet.MaxRowsPerRowGroup(60))
	for _, row := range rows {
		r := reflect.New(record)
		for j, cell := range row {
			if v := typed(cell); v != nil {
				at := reflect.New(reflect.TypeOf(v))
				at.Elem().Set(reflect.ValueOf(v))
				r.Elem().Field(j).Set(at)
			}
		}
		if err := w.Write(r.Interface()); err != nil {
			t.Fatal(err)
		}
	}
	if err := w.Close(); err != nil {
		t.Fatal(err)
	}
	return "files: x.parquet"
}

// The same published table gives the same results, bit for bit, in every format; held in
// memory and streamed, where groups make the folds.
func TestFormatsAgree(t *testing.T) {
	header, rows := printedTable(t, "iris_fisher.csv")
	// A number for every row, as time; and gaps, which the published table lacks.
	header = append([]string{"number"}, header...)
	for i, row := range rows {
		rows[i] = append([]string{strconv.Itoa(i + 1)}, row...)
	}
	rows[7][2], rows[70][4] = "", ""
	results := map[string]map[string]any{}
	scores := map[string]string{}
	for _, format := range table.Formats() {
		t.Run(format, func(t *testing.T) {
			write := writers[format]
			if write == nil {
				t.Fatal("no test writes this format")
			}
			dir := t.TempDir()
			read := write(t, dir, header, rows)
			text := "axisfold: 1\nread: {" + read + ", time: number, groups: species}\nregress: {response: petal_width, retain: {rule: cross-validation, arrangement: groups, folds: 3}}\n"
			path := filepath.Join(dir, "run.yaml")
			if err := os.WriteFile(path, []byte(text), 0o666); err != nil {
				t.Fatal(err)
			}
			cfg, err := configs.Load(path, nil)
			if err != nil {
				t.Fatal(err)
			}
			if _, _, err := Execute(t.Context(), cfg, Options{Out: filepath.Join(dir, "out")}); err != nil {
				t.Fatal(err)
			}
			content, err := os.ReadFile(filepath.Join(dir, "out", "results.json"))
			if err != nil {
				t.Fatal(err)
			}
			var r map[string]any
			if err := json.Unmarshal(content, &r); err != nil {
				t.Fatal(err)
			}
			delete(r["table"].(map[string]any), "files")
			results[format] = r
			content, err = os.ReadFile(filepath.Join(dir, "out", "tables", "predictions.csv"))
			if err != nil {
				t.Fatal(err)
			}
			scores[format] = string(content)
			if !reflect.DeepEqual(r, results["csv"]) {
				t.Errorf("results differ from those of csv:\n%v\n%v", r, results["csv"])
			}
			if scores[format] != scores["csv"] {
				t.Errorf("predictions differ from those of csv:\n%.400s\n%.400s", scores[format], scores["csv"])
			}
		})
	}
}

// Streamed tables give the same bits for any number of threads, in every format.
func TestFormatsOnThreads(t *testing.T) {
	header := []string{"number", "group", "a", "b", "y"}
	var rows [][]string
	rng := rand.New(rand.NewPCG(9, 8))
	for i := range 6000 {
		u := rng.NormFloat64()
		row := []string{strconv.Itoa(i + 1), fmt.Sprint("g", i/1500)}
		for j := range 3 {
			row = append(row, strconv.FormatFloat(u+rng.NormFloat64()*float64(j+1), 'f', 6, 64))
		}
		if i > 0 && rng.IntN(50) == 0 {
			row[3] = ""
		}
		rows = append(rows, row)
	}
	for _, format := range table.Formats() {
		t.Run(format, func(t *testing.T) {
			dir := t.TempDir()
			text := "axisfold: 1\nread: {" + writers[format](t, dir, header, rows) + ", time: number, groups: group}\nregress: {response: y, retain: {rule: cross-validation, folds: 4}}\n"
			path := filepath.Join(dir, "run.yaml")
			if err := os.WriteFile(path, []byte(text), 0o666); err != nil {
				t.Fatal(err)
			}
			first := map[string]string{}
			for _, threads := range []int{1, 2, 5} {
				cfg, err := configs.Load(path, nil)
				if err != nil {
					t.Fatal(err)
				}
				out := filepath.Join(dir, "out")
				study, _, err := Execute(t.Context(), cfg, Options{Out: out, Threads: threads, held: 1000})
				if err != nil {
					t.Fatal(err)
				}
				if study.Table.Held || study.Table.Rows != 6000 {
					t.Fatalf("held %v, %d rows", study.Table.Held, study.Table.Rows)
				}
				for _, name := range []string{"results.json", "model.json", "tables/scores.csv", "tables/predictions.csv"} {
					b, err := os.ReadFile(filepath.Join(out, name))
					if err != nil {
						t.Fatal(err)
					}
					if threads == 1 {
						first[name] = string(b)
					} else if first[name] != string(b) {
						t.Errorf("%s differs with %d threads", name, threads)
					}
				}
			}
		})
	}
}

// What is written tells nothing of the connection but the variable's name; the manifest
// identifies the rows; a query without an order brings a warning.
func TestServerLeavesNoSecrets(t *testing.T) {
	header, rows := printedTable(t, "us_arrests_1973.csv")
	header[0] = "number"
	dir := t.TempDir()
	read := strings.TrimSuffix(writers["postgres"](t, dir, header, rows), " order by number")
	path := filepath.Join(dir, "run.yaml")
	if err := os.WriteFile(path, []byte("axisfold: 1\nread: {"+read+"}\ndraw:\n"), 0o666); err != nil {
		t.Fatal(err)
	}
	cfg, err := configs.Load(path, nil)
	if err != nil {
		t.Fatal(err)
	}
	out := filepath.Join(dir, "out")
	study, _, err := Execute(t.Context(), cfg, Options{Out: out})
	if err != nil {
		t.Fatal(err)
	}
	if !slices.ContainsFunc(study.Warnings, func(w pca.Warning) bool { return w.Code == "unordered-rows" }) {
		t.Errorf("%+v", study.Warnings)
	}
	server, err := url.Parse(os.Getenv(postgresVariable))
	if err != nil {
		t.Fatal(err)
	}
	password, _ := server.User.Password()
	if password == "" {
		t.Fatal("the test server needs a password")
	}
	files, digest := 0, ""
	err = filepath.WalkDir(out, func(path string, d os.DirEntry, err error) error {
		if err != nil || d.IsDir() {
			return err
		}
		content, err := os.ReadFile(path)
		for _, secret := range []string{password, server.Host, server.String()} {
			if strings.Contains(string(content), secret) {
				t.Errorf("%s holds %q", path, secret)
			}
		}
		if filepath.Base(path) == "manifest.json" {
			var m struct {
				Inputs []struct{ Path, SHA256 string }
			}
			if err := json.Unmarshal(content, &m); err != nil {
				return err
			}
			digest = m.Inputs[0].Path + " " + m.Inputs[0].SHA256
		}
		files++
		return err
	})
	if err != nil || files < 10 || len(digest) != len("postgres ")+64 {
		t.Errorf("%d files, %q: %v", files, digest, err)
	}
	// The resolved run file does the same again.
	again, err := configs.Load(filepath.Join(out, "run.yaml"), nil)
	if err != nil {
		t.Fatal(err)
	}
	second, _, err := Execute(t.Context(), again, Options{Out: filepath.Join(dir, "again")})
	if err != nil || !reflect.DeepEqual(second.Table.Files, study.Table.Files) {
		t.Errorf("%+v, before %+v: %v", second.Table.Files, study.Table.Files, err)
	}
}
