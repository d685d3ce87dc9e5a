package bib

// methods are about numerics and statistics.
func methods() []Entry {
	return []Entry{
		{
			Key:      "birdsall-1991",
			Citation: "C. K. Birdsall, IEEE Trans. Plasma Sci. 19, 65 (1991)",
			DOI:      "10.1109/27.106800", Status: StatusMemory,
		},
		{
			Key:      "vahedi-surendra-1995",
			Citation: "V. Vahedi and M. Surendra, Comput. Phys. Commun. 87, 179 (1995)",
			DOI:      "10.1016/0010-4655(94)00171-W", Status: StatusMemory,
		},
		{
			Key:      "skullerud-1968",
			Citation: "H. R. Skullerud, J. Phys. D: Appl. Phys. 1, 1567 (1968)",
			DOI:      "10.1088/0022-3727/1/11/423", Status: StatusMemory,
		},
		{
			Key:      "lewis-1970",
			Citation: "H. R. Lewis, J. Comput. Phys. 6, 136 (1970)",
			DOI:      "10.1016/0021-9991(70)90010-4", Status: StatusMemory,
		},
		{
			Key:      "powis-kaganovich-2024",
			Citation: "A. T. Powis and I. D. Kaganovich, Phys. Plasmas 31, 023901 (2024)",
			Status:   StatusMemory,
		},
		{
			Key: "salmon-2011",
			Citation: "J. K. Salmon, M. A. Moraes, R. O. Dror and D. E. Shaw, Parallel random " +
				"numbers: as easy as 1, 2, 3, Proc. Int. Conf. High Performance Computing, " +
				"Networking, Storage and Analysis (SC11), article 16, p. 1 (2011)",
			DOI: "10.1145/2063384.2063405", Status: StatusMemory,
		},
		{
			Key: "blackman-vigna-2021",
			Citation: "D. Blackman and S. Vigna, Scrambled linear pseudorandom number " +
				"generators, ACM Trans. Math. Softw. 47, 36 (2021)",
			DOI: "10.1145/3460772", Status: StatusMemory,
		},
		{
			Key:      "flyvbjerg-petersen-1989",
			Citation: "H. Flyvbjerg and H. G. Petersen, J. Chem. Phys. 91, 461 (1989)",
			DOI:      "10.1063/1.457480", Status: StatusMemory,
		},
		{
			Key: "tiesinga-2021",
			Citation: "E. Tiesinga, P. J. Mohr, D. B. Newell and B. N. Taylor, " +
				"Rev. Mod. Phys. 93, 025010 (2021)",
			DOI: "10.1103/RevModPhys.93.025010", Status: StatusMemory,
		},
		{
			Key: "juhasz-2021",
			Citation: "Z. Juhasz, J. Durian, A. Derzsi, S. Matejcik, Z. Donko and P. Hartmann, " +
				"Comput. Phys. Commun. 263, 107913 (2021)",
			Status: StatusMemory,
		},
		{
			Key:      "reid-1979",
			Citation: "I. D. Reid, Aust. J. Phys. 32, 231 (1979)",
			DOI:      "10.1071/PH790231", Status: StatusMemory,
		},
		{
			Key:      "lucas-saelee-1975",
			Citation: "J. Lucas and H. T. Saelee, J. Phys. D: Appl. Phys. 8, 640 (1975)",
			Status:   StatusMemory,
		},
	}
}
