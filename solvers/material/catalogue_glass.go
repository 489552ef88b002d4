package material

func amorphous() []entry {
	return []entry{
		{
			name:    "fused-silica",
			source:  "Malitson, J. Opt. Soc. Am. 55, 1205 (1965); range extended by Tan, J. Non-Cryst. Solids 223, 158 (1998)",
			formula: roots(0, 0.6961663, 0.0684043, 0.4079426, 0.1162414, 0.8974794, 9.896161),
			rangeUm: [2]float64{0.21, 6.7}, temperature: "20 degC",
		}, {
			name: "germania", source: "Fleming, Appl. Opt. 23, 4486 (1984)",
			formula: roots(0, 0.80686642, 0.068972606, 0.71815848, 0.15396605, 0.85416831, 11.841931),
			rangeUm: [2]float64{0.36, 4.3},
			note:    "germanium dioxide glass; doped silica: b and c linear in the mole fraction between it and fused-silica",
		}, {
			name: "water", source: "Daimon and Masumura, Appl. Opt. 46, 3811 (2007)",
			formula: poles(0, 0.5684027565, 0.005101829712, 0.1726177391, 0.01821153936,
				0.02086189578, 0.02620722293, 0.1130748688, 10.69792721),
			rangeUm: [2]float64{0.182, 1.129}, temperature: "20 degC", note: "index relative to vacuum",
		}, {
			name: "arsenic-trisulfide", source: "Rodney, Malitson and King, J. Opt. Soc. Am. 48, 633 (1958)",
			formula: poles(0, 1.8983678, 0.0225, 1.9222979, 0.0625, 0.8765134, 0.1225,
				0.1188704, 0.2025, 0.9569903, 750),
			rangeUm: [2]float64{0.57, 11.8}, temperature: "25 degC",
		},
	}
}

// glassSource is where the constants of an optical glass were published, by
// its international code: nd - 1 and the Abbe number, three digits each.
const glassSource = "published catalogue dispersion constants of the optical glass of international code "

const glassNote = "index relative to air; the range is that of the spectral lines at which such glass is tabulated"

func opticalGlasses() []entry {
	visible := [2]float64{0.4047, 2.325}
	return []entry{
		{
			name: "borosilicate-crown", source: glassSource + "517642",
			formula: poles(0, 1.03961212, 0.00600069867, 0.231792344, 0.0200179144, 1.01046945, 103.560653),
			rangeUm: [2]float64{0.365, 2.325}, temperature: "22 degC", note: glassNote,
		}, {
			name: "crown", source: glassSource + "522595",
			formula: poles(0, 1.08511833, 0.00661099503, 0.199562005, 0.024110866, 0.930511663, 111.982777),
			rangeUm: [2]float64{0.365, 2.325}, temperature: "22 degC", note: glassNote,
		}, {
			name: "barium-crown", source: glassSource + "573576",
			formula: poles(0, 1.12365662, 0.00644742752, 0.309276848, 0.0222284402, 0.881511957, 107.297751),
			rangeUm: visible, temperature: "22 degC", note: glassNote,
		}, {
			name: "barium-flint", source: glassSource + "670471",
			formula: poles(0, 1.5851495, 0.00926681282, 0.143559385, 0.0424489805, 1.08521269, 105.613573),
			rangeUm: visible, temperature: "22 degC", note: glassNote,
		}, {
			name: "flint", source: glassSource + "620364",
			formula: poles(0, 1.34533359, 0.00997743871, 0.209073176, 0.0470450767, 0.937357162, 111.886764),
			rangeUm: visible, temperature: "22 degC", note: glassNote,
		}, {
			name: "dense-flint-673", source: glassSource + "673323",
			formula: poles(0, 1.52481889, 0.011254756, 0.187085527, 0.0588995392, 1.42729015, 129.141675),
			rangeUm: visible, temperature: "22 degC", note: glassNote,
		}, {
			name: "dense-flint-728", source: glassSource + "728284",
			formula: poles(0, 1.61625977, 0.0127534559, 0.259229334, 0.0581983954, 1.07762317, 116.60768),
			rangeUm: visible, temperature: "22 degC", note: glassNote,
		}, {
			name: "dense-flint-785", source: glassSource + "785258",
			formula: poles(0, 1.73848403, 0.0136068604, 0.311168974, 0.0615960463, 1.17490871, 121.922711),
			rangeUm: visible, temperature: "22 degC", note: glassNote,
		}, {
			name: "dense-flint-805", source: glassSource + "805254",
			formula: poles(0, 1.72448482, 0.0134871947, 0.390104889, 0.0569318095, 1.04572858, 118.557185),
			rangeUm: visible, temperature: "22 degC", note: glassNote,
		}, {
			name: "dense-flint-847", source: glassSource + "847238",
			formula: poles(0, 1.87543831, 0.0141749518, 0.37375749, 0.0640509927, 2.30001797, 177.389795),
			rangeUm: visible, temperature: "22 degC", note: glassNote,
		}, {
			name: "lanthanum-dense-flint", source: glassSource + "850322",
			formula: poles(0, 2.00029547, 0.0121426017, 0.298926886, 0.0538736236, 1.80691843, 156.530829),
			rangeUm: visible, temperature: "22 degC", note: glassNote,
		},
	}
}

func polymers() []entry {
	source := "Sultanova, Kasarova and Nikolov, Acta Phys. Pol. A 116, 585 (2009)"
	measured := [2]float64{0.4368, 1.052}
	return []entry{
		{
			name: "acrylic", source: source, formula: poles(0, 1.1819, 0.011313),
			rangeUm: measured, temperature: "20 degC", note: "poly(methyl methacrylate), PMMA",
		}, {
			name: "polystyrene", source: source, formula: poles(0, 1.4435, 0.020216),
			rangeUm: measured, temperature: "20 degC",
		}, {
			name: "polycarbonate", source: source, formula: poles(0, 1.4182, 0.021304),
			rangeUm: measured, temperature: "20 degC",
		},
	}
}
