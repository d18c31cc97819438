package model

import (
	"fmt"
	"math"
)

// water holds the properties of liquid water at one temperature.
type water struct {
	tC   float64
	rho  float64 // kg/m³
	mu   float64 // Pa·s
	k    float64 // W/(m·K)
	cp   float64 // J/(kg·K)
	beta float64 // 1/K
}

func (w *water) nu() float64 { return w.mu / w.rho }
func (w *water) pr() float64 { return w.mu * w.cp / w.k }

// waters is saturated liquid water (Incropera & DeWitt, Fundamentals of Heat and Mass Transfer, table A.6; from memory, held by a test to the
// Prandtl numbers of the same table).
var waters = [...]water{
	{6.85, 1000, 1422e-6, 0.582, 4198, 46.04e-6},
	{16.85, 999, 1080e-6, 0.598, 4184, 174.0e-6},
	{26.85, 997, 855e-6, 0.613, 4179, 276.1e-6},
	{36.85, 993, 695e-6, 0.628, 4178, 361.9e-6},
	{46.85, 989, 577e-6, 0.640, 4180, 436.7e-6},
	{56.85, 984, 489e-6, 0.650, 4184, 504.0e-6},
	{66.85, 979, 420e-6, 0.660, 4188, 566.0e-6},
	{76.85, 974, 365e-6, 0.668, 4195, 624.2e-6},
	{86.85, 967, 324e-6, 0.674, 4203, 697.9e-6},
	{96.85, 961, 289e-6, 0.679, 4214, 728.7e-6},
}

// waterAt gives liquid water at tC °C, on a straight line between the rows of waters; beyond them the first or the last. Water of 4 °C, which
// does not expand, lies below the first.
func waterAt(tC float64) water {
	last := len(waters) - 1
	tC = math.Max(waters[0].tC, math.Min(tC, waters[last].tC))
	i := min(int((tC-waters[0].tC)/10), last-1)
	a, b := &waters[i], &waters[i+1]
	s := (tC - a.tC) / (b.tC - a.tC)
	mid := func(x, y float64) float64 { return x + s*(y-x) }
	return water{tC, mid(a.rho, b.rho), mid(a.mu, b.mu), mid(a.k, b.k), mid(a.cp, b.cp), mid(a.beta, b.beta)}
}

// bareWaterW is the film of free convection on a bare surface that lies alone in still water, W/(m²·K), with the water at the mean of both.
func bareWaterW(c *filmCase) float64 {
	free, _ := c.shape.inFluid(&c.size)
	w, m := waterAt((c.foodC+c.mediumC)/2), c.shape.acrossFlowM(&c.size)
	ra := gravity * w.beta * math.Abs(c.foodC-c.mediumC) * m * m * m / (w.nu() * w.nu()) * w.pr()
	return free.nusselt(math.Min(ra, free.most), w.pr()) * w.k / m
}

// inWater makes the film of open water: stated low, and told beside it what a bare surface would have.
func inWater(source string) func(*filmCase) (float64, string) {
	return func(c *filmCase) (float64, string) {
		if math.Abs(c.foodC-c.mediumC) < 1 { // it would be small by how small the difference is
			return waterBathW, source
		}
		free, _ := c.shape.inFluid(&c.size)
		return waterBathW, source + fmt.Sprintf("; a bare surface alone in still water would have about %.0f W/(m²·K) by %s, food surface %.1f °C, water %.1f °C, which nothing but a measurement of your own lets you count on",
			10*math.Round(bareWaterW(c)/10), free.formula, c.foodC, c.mediumC)
	}
}
