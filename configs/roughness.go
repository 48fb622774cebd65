package configs

import (
	"crypto/sha256"
	"encoding/hex"
	"fmt"
	"slices"
	"strings"

	"keelfall/solver/drip"
	"keelfall/solver/race"
)

// roughness is the undulation of the root's base against wavelength.
type roughness struct {
	_    struct{}     `kind:"union"`
	Word text         `form:"scalar" as:"spectrum" eg:"white, red, or a CSV file with wavelength and amplitude"`
	Red  *redSpectrum `form:"map"`
}

type redSpectrum struct {
	block
	Red quantity `key:"red,required" dim:"number" range:"(0,4]" eg:"1" doc:"exponent: amplitudes go with wavelength to this power"`
	At  quantity `key:"at" dim:"length" range:"[10 m,100000 km]" eg:"100 km" doc:"wavelength that drip.amplitude is for; 100 km if left out"`
}

// Defaults of a red spectrum: common practice, no source.
const (
	redExponent = "1"
	redAt       = "100 km"
)

// roughness completes a red spectrum and says whether drip.spectrum is a table.
func (f *filler) roughness() (table bool) {
	n := f.root.get("drip").get("spectrum")
	switch {
	case n == nil || n.kind == listNode:
		return false
	case n.kind == scalarNode && n.text == "red":
		n.kind, n.text, n.scalar = mapNode, "", 0
		f.put(n, "red", "drip.spectrum.red", redExponent, true)
	case n.kind == scalarNode:
		return strings.Contains(n.text, ".") // of the file's extension
	}
	if n.get("red") != nil {
		f.put(n, "at", "drip.spectrum.at", redAt, true)
	}
	return false
}

const roughnessNeeds = "white, red, {red: EXPONENT, at: WAVELENGTH}, or a CSV file with the columns wavelength_km and amplitude_m, and if you like source and notes"

var roughnessColumns = []csvColumn{{"wavelength", "length"}, {"amplitude", "length"}, {"source", ""}, {"notes", ""}}

// What rows may hold, m: the schema's ranges of spectrum.from and drip.amplitude.
const (
	leastWavelength = 10
	mostWavelength  = 1e8
	mostAmplitude   = 1e5
)

// spectrum gives the problem its undulation against wavelength.
func (e *Experiment) spectrum(w *walker, p *race.Problem) {
	s := e.data.Drip.Spectrum
	switch {
	case s == nil:
	case s.Red != nil:
		p.Drip.Spectrum, p.Drip.Rough = "red", drip.Roughness{Exponent: s.Red.Red.SI, At: s.Red.At.SI}
	case s.Word.Value == "white":
		p.Drip.Spectrum = "white"
	case !strings.Contains(s.Word.Value, "."):
		what := fmt.Sprintf("%s is not known; needs %s", s.Word.n.show(), roughnessNeeds)
		if h := hint(s.Word.Value, []string{"white", "red"}); h != "" {
			what += "; " + h
		}
		w.add(s.Word.n, "drip.spectrum", what)
	default:
		if a := e.data.Drip.Amplitude; a.given() && a.n.from != fromDefault {
			w.addf(a.n, "drip.amplitude", "%s beside a table of amplitudes, drip.spectrum: %s; the table says them, leave drip.amplitude out", a.n.show(), shorten(s.Word.Value))
		}
		p.Drip.Spectrum = s.Word.Value
		p.Drip.Rough = e.roughnessFile(w, s.Word, p.Drip.Criterion*p.Column.RootThickness())
	}
}

// roughnessFile reads a table of amplitudes, each below tip, where it has dripped, in m.
func (e *Experiment) roughnessFile(w *walker, name text, tip float64) (out drip.Roughness) {
	r := csvReader{w: w, file: e.beside(name.Value), needs: roughnessNeeds, rows: "rows", known: roughnessColumns}
	b, ok := r.open(e, name.Value, name.n, "drip.spectrum")
	if !ok {
		return out
	}
	before, last := len(w.mistakes), 0
	r.read(b, func(has func(string) bool) bool { return has("wavelength") && has("amplitude") },
		func(record []string, line int) bool {
			last = line
			length, amplitude := r.undulation(record, line)
			if len(w.mistakes) > before {
				return true
			}
			if n := len(out.Wavelength); n > 0 && length <= out.Wavelength[n-1] {
				r.add(line, "wavelength", "%.6g km is not longer than the one before it, %.6g km; wavelengths increase from row to row", length/1e3, out.Wavelength[n-1]/1e3)
			}
			if tip > 0 && amplitude >= tip {
				r.add(line, "amplitude", "%.6g m is a drip already at the start; needs less than criterion × root thickness, %.6g m", amplitude, tip)
			}
			out.Wavelength, out.Amplitude = append(out.Wavelength, length), append(out.Amplitude, amplitude)
			return true
		})
	if len(w.mistakes) == before && len(out.Wavelength) < 2 {
		r.add(last, "", "has one row; needs at least two")
	}
	if len(w.mistakes) > before {
		return drip.Roughness{}
	}
	return out
}

// undulation reads one row, in m.
func (r *csvReader) undulation(record []string, line int) (wavelength, amplitude float64) {
	for i, s := range record {
		dim := r.dimension(i)
		if dim == nil {
			if err := readable(s, "prose"); err != nil {
				r.add(line, r.words[i], "%s", err)
			}
			continue
		}
		x, err := cell(s, r.units[i], dim)
		switch {
		case err != nil:
		case r.words[i] == "wavelength":
			if wavelength = x; !(x >= leastWavelength && x <= mostWavelength) {
				err = fmt.Errorf("%s is out of range; needs a wavelength of at least 10 m and at most 100000 km", shorten(s))
			}
		default:
			if amplitude = x; !(x > 0 && x <= mostAmplitude) {
				err = fmt.Errorf("%s is out of range; needs an amplitude above 0 m and at most 100 km (leave out wavelengths without an undulation)", shorten(s))
			}
		}
		if err != nil {
			r.add(line, r.heads[i], "%s", err)
		}
	}
	return wavelength, amplitude
}

// spectrumSource is the table of amplitudes with its SHA-256; nil without one.
func (e *Experiment) spectrumSource() any {
	s := e.data.Drip.Spectrum
	if s == nil || s.Red != nil || slices.Contains([]string{"", "white"}, s.Word.Value) {
		return nil
	}
	sum := sha256.Sum256(e.files[s.Word.Value])
	return map[string]any{"name": s.Word.Value, "sha256": hex.EncodeToString(sum[:])}
}
