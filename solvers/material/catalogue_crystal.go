package material

func oxides() []entry {
	sapphire := "Malitson and Dodge, J. Opt. Soc. Am. 62, 1405 (1972); formula in Dodge, Handbook of Laser Science and Technology IV (1986)"
	devore := "Devore, J. Opt. Soc. Am. 41, 416 (1951), rutile"
	ghosh := "Ghosh, Opt. Commun. 163, 95 (1999)"
	return []entry{
		{
			name: "sapphire-o", source: sapphire,
			formula: roots(0, 1.4313493, 0.0726631, 0.65054713, 0.1193242, 5.3414021, 18.028251),
			rangeUm: [2]float64{0.20, 5.0}, temperature: "20 degC",
		}, {
			name: "sapphire-e", source: sapphire,
			formula: roots(0, 1.5039759, 0.0740288, 0.55069141, 0.1216529, 6.5927379, 20.072248),
			rangeUm: [2]float64{0.20, 5.0}, temperature: "20 degC",
		}, {
			name: "titanium-dioxide-o", source: devore,
			formula: squares(term{power, 5.913, 0}, term{plain, 0.2441, 0.0803}),
			rangeUm: [2]float64{0.43, 1.53},
		}, {
			name: "titanium-dioxide-e", source: devore,
			formula: squares(term{power, 7.197, 0}, term{plain, 0.3322, 0.0843}),
			rangeUm: [2]float64{0.43, 1.53},
		}, {
			name: "quartz-o", source: ghosh,
			formula: poles(0.28604141, 1.07044083, 0.0100585997, 1.10202242, 100),
			rangeUm: [2]float64{0.198, 2.0531},
		}, {
			name: "quartz-e", source: ghosh,
			formula: poles(0.28851804, 1.09509924, 0.0102101864, 1.15662475, 100),
			rangeUm: [2]float64{0.198, 2.0531},
		}, {
			name: "magnesium-oxide", source: "Stephens and Malitson, J. Res. Natl. Bur. Stand. 49, 249 (1952)",
			formula: squares(term{power, 2.956362, 0}, term{power, -0.01062387, 2}, term{power, -0.0000204968, 4},
				term{plain, 0.02195770, 0.01428322}),
			rangeUm: [2]float64{0.36, 5.4}, temperature: "23.3 degC",
		}, {
			name: "cubic-zirconia", source: "Wood and Nassau, Appl. Opt. 21, 2978 (1982), 12 mol % yttria",
			formula: roots(0, 1.347091, 0.062543, 2.117788, 0.166739, 9.452943, 24.320570),
			rangeUm: [2]float64{0.361, 5.135}, temperature: "25 degC",
		}, {
			name: "yttrium-aluminium-garnet", source: "Zelmon, Small and Page, Appl. Opt. 37, 4933 (1998)",
			formula: poles(0, 2.28200, 0.01185, 3.27644, 282.734),
			rangeUm: [2]float64{0.4, 5.0},
		},
	}
}

func halides() []entry {
	dodge := "Dodge, Appl. Opt. 23, 1980 (1984)"
	return []entry{
		{
			name: "calcium-fluoride", source: "Malitson, Appl. Opt. 2, 1103 (1963)",
			formula: roots(0, 0.5675888, 0.050263605, 0.4710914, 0.1003909, 3.8484723, 34.649040),
			rangeUm: [2]float64{0.23, 9.7}, temperature: "24 degC",
		}, {
			name: "barium-fluoride", source: "Malitson, J. Opt. Soc. Am. 54, 628 (1964)",
			formula: roots(0, 0.643356, 0.057789, 0.506762, 0.10968, 3.8261, 46.3864),
			rangeUm: [2]float64{0.27, 10.3}, temperature: "25 degC",
		}, {
			name: "lithium-fluoride", source: "Li, J. Phys. Chem. Ref. Data 5, 329 (1976)",
			formula: roots(0, 0.92549, 0.07376, 6.96747, 32.79),
			rangeUm: [2]float64{0.15, 10}, temperature: "20 degC",
		}, {
			name: "magnesium-fluoride-o", source: dodge,
			formula: roots(0, 0.48755108, 0.04338408, 0.39875031, 0.09461442, 2.3120353, 23.793604),
			rangeUm: [2]float64{0.2, 7.0}, temperature: "19 degC",
		}, {
			name: "magnesium-fluoride-e", source: dodge,
			formula: roots(0, 0.41344023, 0.03684262, 0.50497499, 0.09076162, 2.4904862, 23.771995),
			rangeUm: [2]float64{0.2, 7.0}, temperature: "19 degC",
		},
	}
}

// nonlinear crystals: e and o are the extraordinary and ordinary rays of a
// uniaxial crystal, x, y and z the principal axes of a biaxial one.
func nonlinear() []entry {
	zelmon := "Zelmon, Small and Jundt, J. Opt. Soc. Am. B 14, 3319 (1997), "
	kato := "Kato and Takaoka, Appl. Opt. 41, 5040 (2002)"
	niobate, ktp := [2]float64{0.4, 5.0}, [2]float64{0.43, 3.54}
	return []entry{
		{
			name: "lithium-niobate-o", source: zelmon + "congruent",
			formula: poles(0, 2.6734, 0.01764, 1.2290, 0.05914, 12.614, 474.60),
			rangeUm: niobate, temperature: "21 degC",
		}, {
			name: "lithium-niobate-e", source: zelmon + "congruent",
			formula: poles(0, 2.9804, 0.02047, 0.5981, 0.0666, 8.9543, 416.08),
			rangeUm: niobate, temperature: "21 degC",
		}, {
			name: "magnesium-lithium-niobate-e", source: zelmon + "5 mol % magnesium oxide",
			formula: poles(0, 2.2454, 0.01242, 1.3005, 0.05313, 6.8972, 331.33),
			rangeUm: niobate, temperature: "21 degC",
		}, {
			name: "magnesium-lithium-niobate-o", source: zelmon + "5 mol % magnesium oxide",
			formula: poles(0, 2.4272, 0.01478, 1.4617, 0.05612, 9.6536, 371.216),
			rangeUm: niobate, temperature: "21 degC",
		}, {
			name: "potassium-titanyl-phosphate-x", source: kato,
			formula: squares(term{power, 3.29100, 0}, term{plain, 0.04140, 0.03978}, term{plain, 9.35522, 31.45571}),
			rangeUm: ktp, temperature: "20 degC",
		}, {
			name: "potassium-titanyl-phosphate-y", source: kato,
			formula: squares(term{power, 3.45018, 0}, term{plain, 0.04341, 0.04597}, term{plain, 16.98825, 39.43799}),
			rangeUm: ktp, temperature: "20 degC",
		}, {
			name: "potassium-titanyl-phosphate-z", source: kato,
			formula: squares(term{power, 4.59423, 0}, term{plain, 0.06206, 0.04763}, term{plain, 110.80672, 86.12171}),
			rangeUm: ktp, temperature: "20 degC",
		},
	}
}
