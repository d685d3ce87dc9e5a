package config

// Dimensions of the reactor: area, circuit, power.

func area() dimension {
	return dimension{"an area", "300 cm2", []unit{
		{name: "m2", also: []string{"m^2", "m²"}},
		{name: "cm2", scale: "1e-4", also: []string{"cm^2", "cm²"}},
		{name: "mm2", scale: "1e-6", also: []string{"mm^2", "mm²"}},
		{name: "in2", scale: "6.4516e-4", also: []string{"in^2", "in²"}},
	}}
}

func capacitancePerArea() dimension {
	return dimension{"a capacitance per area", "1 uF/m2", []unit{
		{name: "F/m2", also: []string{"F/m^2", "F/m²"}},
		{name: "uF/m2", scale: "1e-6", also: []string{"\u00b5F/m2", "\u03bcF/m2", "uF/m^2", "uF/m²"}},
		{name: "nF/m2", scale: "1e-9", also: []string{"nF/m^2", "nF/m²"}},
		{name: "nF/cm2", scale: "1e-5", also: []string{"nF/cm^2", "nF/cm²"}},
		{name: "pF/cm2", scale: "1e-8", also: []string{"pF/cm^2", "pF/cm²"}},
	}}
}

func capacitance() dimension {
	return dimension{"a capacitance", "10 nF", []unit{
		{name: "F", words: []string{"farad"}},
		{name: "uF", scale: "1e-6", also: []string{"\u00b5F", "\u03bcF"}},
		{name: "nF", scale: "1e-9"},
		{name: "pF", scale: "1e-12"},
	}}
}

func resistanceTimesArea() dimension {
	return dimension{"a resistance times area", "5 ohm cm2", []unit{
		{name: "ohm m2"},
		{name: "ohm cm2", scale: "1e-4"},
	}}
}

func resistance() dimension {
	return dimension{"a resistance", "0.5 ohm", []unit{
		{name: "ohm", also: []string{"Ohm", "\u03a9", "\u2126"}},
		{name: "mohm", scale: "1e-3"},
	}}
}

func inductanceTimesArea() dimension {
	return dimension{"an inductance times area", "10 nH m2", []unit{
		{name: "H m2"},
		{name: "uH m2", scale: "1e-6"},
		{name: "nH m2", scale: "1e-9"},
		{name: "uH cm2", scale: "1e-10"},
	}}
}

func inductance() dimension {
	return dimension{"an inductance", "200 nH", []unit{
		{name: "H", words: []string{"henry"}},
		{name: "uH", scale: "1e-6", also: []string{"\u00b5H", "\u03bcH"}},
		{name: "nH", scale: "1e-9"},
	}}
}

func powerPerArea() dimension {
	return dimension{"a power per area", "0.1 W/cm2", []unit{
		{name: "W/m2", also: []string{"W/m^2", "W/m²"}},
		{name: "kW/m2", scale: "1e3", also: []string{"kW/m^2", "kW/m²"}},
		{name: "W/cm2", scale: "1e4", also: []string{"W/cm^2", "W/cm²"}},
		{name: "mW/cm2", scale: "1e1", also: []string{"mW/cm^2", "mW/cm²"}},
	}}
}

func power() dimension {
	return dimension{"a power", "30 W", []unit{
		{name: "W", words: []string{"watt", "watts"}},
		{name: "kW", scale: "1e3"},
	}}
}

func currentPerArea() dimension {
	return dimension{"a current density", "2 mA/cm2", []unit{
		{name: "A/m2", also: []string{"A/m^2", "A/m²"}},
		{name: "mA/cm2", scale: "1e1", also: []string{"mA/cm^2", "mA/cm²"}},
	}}
}

func current() dimension {
	return dimension{"a current", "1.5 A", []unit{
		{name: "A", words: []string{"ampere", "amperes", "amp"}},
		{name: "mA", scale: "1e-3"},
	}}
}
