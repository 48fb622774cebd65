package plots

import (
	"bytes"
	"encoding/base64"
	"image/png"
	"slices"
	"strings"
	"testing"

	"codeberg.org/go-fonts/liberation/liberationsansregular"
	"golang.org/x/image/font"
	"golang.org/x/image/font/sfnt"
	"gonum.org/v1/plot/vg"
)

// TestSameBytes asserts that drawing a result anew gives the same bytes.
func TestSameBytes(t *testing.T) {
	for _, format := range Formats() {
		var twice [2][]byte
		for i := range twice {
			figures, err := All(madeUp(fiveRocks), 0)
			if err != nil {
				t.Fatal(err)
			}
			var buf bytes.Buffer
			for _, f := range figures {
				if err := Encode(&buf, f, format); err != nil {
					t.Fatal(err)
				}
				if err := Encode(&buf, f, format); err != nil { // a figure can be drawn again
					t.Fatal(err)
				}
			}
			twice[i] = buf.Bytes()
		}
		if !bytes.Equal(twice[0], twice[1]) {
			t.Errorf("%s differs from one time to the next", format)
		}
	}
}

// encoded is the column figure in a format.
func encoded(t *testing.T, format string) []byte {
	t.Helper()
	f, err := Column(madeUp(fiveRocks).State, 0)
	if err != nil {
		t.Fatal(err)
	}
	var buf bytes.Buffer
	if err := Encode(&buf, f, format); err != nil {
		t.Fatal(err)
	}
	return buf.Bytes()
}

// TestPNG asserts size and resolution.
func TestPNG(t *testing.T) {
	b := encoded(t, "png")
	img, err := png.Decode(bytes.NewReader(b))
	if err != nil {
		t.Fatal(err)
	}
	if got, want := img.Bounds().Dx(), 1004; got != want { // 85 mm at 300 dots per 25.4 mm
		t.Errorf("%d pixels wide, want %d", got, want)
	}
	phys := []byte{0, 0, 0, 9, 'p', 'H', 'Y', 's', 0, 0, 0x2e, 0x23, 0, 0, 0x2e, 0x23, 1} // 11811 per metre
	if at, data := bytes.Index(b, phys), bytes.Index(b, []byte("IDAT")); at < 0 || at > data {
		t.Errorf("pHYs at %d, IDAT at %d", at, data)
	}
}

// TestSVG asserts embedded type and readable text.
func TestSVG(t *testing.T) {
	s := string(encoded(t, "svg"))
	for _, part := range []string{"@font-face", "font-family:\"Liberation Sans\"", ">Temperature<", ">(kg/m³)<", `width="240.94pt"`} {
		if !strings.Contains(s, part) {
			t.Errorf("no %s", part)
		}
	}
	if len(s) > 60e3 {
		t.Errorf("%d bytes; the font should be cut to the letters used", len(s))
	}
}

// TestSVGFont asserts that the font in an SVG has every letter of the figure, as wide
// as in the whole font, and the tables without which browsers refuse a font.
func TestSVGFont(t *testing.T) {
	_, after, _ := strings.Cut(string(encoded(t, "svg")), "base64,")
	data, _, _ := strings.Cut(after, ")")
	b, err := base64.StdEncoding.DecodeString(data)
	if err != nil {
		t.Fatal(err)
	}
	part, err := sfnt.Parse(b)
	if err != nil {
		t.Fatal(err)
	}
	whole, err := sfnt.Parse(liberationsansregular.TTF)
	if err != nil {
		t.Fatal(err)
	}
	f, err := Column(madeUp(fiveRocks).State, 0)
	if err != nil {
		t.Fatal(err)
	}
	var buf sfnt.Buffer
	chars := drawn(f).runes()
	for _, r := range chars {
		i, err := part.GlyphIndex(&buf, r)
		if err != nil || i == 0 {
			t.Errorf("no glyph for %q: %v", r, err)
			continue
		}
		j, _ := whole.GlyphIndex(&buf, r)
		const em = 2048 << 6 // the font's own units
		got, err := part.GlyphAdvance(&buf, i, em, font.HintingNone)
		want, _ := whole.GlyphAdvance(&buf, j, em, font.HintingNone)
		if err != nil || got != want {
			t.Errorf("%q is %v wide, want %v (%v)", r, got, want, err)
		}
		ours, err := part.LoadGlyph(&buf, i, em, nil)
		shape := slices.Clone(ours)
		theirs, _ := whole.LoadGlyph(&buf, j, em, nil)
		if err != nil || !slices.Equal(shape, theirs) {
			t.Errorf("%q has another shape (%v)", r, err)
		}
	}
	if len(chars) < 30 {
		t.Errorf("only %d letters", len(chars))
	}
	for _, table := range []string{"OS/2", "cmap", "glyf", "head", "hhea", "hmtx", "loca", "maxp", "name", "post"} {
		if !bytes.Contains(b[:12+16*int(b[5])], []byte(table)) {
			t.Errorf("no table %s", table)
		}
	}
}

// TestPDF asserts one page of the right size with a Unicode font.
func TestPDF(t *testing.T) {
	s := string(encoded(t, "pdf"))
	for _, part := range []string{"%PDF-1", "/MediaBox [0 0 240.94", "/Encoding /Identity-H", "/ToUnicode", "D:20000101000000"} {
		if !strings.Contains(s, part) {
			t.Errorf("no %s", part)
		}
	}
	if len(s) > 100e3 {
		t.Errorf("%d bytes; the font should be cut to the letters used", len(s))
	}
}

// TestUnknownFormat asserts that other formats are refused, and widths at the edge.
func TestUnknownFormat(t *testing.T) {
	if err := Encode(new(bytes.Buffer), Figure{Name: "x", draw: func(*sheet) {}}, "tiff"); err == nil {
		t.Error("tiff is accepted")
	}
	if err := Encode(new(bytes.Buffer), Figure{}, "png"); err == nil {
		t.Error("an empty figure is accepted")
	}
	for _, w := range []vg.Length{-1, 10, 3000 * vg.Millimeter} {
		if _, err := pageWidth(w); err == nil {
			t.Errorf("a width of %v pt is accepted", w)
		}
	}
}
