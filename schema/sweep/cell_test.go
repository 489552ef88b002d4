package sweep

import (
	"math/rand/v2"
	"strconv"
	"testing"

	"betaloom/schema/quantity"
)

// TestCell holds the quick way of reading a cell against exact arithmetic,
// which quantity does.
func TestCell(t *testing.T) {
	random := rand.New(rand.NewPCG(1, 2))
	texts := []string{"0", "-0", "0.000", "1.55", "+1.55", ".5", "5.", "1e-3", "1E+3", "1e308", "1e-320", "1e-400", "1e400", "1e99999999999999999999", "", "1_0", "0x10", "nan", "1.5 um", "1e", "--1"}
	for range 20000 {
		texts = append(texts, strconv.FormatFloat(random.NormFloat64(), 'g', 1+random.IntN(17), 64)+"e"+strconv.Itoa(random.IntN(30)-15))
	}
	for _, unit := range []string{"", "m", "um", "nm", "THz", "kHz", "S/m", "1/K", "um^2", "in", "mil", "deg", "degC", "K"} {
		t.Run("unit "+unit, func(t *testing.T) {
			var u quantity.Unit
			if unit != "" {
				var err error
				if u, err = quantity.ParseUnit(unit); err != nil {
					t.Fatal(err)
				}
			}
			s := newScale(u)
			for _, text := range texts {
				got, gotErr := s.value(text)
				want, wantErr := u.Value(text)
				if got != want || (gotErr == nil) != (wantErr == nil) {
					t.Fatalf("%q: found %g, %v, expected %g, %v", text, got, gotErr, want, wantErr)
				}
			}
		})
	}
}
