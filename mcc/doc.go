// Package mcc collides charged particles with a neutral gas by the null-collision Monte Carlo
// method. It knows velocities and cross sections, not the grid.
//
// Candidates. The largest possible collision frequency, nu_max = max over speed of n sigma(g) g,
// makes every particle an equally likely candidate: along the line of "particle times" (particle
// number x step) candidates are Poisson events of density nu_max dt, so only they are looked at,
// and a particle may collide several times in a step. A candidate at relative speed g collides
// by process p with probability n sigma_p(g) g / nu_max, otherwise nothing happens (a null
// collision).
//
// Kinematics. The target moves: its velocity V is drawn from the gas's Maxwellian, and the
// collision is judged by the relative speed g = |v - V|. Most candidates are null whatever the
// target, which a ceiling over the relative speeds that are possible tells without drawing one.
// Elastic and exciting collisions are isotropic in the centre of mass. Ionization shares the
// excess energy equally between both electrons, each sent out isotropically in the target's
// frame; the ion starts with the target's velocity. Other laws of sharing and scattering can be
// chosen (Sharing, Scattering). Attachment and reactions of ions turn the projectile and the
// target into other particles, which the outcome names (Made, Gone).
//
// Units. Velocities are in units of the caller's choice (Unit, m/s), dt in seconds; the inner
// loops then hold no physical constants.
//
// References: H. R. Skullerud, J. Phys. D 1, 1567 (1968); V. Vahedi and M. Surendra, Comput.
// Phys. Commun. 87, 179 (1995); A. V. Phelps, J. Appl. Phys. 76, 747 (1994) for the
// isotropic-plus-backward model of ions.
package mcc
