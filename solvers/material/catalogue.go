package material

import (
	"math"
	"slices"
)

// catalogue is every built-in material. Coefficients stand as published. Those
// of the optical glasses, the polymers, water, zinc-selenide, zinc-sulfide,
// gallium-nitride-o, titanium-dioxide, quartz, magnesium-oxide, cubic-zirconia,
// yttrium-aluminium-garnet, barium-fluoride, lithium-fluoride, the doped
// niobate and potassium-titanyl-phosphate, and of air, were written down from memory;
// the others were compared with an open collection of refractive-index data. A row
// is kept only if it also gives an index known from elsewhere (TestSecondFacts).
func catalogue() []entry {
	return slices.Concat(simple(), amorphous(), opticalGlasses(), polymers(), semiconductors(), nitrides(), oxides(), halides(), nonlinear())
}

// roots is n^2 = 1 + a + sum of b L^2/(L^2 - c^2), of pairs b, c.
func roots(a float64, bc ...float64) formula { return sellmeier(root, a, bc) }

// poles is n^2 = 1 + a + sum of b L^2/(L^2 - c), of pairs b, c.
func poles(a float64, bc ...float64) formula { return sellmeier(pole, a, bc) }

func sellmeier(s shape, a float64, bc []float64) formula {
	f := formula{terms: []term{{power, 1 + a, 0}}}
	for i := 0; i+1 < len(bc); i += 2 {
		f.terms = append(f.terms, term{s, bc[i], bc[i+1]})
	}
	return f
}

// squares is n^2 as a sum of terms.
func squares(terms ...term) formula { return formula{terms: terms} }

func simple() []entry {
	return []entry{
		{
			name: "vacuum", source: "exact",
			formula: formula{bare: true, terms: []term{{power, 1, 0}}},
			rangeUm: [2]float64{0, math.Inf(1)},
		}, {
			name: "air", source: "Ciddor, Appl. Opt. 35, 1566 (1996), standard dry air",
			formula: formula{bare: true, terms: []term{
				{power, 1, 0}, {wave, 0.05792105, 238.0185}, {wave, 0.00167917, 57.362},
			}},
			rangeUm: [2]float64{0.23, 1.69}, temperature: "15 degC",
			note: "at 101325 Pa and 450 ppm of CO2; beyond its range use vacuum, or an index of your own",
		},
	}
}
