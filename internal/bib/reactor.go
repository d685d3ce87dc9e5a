package bib

// reactor entries are about circuits, waveforms and surfaces.
func reactor() []Entry {
	return []Entry{
		{
			Key: "verboncoeur-1993",
			Citation: "J. P. Verboncoeur, M. V. Alves, V. Vahedi and C. K. Birdsall, " +
				"J. Comput. Phys. 104, 321 (1993)",
			Status: StatusMemory,
		},
		{
			Key:      "verboncoeur-2001",
			Citation: "J. P. Verboncoeur, J. Comput. Phys. 174, 421 (2001)",
			Status:   StatusMemory,
		},
		{
			Key: "heil-2008",
			Citation: "B. G. Heil, U. Czarnetzki, R. P. Brinkmann and T. Mussenbrock, " +
				"J. Phys. D: Appl. Phys. 41, 165202 (2008)",
			Status: StatusMemory,
		},
		{
			Key:      "phelps-petrovic-surfaces-1999",
			Citation: "A. V. Phelps and Z. Lj. Petrovic, Plasma Sources Sci. Technol. 8, R21 (1999)",
			Status:   StatusMemory,
		},
		{
			Key:      "vaughan-1989",
			Citation: "J. R. M. Vaughan, IEEE Trans. Electron Devices 36, 1963 (1989)",
			Status:   StatusMemory,
		},
		{
			Key:      "vaughan-1993",
			Citation: "J. R. M. Vaughan, IEEE Trans. Electron Devices 40, 830 (1993)",
			Status:   StatusMemory,
		},
		{
			Key:      "chung-everhart-1974",
			Citation: "M. S. Chung and T. E. Everhart, J. Appl. Phys. 45, 707 (1974)",
			Status:   StatusMemory,
		},
	}
}
