package rheology_test

import (
	"math"
	"strings"
	"testing"

	"keelfall/rheology"
)

// TestErrors: errors as numbers agree with what stands in words. By hand.
func TestErrors(t *testing.T) {
	for _, c := range []struct {
		law  string
		want rheology.Errors
	}{
		{"dry Columbia diabase Mackwell 1998", rheology.Errors{LnA: 110.0 / 190, N: 0.6, E: 30e3}},
		{"dry eclogite Zhang 2007", rheology.Errors{LnA: math.Ln10, N: 0.4, E: 30e3}},
		{"wet olivine dislocation Hirth 2003", rheology.Errors{N: 0.3, R: 0.4, E: 40e3, V: 11e-6}},
		{"dry olivine dislocation Hirth 2003", rheology.Errors{N: 0.3, E: 4e3}}, // V 6-27 in words
		{"quartz eclogite Jin 2001", rheology.Errors{N: 0.8, E: 30e3}},
		{mei, rheology.Errors{E: 50e3}},
		{"wet plagioclase Rybacki 2004", rheology.Errors{}},
	} {
		if got := find(t, c.law).Errors; got != c.want {
			t.Errorf("%s: %+v, want %+v", c.law, got, c.want)
		}
	}
	some := 0
	for _, l := range rheology.Laws() {
		if (l.Errors != rheology.Errors{}) != strings.Contains(l.Uncertainty, "+-") {
			t.Errorf("%s: %+v beside %q", l.Name, l.Errors, l.Uncertainty)
		}
		if l.Errors != (rheology.Errors{}) {
			some++
		}
	}
	if some < 15 {
		t.Errorf("errors of %d laws", some)
	}
}

// TestVaried: a law moved by z is the law of a catalogue written so, and about a pivot
// it keeps its rate there. Source: the definition.
func TestVaried(t *testing.T) {
	l := find(t, "dry eclogite Zhang 2007")
	z := [5]float64{0.5, -1, 2, 1.5, 3} // r and V have no error
	got, err := l.Varied(z, nil)
	if err != nil {
		t.Fatal(err)
	}
	want := l
	want.LaboratoryA *= math.Pow(10, 0.5)
	want.N, want.E = 3.1, 448e3
	want.A = rheology.InvariantPrefactor(want.LaboratoryA, &want)
	if !close(got.A, want.A, 1e-12) || !close(got.LaboratoryA, want.LaboratoryA, 1e-14) || !close(got.N, 3.1, 1e-14) || got.E != 448e3 || got.V != l.V || got.R != 0 {
		t.Errorf("%+v, want %+v", got, want)
	}
	if same, err := l.Varied([5]float64{}, nil); err != nil || !close(same.A, l.A, 1e-15) {
		t.Errorf("not moved: %+v, %v", same, err)
	}
	pivot, ok := l.Tested.Pivot()
	if !ok || !close(pivot.T, 2/(1/1300.15+1/1700.15), 1e-14) || !close(pivot.P, 3e9, 1e-14) || pivot.Stress != 1e6 {
		t.Fatalf("pivot %+v, %v", pivot, ok)
	}
	p := find(t, mei)
	for _, c := range []struct {
		law rheology.Law
		at  rheology.Pivot
		z   [5]float64
	}{
		{l, pivot, [5]float64{0, 1, 0, -2, 0}},
		{l, rheology.Pivot{T: 1400, P: 2e9, Stress: 3e8}, [5]float64{1, 1, 0, -2, 0}},
		{p, rheology.Pivot{T: 900, P: 2e9, Stress: 2e9}, [5]float64{0, 0, 0, 1.5, 0}},
	} {
		moved, err := c.law.Varied(c.z, &c.at)
		if err != nil {
			t.Fatal(err)
		}
		rate := func(l rheology.Law) float64 {
			e, err := (&rheology.Creep{Laws: []rheology.Law{l}}).StrainRate(c.at.Stress/math.Sqrt(3), rheology.Conditions{T: c.at.T, P: c.at.P})
			if err != nil {
				t.Fatal(err)
			}
			return e
		}
		if a, b := rate(c.law)*math.Exp(c.z[0]*c.law.Errors.LnA), rate(moved); !close(a, b, 1e-11) || moved.E == c.law.E {
			t.Errorf("%s at its pivot: %g, moved %g", c.law.Name, a, b)
		}
	}
	if _, err := l.Varied([5]float64{0, -9}, nil); err == nil || !strings.Contains(err.Error(), "stress exponent -0.1") {
		t.Errorf("n below 0: %v", err)
	}
	pl := find(t, "wet plagioclase Rybacki 2004")
	if _, ok := pl.Tested.Pivot(); ok {
		t.Error("a pivot from nothing")
	}
}

// TestErrorStatus: the column says where errors come from; without it their parameters do.
func TestErrorStatus(t *testing.T) {
	for law, want := range map[string][5]string{
		"quartz eclogite Jin 2001":           {"", "memory", "", "memory", ""}, // its numbers are seen
		"dry eclogite Zhang 2007":            {"seen", "seen", "", "seen", ""},
		"dry Columbia diabase Mackwell 1998": {"memory", "seen", "", "seen", ""},
		"wet plagioclase Rybacki 2004":       {},
	} {
		if l := find(t, law); l.ErrorStatus() != want {
			t.Errorf("%s: %q, want %q", law, l.ErrorStatus(), want)
		}
	}
	h := strings.TrimSpace(head)
	for status, want := range map[string][5]string{"": {}, "seen": {"seen", "seen"}, "A memory, n seen": {"memory", "seen"}, "n choice": {"", "choice"}} {
		laws, err := rheology.ReadLaws(strings.NewReader("error_log10_prefactor,error_stress_exponent,status_errors," + h + "\n1,0.2,\"" + status + "\",a,invariant,1,3,1,0,none\n"))
		if err != nil || laws[0].ErrorStatus() != want {
			t.Errorf("%q: %+v, %v", status, laws, err)
		}
	}
	for _, bad := range []string{"read", "Q seen", "A", "A seen n seen"} {
		_, err := rheology.ReadLaws(strings.NewReader("status_errors," + h + "\n" + bad + ",a,invariant,1,3,1,0,none\n"))
		if err == nil || !strings.Contains(err.Error(), "line 2: status_errors: \""+bad+"\" is no status of errors") {
			t.Errorf("%s: %v", bad, err)
		}
	}
}

// TestRoomPressure: experiments at the pressure of the room, and from it up, are ranges;
// a stress or a temperature of nothing is none.
func TestRoomPressure(t *testing.T) {
	h := strings.TrimSpace(head)
	read := func(column, value string) (rheology.Law, error) {
		laws, err := rheology.ReadLaws(strings.NewReader(column + "," + h + "\n" + value + ",a,invariant,1,3,1,0,none\n"))
		if err != nil {
			return rheology.Law{}, err
		}
		return laws[0], nil
	}
	for value, want := range map[string]rheology.Interval{"0": {Low: 101325, High: 101325}, "0 to 560": {High: 560e6}} {
		l, err := read("tested_pressure_MPa", value)
		if err != nil || l.Tested.P != want {
			t.Errorf("%s: %+v, %v", value, l.Tested.P, err)
		}
		for P, in := range map[float64]bool{0: true, 0.4e9: true, 0.7e9: false} {
			if l.Tested.Pressures(P) != in {
				t.Errorf("%s: %g Pa is inside: %v", value, P, !in)
			}
		}
	}
	for column, value := range map[string]string{"tested_stress_MPa": "0", "tested_temperature_degC": "-274", "tested_pressure_MPa": "-1"} {
		if l, err := read(column, value); err == nil {
			t.Errorf("%s %s: %+v", column, value, l.Tested)
		}
	}
	if l, err := read("tested_pressure_MPa", "0 to 0"); err == nil {
		t.Errorf("0 to 0: %+v", l.Tested)
	}
}

// TestTestedCovers: inside is within every range that is known.
func TestTestedCovers(t *testing.T) {
	zhang, jin, rybacki := find(t, "dry eclogite Zhang 2007"), find(t, "quartz eclogite Jin 2001"), find(t, "dry anorthite dislocation Rybacki 2000")
	for _, c := range []struct {
		law           rheology.Law
		T, P, stress  float64
		inside, known bool
	}{
		{zhang, 1400, 3e9, 1e6, true, true},
		{zhang, 1200, 3e9, 1e6, false, true},
		{zhang, 1400, 1e9, 1e6, false, true},
		{jin, 500, 3.4e9, 1e6, true, false}, // one pressure, 3 GPa, and half a GPa around it
		{jin, 500, 3.6e9, 1e6, false, false},
		{rybacki, 1200, 0.3e9, 121e6, true, true},
		{rybacki, 1200, 0.3e9, 119e6, false, true},
	} {
		if inside, known := c.law.Tested.Covers(c.T, c.P, c.stress); inside != c.inside || known != c.known {
			t.Errorf("%s at %g K, %g Pa, %g Pa: %v %v", c.law.Name, c.T, c.P, c.stress, inside, known)
		}
	}
}

// TestOptionalColumns: a catalogue may have the new columns in any order, or not.
func TestOptionalColumns(t *testing.T) {
	h := strings.TrimSpace(head)
	laws, err := rheology.ReadLaws(strings.NewReader("error_prefactor_MPa_um,peierls_stress_MPa,peierls_p,peierls_q,peierls_pressure_factor_per_GPa,least_stress_MPa,tested_temperature_degC,tested_pressure_MPa,tested_stress_MPa,status_tested," + h +
		"\n0.5,6000,0.5,1,0.09,100,700 to 900,<560,>120,seen,a,plane strain,2,0,300,0,none\n,,,,,,,300,,,b,invariant,1,3,1,0,none\n"))
	if err != nil {
		t.Fatal(err)
	}
	want := rheology.Peierls{Stress: 3e9, PerPa: 0.09e-9, P: 0.5, Q: 1, Least: 50e6}
	if l := laws[0]; l.Peierls != want || l.Errors != (rheology.Errors{LnA: 0.25}) || l.A != 2 ||
		l.Tested != (rheology.Tested{T: rheology.Interval{Low: 973.15, High: 1173.15}, P: rheology.Interval{Low: 0, High: 560e6}, Stress: rheology.Interval{Low: 120e6, High: math.Inf(1)}, Status: "seen"}) {
		t.Errorf("%+v", l)
	}
	if l := laws[1]; l.Peierls != (rheology.Peierls{}) || l.Tested.P != (rheology.Interval{Low: 300e6, High: 300e6}) || l.Tested.T.Known() {
		t.Errorf("%+v", l)
	}
	for _, c := range []struct{ column, value, want string }{
		{"tested_pressure_MPa", "300-400", `line 2: tested_pressure_MPa: "300-400" is not a range`},
		{"tested_pressure_MPa", "400 to 300", `"400 to 300" ends below its start`},
		{"error_stress_exponent", "-1", "error -1 of its stress exponent"},
		{"peierls_stress_MPa", "8500", "Peierls exponents p = 0"},
		{"peierls_p", "1", "Peierls stress 0 Pa"},
		{"error_prefactor_MPa_um", "x", "error_prefactor_MPa_um: \"x\" is not a number"},
		{"error_prefactor_MPa_um,error_log10_prefactor", "1,1", "give one"},
	} {
		_, err := rheology.ReadLaws(strings.NewReader(c.column + "," + h + "\n" + c.value + ",a,invariant,1,3,1,0,none\n"))
		if err == nil || !strings.Contains(err.Error(), c.want) {
			t.Errorf("%s %s: %v, want %s", c.column, c.value, err, c.want)
		}
	}
}
