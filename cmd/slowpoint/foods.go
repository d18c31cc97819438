package main

import (
	"fmt"
	"strings"

	"github.com/spf13/cobra"

	"slowpoint/model/food"
)

func foodsCommand() *cobra.Command {
	return &cobra.Command{
		Use: "foods [NAME]", Short: "List the built-in foods with their composition, properties and sources",
		Example: "  slowpoint foods\n  slowpoint foods potato", Args: cobra.MaximumNArgs(1),
		RunE: func(cmd *cobra.Command, args []string) error {
			out := cmd.OutOrStdout()
			n := 0
			for i := range food.Foods {
				f := &food.Foods[i]
				if len(args) > 0 && !strings.Contains(strings.ToLower(f.Name), strings.ToLower(args[0])) {
					continue
				}
				m, ok := food.Named(f.Name)
				if !ok {
					return &failure{exitFault, fmt.Errorf("%s cannot be made from its composition", f.Name)}
				}
				n++
				fmt.Fprintf(out, "%s\n  %s\n", f.Name, m.Composition)
				for _, t := range []float64{5, 60} {
					p := m.Props(t)
					fmt.Fprintf(out, "  at %g °C: conductivity %.3f W/m·K, density %.0f kg/m³, specific heat %.0f J/kg·K\n", t, p.KWmK, p.RhoKgM3, p.CJkgK)
				}
				if f.FreezingC != nil {
					fmt.Fprintf(out, "  freezing point %.1f °C: %s\n", *f.FreezingC, f.FreezingSource)
				} else {
					fmt.Fprintf(out, "  freezing point not known: nothing below -0.5 °C is calculated\n")
				}
				fmt.Fprintf(out, "  source: %s\n", f.Source)
			}
			if n == 0 {
				near := strings.Join(food.Nearest(args[0]), ", ")
				if near == "" {
					near = "none is near; slowpoint foods lists all"
				}
				return &failure{exitInput, fmt.Errorf("no built-in food has %q in its name; nearest: %s", args[0], near)}
			}
			fmt.Fprintf(out, "\n%s. Properties come from composition (Choi & Okos 1986, conductivity by Levy 1981) and scatter by about ±15 %% in conductivity.\n", count(n, "food"))
			return nil
		},
	}
}
