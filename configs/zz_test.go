package configs

import (
	"fmt"
	"strings"
	"testing"
	"time"
)

func TestZ(t *testing.T) {
	var a strings.Builder
	for i := 0; a.Len() < 9<<20; i++ {
		fmt.Fprintf(&a, "key%d: 1\n", i)
	}
	var j strings.Builder
	j.WriteString("{\"a\":0")
	for i := 0; j.Len() < 9<<20; i++ {
		fmt.Fprintf(&j, ",\"key%d\": 1\n", i)
	}
	j.WriteString("}")
	var tm strings.Builder
	for i := 0; tm.Len() < 9<<20; i++ {
		fmt.Fprintf(&tm, "key%d= 1\n", i)
	}
	dup := strings.Repeat("title = \"a\"\n", 500000)
	for n, s := range map[string]string{"a.yaml": a.String(), "a.json": j.String(), "a.toml": tm.String(), "b.yaml": "layers: [" + strings.Repeat("1,", 4<<20) + "1]", "c.yaml": "title: " + strings.Repeat("x", 9<<20), "d.yaml": "title: '" + strings.Repeat("x\n\n ", 2<<20) + "'", "e.toml": dup, "f.yaml": strings.Repeat("a: {", 3<<20), "g.yaml": strings.Repeat("?", 9<<20), "h.yaml": strings.Repeat("- \n", 3<<20), "i.toml": "a = [" + strings.Repeat("1,", 4<<20) + "]", "j.toml": strings.Repeat("[[a]]\n", 1<<20), "k.yaml": "layers:\n" + strings.Repeat("  - {name: a, thickness: 1 m, density: 1 kg/m3, viscosity: 1 Pa s}\n", 10000)} {
		t0 := time.Now()
		_, err := Read(n, strings.NewReader(s))
		d := time.Since(t0)
		m := "ok"
		if err != nil {
			m = err.Error()
			if len(m) > 150 {
				m = m[:150]
			}
		}
		t.Logf("%s %v %s", n, d, m)
	}
	var many strings.Builder
	many.WriteString("layers:\n")
	for i := 0; i < 10000; i++ {
		fmt.Fprintf(&many, "  - {name: a%d, thickness: 1 m, density: 1 kg/m3, viscosity: 1e20 Pa s}\n", i)
	}
	t0 := time.Now()
	e, err := Read("l.yaml", strings.NewReader(many.String()))
	t.Log(time.Since(t0), err)
	t0 = time.Now()
	e.Resolved()
	t.Log(time.Since(t0))
}
