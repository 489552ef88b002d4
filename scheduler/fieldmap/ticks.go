package fieldmap

import (
	"math"
	"strconv"
	"strings"

	"gonum.org/v1/plot"
)

// ticks are round numbers, about five of them, after Heckbert, Nice numbers for graph labels, in Graphics Gems (1990), with a
// short one between each two.
type ticks struct{}

// Ticks implements plot.Ticker.
func (ticks) Ticks(low, high float64) (list []plot.Tick) {
	const about, hair = 5, 1e-9
	width := high - low
	decade := math.Pow(10, math.Floor(math.Log10(width/about)))
	step := 10 * decade
	for _, f := range []float64{1, 2, 5} {
		if width/(f*decade) <= about+1.5 {
			step = f * decade
			break
		}
	}
	decimals := max(0, -int(math.Floor(math.Log10(step)+hair)))
	for i := math.Ceil(2*low/step - hair); i*step/2 <= high+hair*width; i++ {
		t := plot.Tick{Value: i * step / 2}
		if math.Mod(i, 2) == 0 {
			t.Label = strings.Replace(strconv.FormatFloat(t.Value+0, 'f', decimals, 64), "-", "−", 1)
		}
		list = append(list, t)
	}
	return list
}
