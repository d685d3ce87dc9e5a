package crosssections_test

import (
	"fmt"

	"ionfall/crosssections"
)

func ExampleLibrary_Gas() {
	lib, err := crosssections.Bundled()
	if err != nil {
		fmt.Println(err)
		return
	}
	argon, err := lib.Gas("Ar")
	if err != nil {
		fmt.Println(err)
		return
	}
	for _, p := range argon.Electron {
		fmt.Printf("%-10s %4.1f eV  %.3g m2 at 20 eV, covered to %g eV\n", p.Kind, p.Threshold,
			p.Table.At(20), p.Table.Limit())
	}
	// Output:
	// elastic     0.0 eV  9.48e-20 m2 at 20 eV, covered to 1000 eV
	// excitation 11.5 eV  9.2e-21 m2 at 20 eV, covered to 1000 eV
	// ionization 15.8 eV  6.17e-21 m2 at 20 eV, covered to 1000 eV
}
