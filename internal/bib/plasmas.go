package bib

// plasmas are about discharges, sheaths and probes.
func plasmas() []Entry {
	return []Entry{
		{
			Key:      "nanbu-1997",
			Citation: "K. Nanbu, Phys. Rev. E 55, 4642 (1997)",
			DOI:      "10.1103/PhysRevE.55.4642", Status: StatusMemory,
		},
		{
			Key: "turner-2013",
			Citation: "M. M. Turner, A. Derzsi, Z. Donko, D. Eremin, S. J. Kelly, T. Lafleur and " +
				"T. Mussenbrock, Phys. Plasmas 20, 013507 (2013)",
			DOI: "10.1063/1.4775084", Status: StatusRead,
		},
		{
			Key:      "turner-2006",
			Citation: "M. M. Turner, Phys. Plasmas 13, 033506 (2006)",
			Status:   StatusMemory,
		},
		{
			Key:      "brinkmann-2007",
			Citation: "R. P. Brinkmann, J. Appl. Phys. 102, 093303 (2007)",
			Status:   StatusMemory,
		},
		{
			Key:      "lieberman-1988",
			Citation: "M. A. Lieberman, IEEE Trans. Plasma Sci. 16, 638 (1988)",
			DOI:      "10.1109/27.16552", Status: StatusMemory,
		},
		{
			Key:      "lieberman-1989",
			Citation: "M. A. Lieberman, IEEE Trans. Plasma Sci. 17, 338 (1989)",
			Status:   StatusMemory,
		},
		{
			Key:      "godyak-piejak-1990",
			Citation: "V. A. Godyak and R. B. Piejak, Phys. Rev. Lett. 65, 996 (1990)",
			DOI:      "10.1103/PhysRevLett.65.996", Status: StatusRead,
		},
		{
			Key: "godyak-piejak-alexandrovich-1992",
			Citation: "V. A. Godyak, R. B. Piejak and B. M. Alexandrovich, " +
				"Plasma Sources Sci. Technol. 1, 36 (1992)",
			Status: StatusMemory,
		},
		{
			Key:      "boeuf-1987",
			Citation: "J.-P. Boeuf, Phys. Rev. A 36, 2782 (1987)",
			DOI:      "10.1103/PhysRevA.36.2782", Status: StatusMemory,
		},
		{
			Key:      "benoit-cattin-bernard-1968",
			Citation: "P. Benoit-Cattin and L. C. Bernard, J. Appl. Phys. 39, 5723 (1968)",
			Status:   StatusMemory,
		},
		{
			Key: "kawamura-1999",
			Citation: "E. Kawamura, V. Vahedi, M. A. Lieberman and C. K. Birdsall, " +
				"Plasma Sources Sci. Technol. 8, R45 (1999)",
			Status: StatusMemory,
		},
	}
}
