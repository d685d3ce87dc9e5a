package codec_test

import (
	"bytes"
	"fmt"

	"ionfall/internal/codec"
)

func Example() {
	enc := codec.NewEncoder("plasma", 1)
	enc.Float64s("electron.x", []float64{0.25, 1.5})
	enc.Int64("step", 4000)
	var file bytes.Buffer
	if _, err := enc.WriteTo(&file); err != nil {
		fmt.Println(err)
	}

	dec, err := codec.Decode("plasma", 1, file.Bytes())
	fmt.Println(dec.Float64s("electron.x"), dec.Int64("step"), dec.Err(), err)
	_, err = codec.Decode("plasma", 1, file.Bytes()[:60])
	fmt.Println(err)
	// Output:
	// [0.25 1.5] 4000 <nil> <nil>
	// truncated: 60 of 122 bytes
}
