package config_test

import (
	"fmt"

	"ionfall/internal/config"
)

func ExampleParse() {
	c, err := config.Parse("argon.yaml", []byte(`
gap: 40 mm
gas:
  pressure: 37.5 mTorr
  mixture: {Ar: 1}
drive:
  tones:
    - {frequency: 2 MHz, amplitude: 100 V}
    - {frequency: 13.56 MHz, amplitude: 250 V, phase: 90 deg}
`))
	if err != nil {
		fmt.Println(err)
		return
	}
	fmt.Printf("%.3f Pa, fundamental %v Hz\n", c.Gas.Pressure, c.Drive.Fundamental())
	fmt.Println(c.Errorf("gas.mixture.Ar", "Ar", "a gas of the library", ""))
	// Output:
	// 5.000 Pa, fundamental 40000 Hz
	// argon.yaml:5:13: gas.mixture.Ar: got Ar, want a gas of the library
}

func ExampleParse_errors() {
	_, err := config.Parse("argon.yaml", []byte(`
gap: 40
gas: {pressure: 5 Pa, mixture: {Ar: 0.9}}
drive: {tones: [{frequncy: 13.56 MHz, amplitude: -250 V}]}
`))
	fmt.Println(err)
	// Output:
	// argon.yaml:2:6: gap: got 40, want a length such as 40 mm (units: m, cm, mm, um, nm, in)
	// argon.yaml:3:32: gas.mixture: got fractions with the sum 0.9, want the sum 1 (to 1e-6)
	// argon.yaml:4:18: drive.tones.0.frequncy: unknown key; did you mean "frequency"?
	// argon.yaml:4:50: drive.tones.0.amplitude: got -250 V, want 0 V to 100 kV
}
