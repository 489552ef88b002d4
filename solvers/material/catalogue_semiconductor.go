package material

func semiconductors() []entry {
	return []entry{
		{
			name:    "silicon",
			source:  "Salzberg and Villa, J. Opt. Soc. Am. 47, 244 (1957), as fitted by Tatian, Appl. Opt. 23, 4477 (1984)",
			formula: roots(0, 10.6684293, 0.301516485, 0.0030434748, 1.13475115, 1.54133408, 1104),
			rangeUm: [2]float64{1.357, 11.04}, temperature: "26 degC",
			note: "silicon-li reaches the 1.31 um band",
		}, {
			name:    "silicon-li",
			source:  "least-squares fit to the index of Li, J. Phys. Chem. Ref. Data 9, 561 (1980); largest residual 5.8e-5",
			formula: squares(term{power, 11.651722, 0}, term{power, 1.030444, -2}, term{power, -0.000788, -4}),
			rangeUm: [2]float64{1.2, 14}, temperature: "293 K",
		}, {
			name: "germanium", source: "Burnett et al., Proc. SPIE 9974, 99740X (2016)",
			formula: poles(0, 0.4886331, 1.393959, 14.5142535, 0.1626427, 0.0091224, 752.190),
			rangeUm: [2]float64{2, 14}, temperature: "22 degC",
		}, {
			name: "gallium-arsenide", source: "Skauli et al., J. Appl. Phys. 94, 6447 (2003)",
			formula: roots(4.372514, 5.466742, 0.4431307, 0.02429960, 0.8746453, 1.957522, 36.9166),
			rangeUm: [2]float64{0.97, 17}, temperature: "22 degC",
		}, {
			name:    "indium-phosphide",
			source:  "Pettit and Turner, J. Appl. Phys. 36, 2081 (1965); formula in Handbook of Optics, 2nd ed., vol. 2 (1994)",
			formula: roots(6.255, 2.316, 0.6263, 2.765, 32.935),
			rangeUm: [2]float64{0.95, 10},
		}, {
			name: "diamond", source: "Peter, Z. Phys. 15, 358 (1923)",
			formula: roots(0, 0.3306, 0.1750, 4.3356, 0.1060),
			rangeUm: [2]float64{0.226, 0.760},
			note:    "measured to 0.760 um; beyond is the user's extrapolation, through sellmeier",
		}, {
			name: "zinc-selenide", source: "Connolly et al., Proc. SPIE 181, 141 (1979), as fitted by Tatian, Appl. Opt. 23, 4477 (1984)",
			formula: roots(0, 4.45813734, 0.200859853, 0.467216334, 0.391371166, 2.89566290, 47.1362108),
			rangeUm: [2]float64{0.54, 18.2},
		}, {
			name: "zinc-sulfide", source: "Debenham, Appl. Opt. 23, 2238 (1984), cubic",
			formula: squares(term{power, 8.393, 0}, term{plain, 0.14383, 0.2421 * 0.2421}, term{plain, 4430.99, 36.71 * 36.71}),
			rangeUm: [2]float64{0.405, 13}, temperature: "20 degC",
		},
	}
}

func nitrides() []entry {
	pastrnak := "Pastrnak and Roskovcova, Phys. Stat. Sol. 14, K5 (1966)"
	return []entry{
		{
			name: "silicon-nitride", source: "Luke et al., Opt. Lett. 40, 4823 (2015), low-pressure film",
			formula: roots(0, 3.0249, 0.1353406, 40314, 1239.842),
			rangeUm: [2]float64{0.310, 5.504},
		}, {
			name: "aluminium-nitride-o", source: pastrnak,
			formula: roots(2.1399, 1.3786, 0.1715, 3.861, 15.03),
			rangeUm: [2]float64{0.22, 5.0},
		}, {
			name: "aluminium-nitride-e", source: pastrnak,
			formula: roots(2.0729, 1.6173, 0.1746, 4.139, 15.03),
			rangeUm: [2]float64{0.22, 5.0},
		}, {
			name: "gallium-nitride-o", source: "Barker and Ilegems, Phys. Rev. B 7, 743 (1973)",
			formula: roots(2.60, 1.75, 0.256, 4.1, 17.86),
			rangeUm: [2]float64{0.35, 10},
		},
	}
}
