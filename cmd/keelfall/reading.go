package main

import (
	"fmt"
	"strings"

	"github.com/spf13/cobra"

	"keelfall/cmd/internal/report"
	"keelfall/configs"
)

func newExampleCmd(s Streams) *cobra.Command {
	return &cobra.Command{
		Use: "example [NAME]", Short: "Prints a built-in experiment, a start of one's own; without NAME, " + defaultExample,
		Long:      "Prints a built-in experiment to start from. Names: " + strings.Join(configs.ExampleNames(), ", ") + ".\nThe arcs are invented.",
		Args:      args(cobra.MaximumNArgs(1)),
		ValidArgs: configs.ExampleNames(),
		RunE: func(_ *cobra.Command, a []string) error {
			name := defaultExample
			if len(a) > 0 {
				name = a[0]
			}
			text, err := configs.Example(name)
			if err != nil {
				return usageError{err}
			}
			if _, err = fmt.Fprint(s.Out, text); err != nil {
				return err
			}
			for _, file := range configs.ExampleReads(name) {
				fmt.Fprintf(s.Err, "%s reads the file %s; \"keelfall example %s\" prints it\n", name, file, file)
			}
			return nil
		},
	}
}

func newCheckCmd(s Streams) *cobra.Command {
	o := &options{Streams: s}
	cmd := &cobra.Command{
		Use: "check FILE", Short: "Reads an experiment and reports its mistakes; computes nothing",
		Args: args(cobra.ExactArgs(1)),
		RunE: func(_ *cobra.Command, a []string) error {
			o.File = a[0]
			e, p, err := o.load()
			if err != nil {
				return err
			}
			return o.print(report.CheckPage(e.Name, p), report.Check(e.Name, e.SHA256, p), report.DefaultsTable(p))
		},
	}
	o.flags(cmd)
	return cmd
}

func newSchemaCmd(s Streams) *cobra.Command {
	return &cobra.Command{
		Use: "schema", Short: "Prints the JSON Schema of an experiment file, for editors", Args: args(cobra.NoArgs),
		RunE: func(*cobra.Command, []string) error {
			b, err := configs.Schema()
			if err != nil {
				return err
			}
			_, err = s.Out.Write(append(b, '\n'))
			return err
		},
	}
}
