package main

import (
	"fmt"
	"io"
	"strings"

	"github.com/spf13/cobra"

	"slowpoint/model/food"
)

func foodsCommand() *cobra.Command {
	return &cobra.Command{
		Use: "foods [NAME]", Short: "List the built-in foods with their composition, properties and sources",
		Long:    "List the built-in foods with their composition, properties and sources. With NAME, or a part of one: their properties at more temperatures, frozen too.",
		Example: "  slowpoint foods\n  slowpoint foods potato", Args: takes(0, 1, ""),
		RunE: func(cmd *cobra.Command, args []string) error {
			out := cmd.OutOrStdout()
			n, freezes := 0, false
			for i := range food.Foods {
				f := &food.Foods[i]
				if len(args) > 0 && !strings.Contains(strings.ToLower(f.Name), strings.ToLower(args[0])) {
					continue
				}
				n++
				freezes = freezes || f.FreezingC != nil
				printFood(out, f, len(args) > 0)
			}
			if n == 0 {
				near := strings.Join(food.Nearest(args[0]), ", ")
				if near == "" {
					near = "none is near; slowpoint foods lists all"
				}
				return &failure{exitInput, fmt.Errorf("no built-in food has %q in its name; nearest: %s", args[0], near)}
			}
			fmt.Fprintf(out, "\n%s. %s.\n", count(n, "food"), strings.ToUpper(food.Method[:1])+food.Method[1:])
			if len(args) > 0 && freezes {
				fmt.Fprintf(out, "%s; J/kg·K counts the melting there. Ice is in %% of the whole mass.\n", strings.ToUpper(food.FreezingMethod[:1])+food.FreezingMethod[1:])
			}
			fmt.Fprintf(out, "Published conductivities of one food scatter by about ±15 %%, more than the rules that predict them differ.\n")
			return nil
		},
	}
}

// printFood writes what is known of a built-in food, wide with more temperatures.
func printFood(out io.Writer, f *food.Food, wide bool) {
	fmt.Fprintf(out, "%s\n  %s\n", f.Name, f.Composition)
	if f.FreezingC != nil {
		fmt.Fprintf(out, "  freezing point %.1f °C: %s\n", *f.FreezingC, f.FreezingSource)
	} else {
		fmt.Fprintf(out, "  freezing point not known: nothing below -0.5 °C is calculated\n")
	}
	fmt.Fprintf(out, "  source: %s\n", f.Source)
	if f.Airy() {
		fmt.Fprintf(out, "  it holds much air: give a row of this name in the sheet Foods with its measured Density and a Source\n")
		return
	}
	m := f.Material()
	temperatures := []float64{5, 60}
	if wide {
		temperatures = []float64{0, 5, 20, 40, 60, 80, 100}
		if m.EnthalpyJkg != nil {
			temperatures = append([]float64{-30, -20, -10, -5, *f.FreezingC}, temperatures...)
		}
	}
	head, line := "      °C   W/m·K   kg/m³   J/kg·K", "  %6.1f   %5.3f   %5.0f   %6.0f"
	if m.IceShare != nil && wide {
		head += "   ice %"
	}
	fmt.Fprintln(out, head)
	for _, t := range temperatures {
		p := m.Props(t)
		fmt.Fprintf(out, line, t, p.KWmK, p.RhoKgM3, p.CJkgK)
		if m.IceShare != nil && wide {
			fmt.Fprintf(out, "   %5.1f", 100*m.IceShare(t))
		}
		fmt.Fprintln(out)
	}
}
