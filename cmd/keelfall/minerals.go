package main

import (
	"errors"
	"fmt"
	"math"
	"strings"

	"github.com/spf13/cobra"

	"keelfall/cmd/internal/report"
	"keelfall/column"
	"keelfall/configs"
)

func newMineralsCmd(s Streams) *cobra.Command {
	o := &options{Streams: s, Width: 85}
	var at string
	cmd := &cobra.Command{
		Use:   "minerals [NAME]",
		Short: "Lists the minerals that densities are made of, or shows one with its sources",
		Long: `Without NAME, lists the end-members that an experiment's modes may name. With the full
name or the symbol of one, shows its numbers, where each comes from, and its density,
expansivity and bulk modulus at a temperature and a pressure.`,
		Example: `  keelfall minerals
  keelfall minerals almandine --at "800 degC,1.5 GPa"`,
		Args: args(cobra.MaximumNArgs(1)),
		RunE: func(cmd *cobra.Command, a []string) error {
			if err := o.check(); err != nil {
				return err
			}
			T, P, err := temperatureAndPressure(at)
			if err != nil {
				return usageError{err}
			}
			if len(a) == 0 {
				if o.Format == "text" && cmd.Flags().Changed("at") {
					return usageError{errors.New("--at needs the NAME of a mineral; of all of them, --format csv or json gives the densities there")}
				}
				list := column.Minerals()
				for i := range list {
					if err := inRange(&list[i], T, P, at); err != nil {
						return err
					}
				}
				return o.print(report.MineralsPage(list), report.Minerals(list, T, P), report.MineralsTable(list, T, P))
			}
			m, err := column.FindMineral(a[0])
			if err != nil {
				return usageError{err}
			}
			if err := inRange(&m, T, P, at); err != nil {
				return err
			}
			one := []column.Mineral{m}
			return o.print(report.MineralPage(&m, T, P), report.Minerals(one, T, P), report.MineralsTable(one, T, P))
		},
	}
	o.formatFlag(cmd.Flags())
	cmd.Flags().StringVar(&at, "at", "25 degC,0 GPa", "temperature and pressure, for example \"800 degC,1.5 GPa\"")
	return cmd
}

// inRange refuses what the mineral's equation of state does not reach.
func inRange(m *column.Mineral, T, P float64, at string) error {
	if rho := m.Density(T, P); !(rho > 0) || math.IsInf(rho, 1) {
		return usageError{fmt.Errorf("--at %s is beyond the equation of state of %s", at, m.Name)}
	}
	return nil
}

// temperatureAndPressure reads "800 degC,1.5 GPa".
func temperatureAndPressure(s string) (T, P float64, err error) {
	t, p, ok := strings.Cut(s, ",")
	if !ok {
		return 0, 0, fmt.Errorf("--at %s needs a temperature, a comma and a pressure, for example \"800 degC,1.5 GPa\"", s)
	}
	if T, err = configs.ParseQuantity(strings.TrimSpace(t), "temperature"); err != nil {
		return 0, 0, fmt.Errorf("--at: %w", err)
	}
	if P, err = configs.ParseQuantity(strings.TrimSpace(p), "pressure"); err != nil {
		return 0, 0, fmt.Errorf("--at: %w", err)
	}
	if !(T > 0) || !(P >= 0) {
		return 0, 0, fmt.Errorf("--at %s: needs a temperature above 0 K and a pressure of 0 or more", s)
	}
	return T, P, nil
}
