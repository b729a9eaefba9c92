package table

import (
	"bufio"
	"encoding/binary"
	"io"
	"os"
	"strings"
	"testing"
	"unicode/utf16"

	"axisfold/testdata/published"
)

// The characters of Windows-1252 as Python's codec cp1252 has them, without the five bytes it
// leaves undefined.
const characters1252 = "€‚ƒ„…†‡ˆ‰Š‹ŒŽ‘’“”•–—˜™š›œžŸ" +
	"\u00a0¡¢£¤¥¦§¨©ª«¬\u00ad®¯°±²³´µ¶·¸¹º»¼½¾¿ÀÁÂÃÄÅÆÇÈÉÊËÌÍÎÏÐÑÒÓÔÕÖ×ØÙÚÛÜÝÞßàáâãäåæçèéêëìíîïðñòóôõö÷øùúûüýþÿ"

func TestWindows1252(t *testing.T) {
	var bytes []byte
	for c := 0x80; c < 0x100; c++ {
		switch c {
		case 0x81, 0x8d, 0x8f, 0x90, 0x9d:
		default:
			bytes = append(bytes, byte(c))
		}
	}
	got, err := io.ReadAll(decoded(bufio.NewReader(strings.NewReader(string(bytes))), "x", latin1Text))
	if err != nil || string(got) != characters1252 {
		t.Errorf("%q, %v", got, err)
	}
}

// A published table reads the same in every encoding, in pieces of any size.
func TestEncodings(t *testing.T) {
	raw, err := os.ReadFile(published.Path(t, "reference/air_quality/AirQualityUCI.csv"))
	if err != nil {
		t.Fatal(err)
	}
	text := string(raw)
	text = strings.Replace(text[:60000], "CO(GT)", "µ € 𝄞", 1)
	text = text[:strings.LastIndex(text, "\n")+1]
	o := func(path string) Options {
		return Options{Files: []string{path}, DecimalComma: true, Time: "Date", Missing: []string{"", "-200"}}
	}
	want, err := collect(o(writeFile(t, "x.csv", text)), chunkBytes, 1)
	if err != nil || want.columns[1].Name != "µ € 𝄞" && want.columns[0].Name != "µ € 𝄞" {
		t.Fatal(err, want)
	}
	units := utf16.Encode([]rune(text))
	var little, big []byte
	for _, u := range units {
		little = binary.LittleEndian.AppendUint16(little, u)
		big = binary.BigEndian.AppendUint16(big, u)
	}
	for _, x := range []struct{ name, text, encoding, note string }{
		{"little with mark", "\xff\xfe" + string(little), "", ""},
		{"big with mark", "\xfe\xff" + string(big), "", ""},
		{"little", string(little), "", "x.csv was read as utf-16 with the low byte first, as its zero bytes show"},
		{"big", string(big), "utf-16", "x.csv was read as utf-16 with the high byte first, as its zero bytes show"},
		{"utf-8", text, "utf-8", ""},
	} {
		for _, pieces := range []int{100, chunkBytes} {
			options := o(writeFile(t, "x.csv", x.text))
			options.Encoding = x.encoding
			got, err := collect(options, pieces, 2)
			if err != nil {
				t.Errorf("%s: %v", x.name, err)
				continue
			}
			if !sameNumbers(got.data, want.data) || strings.Join(got.times, "\n") != strings.Join(want.times, "\n") || got.columns[0] != want.columns[0] {
				t.Errorf("%s: differs", x.name)
			}
			if x.note != "" && !hasNote(got.notes, x.note) || x.note == "" && len(got.notes) != len(want.notes) {
				t.Errorf("%s: %v", x.name, got.notes)
			}
		}
	}
}

func hasNote(notes []Note, text string) bool {
	for _, n := range notes {
		if n.Text == text {
			return true
		}
	}
	return false
}

// Bytes that are not UTF-8 are read as Latin-1 with a note where the head shows them, and are
// an error where they come later in a text that is carried through.
func TestLatin1(t *testing.T) {
	text := "Temp [\xb0C];place\n1,5;K\xf6ln\n2;\x80\n"
	got, err := collect(Options{Files: []string{writeFile(t, "x.csv", text)}, DecimalComma: true, Groups: "place"}, 3, 2)
	if err != nil || got.columns[0].Name != "Temp [°C]" || strings.Join(got.groups, " ") != "Köln €" {
		t.Fatal(got, err)
	}
	if !hasNote(got.notes, "x.csv is not UTF-8 (line 1), so it was read as Latin-1 (Windows-1252); read.encoding says otherwise") {
		t.Error(got.notes)
	}
	late := "a,place\n" + strings.Repeat("1,x\n", 300000) + "2,K\xf6ln\n"
	_, err = collect(Options{Files: []string{writeFile(t, "x.csv", late)}, Groups: "place"}, chunkBytes, 2)
	if e, ok := err.(*Error); !ok || e.Line != 300002 || e.Column != 2 || e.Problem != notUTF8Problem {
		t.Error(err)
	}
	options := Options{Files: []string{writeFile(t, "x.csv", late)}, Groups: "place", Encoding: "latin-1"}
	if got, err := collect(options, chunkBytes, 2); err != nil || got.groups[300000] != "Köln" {
		t.Error(err)
	}
}
