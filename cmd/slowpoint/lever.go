package main

import (
	"fmt"
	"math"
	"strings"

	"slowpoint/cmd/slowpoint/workbook"
	"slowpoint/model"
	"slowpoint/rules"
)

// leverPlans is the largest plan for which a smaller size is looked for where a limit is not met: it costs about a dozen runs a product.
const leverPlans = 100

// leverLeast is the smallest share of the size that is tried, in leverSteps steps that grow.
const (
	leverLeast = 0.3
	leverSteps = 8
)

// lever says, for a product with a limit that is not met, which smaller size would meet every limit in the model; "" if that was
// not looked for. Sizes are whole millimetres, rounded down.
func (r *runner) lever(p *workbook.Product, verdict rules.Verdict) string {
	if verdict != rules.NotMet || len(r.plan.Products) > leverPlans {
		return ""
	}
	name, size := governing(&p.Product)
	if size == nil {
		return ""
	}
	now := *size * 1000
	meets := func(mm float64) bool {
		q := *p
		_, z := governing(&q.Product)
		*z = mm / 1000
		q.Points = nil // they may lie outside the smaller piece; a limit on one of them then cannot be told
		d, err := r.judged(&q)
		return err == nil && d.Judgement.Verdict == rules.Met
	}
	// Downwards from the present size, since "meets" need not be monotonic: a very small piece loses the heat that it carries over.
	bad := math.Ceil(now) // the smallest size above the answer that is known not to do
	good := 0.0
	for k := 1; k <= leverSteps && good == 0; k++ {
		mm := math.Floor(now * (1 - (1-leverLeast)*float64(k*k)/(leverSteps*leverSteps)))
		if mm < 1 || mm >= bad {
			continue
		}
		if meets(mm) {
			good = mm
		} else {
			bad = mm
		}
	}
	if good == 0 {
		return fmt.Sprintf("No smaller %s that was tried, down to %.0f %%, meets every limit in the model: look at times, temperatures and air.", name, 100*leverLeast)
	}
	for bad-good > 1 {
		if mid := math.Floor((good + bad) / 2); meets(mid) {
			good = mid
		} else {
			bad = mid
		}
	}
	return fmt.Sprintf("%s%s %.4g mm → %.0f mm would meet every limit in the model.", strings.ToUpper(name[:1]), name[1:], now, good)
}

// governing is the size that decides how fast heat gets in: the smaller of those that end in cooled faces.
func governing(p *model.Product) (string, *float64) {
	z := &p.Size
	switch p.Shape {
	case model.Slab:
		return "thickness", &z.ThicknessM
	case model.Cylinder, model.Sphere:
		return "diameter", &z.DiameterM
	case model.ShortCylinder:
		if z.LengthM < z.DiameterM {
			return "length", &z.LengthM
		}
		return "diameter", &z.DiameterM
	case model.Bar, model.Brick:
		name, s := "thickness", &z.ThicknessM
		if z.WidthM < *s {
			name, s = "width", &z.WidthM
		}
		if p.Shape == model.Brick && z.LengthM < *s {
			name, s = "length", &z.LengthM
		}
		return name, s
	}
	return "", nil
}
