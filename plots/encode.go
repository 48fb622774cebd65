package plots

import (
	"bytes"
	"encoding/base64"
	"encoding/binary"
	"fmt"
	"hash/crc32"
	"image/png"
	"io"
	"math"
	"os"
	"slices"

	"codeberg.org/go-fonts/liberation/liberationsansregular"
	"codeberg.org/go-pdf/fpdf"
	"gonum.org/v1/plot/vg"
	"gonum.org/v1/plot/vg/draw"
	"gonum.org/v1/plot/vg/vgimg"
	"gonum.org/v1/plot/vg/vgsvg"
)

// dotsPerInch is the resolution of PNG.
const dotsPerInch = 300

// Formats lists what Encode can write.
func Formats() []string { return []string{"png", "svg", "pdf"} }

// Encode writes the figure to w as png (300 dots per inch), svg (font embedded) or
// pdf (font embedded, text selectable). The same figure gives the same bytes.
func Encode(w io.Writer, f Figure, format string) error {
	if f.draw == nil {
		return fmt.Errorf("plots: figure %q is empty", f.Name)
	}
	var err error
	switch format {
	case "png":
		err = encodePNG(w, f)
	case "svg":
		err = encodeSVG(w, f)
	case "pdf":
		c := newPDF(f)
		f.onWhite(c)
		err = c.write(w)
	default:
		return fmt.Errorf("plots: unknown format %q; use png, svg or pdf", format)
	}
	if err != nil {
		return fmt.Errorf("plots: %s.%s: %w", f.Name, format, err)
	}
	return nil
}

// Save writes the figure to the named file.
func Save(path string, f Figure, format string) error {
	var buf bytes.Buffer
	if err := Encode(&buf, f, format); err != nil {
		return err
	}
	return os.WriteFile(path, buf.Bytes(), 0o644)
}

// onWhite draws the figure on a white page.
func (f Figure) onWhite(c vg.Canvas) *sheet {
	s := &sheet{Canvas: draw.NewCanvas(c, f.Width, f.Height)}
	s.rect(s.Rectangle, white)
	return f.sheet(s.Canvas)
}

// encodeSVG writes an SVG that carries the letters it uses: the typeface that vgsvg
// embeds whole is replaced by the part of it that the figure needs.
func encodeSVG(w io.Writer, f Figure) error {
	c := vgsvg.NewWith(vgsvg.UseWH(f.Width, f.Height), vgsvg.EmbedFonts(true))
	s := f.onWhite(c)
	var buf bytes.Buffer
	if _, err := c.WriteTo(&buf); err != nil {
		return err
	}
	whole := []byte(base64.StdEncoding.EncodeToString(liberationsansregular.TTF))
	part := []byte(base64.StdEncoding.EncodeToString(subset(s.runes())))
	_, err := w.Write(bytes.ReplaceAll(buf.Bytes(), whole, part))
	return err
}

// runes returns the characters of all texts, each once, in order.
func (s *sheet) runes() []rune {
	var out []rune
	for _, t := range s.texts {
		for _, line := range (markup{}).Lines(t.text) {
			for _, r := range runs(line) {
				out = append(out, []rune(r.text)...)
			}
		}
	}
	slices.Sort(out)
	return slices.Compact(out)
}

// subset returns the typeface cut to the given characters.
func subset(chars []rune) []byte {
	// The bytes are copied: the cutter writes into them.
	return fpdf.UTF8CutFont(slices.Clone(liberationsansregular.TTF), string(chars))
}

// encodePNG writes a PNG that knows its size on paper.
func encodePNG(w io.Writer, f Figure) error {
	c := vgimg.NewWith(vgimg.UseWH(f.Width, f.Height), vgimg.UseDPI(dotsPerInch))
	f.Draw(draw.New(c))
	var buf bytes.Buffer
	if err := png.Encode(&buf, c.Image()); err != nil {
		return err
	}
	const header = 8 + 25 // signature and IHDR chunk; pHYs must come before IDAT
	for _, part := range [][]byte{buf.Bytes()[:header], physChunk(dotsPerInch), buf.Bytes()[header:]} {
		if _, err := w.Write(part); err != nil {
			return err
		}
	}
	return nil
}

// physChunk is PNG's chunk for the size of a pixel: per metre in x and y, unit 1.
func physChunk(dpi float64) []byte {
	perMetre := uint32(math.Round(dpi / 0.0254))
	data := []byte("pHYs")
	data = binary.BigEndian.AppendUint32(data, perMetre)
	data = binary.BigEndian.AppendUint32(data, perMetre)
	data = append(data, 1)
	chunk := binary.BigEndian.AppendUint32(nil, uint32(len(data)-4))
	chunk = append(chunk, data...)
	return binary.BigEndian.AppendUint32(chunk, crc32.ChecksumIEEE(data))
}
