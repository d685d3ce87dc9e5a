package bib

// crossSections are the sources of cross sections.
func crossSections() []Entry {
	return []Entry{
		{
			Key: "phelps-petrovic-1999",
			Citation: "A. V. Phelps and Z. Lj. Petrovic, " +
				"Plasma Sources Sci. Technol. 8, R21 (1999)",
			DOI: "10.1088/0963-0252/8/3/201", Status: StatusRead,
		},
		{
			Key:      "phelps-1994",
			Citation: "A. V. Phelps, J. Appl. Phys. 76, 747 (1994)",
			DOI:      "10.1063/1.357820", Status: StatusRead,
		},
		{
			Key: "yamabe-1983",
			Citation: "C. Yamabe, S. J. Buckman and A. V. Phelps, " +
				"Phys. Rev. A 27, 1345 (1983)",
			DOI: "10.1103/PhysRevA.27.1345", Status: StatusRead,
		},
		{
			Key: "crompton-1970",
			Citation: "R. W. Crompton, M. T. Elford and A. G. Robertson, " +
				"Aust. J. Phys. 23, 667 (1970)",
			Status: StatusMemory,
		},
		{
			Key:      "milloy-crompton-1977",
			Citation: "H. B. Milloy and R. W. Crompton, Phys. Rev. A 15, 1847 (1977)",
			DOI:      "10.1103/PhysRevA.15.1847", Status: StatusMemory,
		},
		{
			Key:      "nesbet-1979",
			Citation: "R. K. Nesbet, Phys. Rev. A 20, 58 (1979)",
			DOI:      "10.1103/PhysRevA.20.58", Status: StatusRead,
		},
		{
			Key:      "kim-rudd-1994",
			Citation: "Y.-K. Kim and M. E. Rudd, Phys. Rev. A 50, 3954 (1994)",
			DOI:      "10.1103/PhysRevA.50.3954", Status: StatusMemory,
		},
		{
			Key:      "rapp-golden-1965",
			Citation: "D. Rapp and P. Englander-Golden, J. Chem. Phys. 43, 1464 (1965)",
			DOI:      "10.1063/1.1696957", Status: StatusRead,
		},
		{
			Key:      "mcdaniel-1977",
			Citation: "E. W. McDaniel et al., Tech. Rep. H-78-1, vol. 2, p. 538 (1977)",
			Status:   StatusRead,
		},
	}
}

// measurements are about drift and ionization in gases, to compare with.
func measurements() []Entry {
	return []Entry{
		{
			Key:      "hornbeck-1951",
			Citation: "J. A. Hornbeck, Phys. Rev. 84, 615 (1951)",
			DOI:      "10.1103/PhysRev.84.615", Status: StatusMemory,
		},
		{
			Key:      "biondi-chanin-1954",
			Citation: "M. A. Biondi and L. M. Chanin, Phys. Rev. 94, 910 (1954)",
			DOI:      "10.1103/PhysRev.94.910", Status: StatusMemory,
		},
		{
			Key: "ellis-1976",
			Citation: "H. W. Ellis, R. Y. Pai, E. W. McDaniel, E. A. Mason and L. A. Viehland, " +
				"At. Data Nucl. Data Tables 17, 177 (1976)",
			Status: StatusMemory,
		},
		{
			Key:      "ward-1962",
			Citation: "A. L. Ward, J. Appl. Phys. 33, 2789 (1962)",
			Status:   StatusMemory,
		},
	}
}
