package unit

import (
	"fmt"
	"math"
	"strconv"
)

// Lasting writes seconds from 0 on as a person says them: "1 h 35 min", "3 h 05 min", "4 min 30 s", "2.5 s". From an hour on it is rounded to the
// minute, below to the second, below ten seconds to a tenth. round rounds a number to some decimals; nil is to the nearest.
func Lasting(s float64, round func(v float64, decimals int) float64) string {
	if round == nil {
		round = func(v float64, decimals int) float64 {
			scale := math.Pow(10, float64(decimals))
			return math.Round(v*scale) / scale
		}
	}
	switch whole := round(s, 0); {
	case s < 10:
		return strconv.FormatFloat(round(s, 1), 'f', -1, 64) + " s"
	case whole < 60:
		return fmt.Sprintf("%.0f s", whole)
	case whole < 3600:
		m, rest := int(whole)/60, int(whole)%60
		if rest == 0 {
			return fmt.Sprintf("%d min", m)
		}
		return fmt.Sprintf("%d min %02d s", m, rest)
	}
	m := int64(round(s/60, 0))
	if m%60 == 0 {
		return fmt.Sprintf("%d h", m/60)
	}
	return fmt.Sprintf("%d h %02d min", m/60, m%60)
}
