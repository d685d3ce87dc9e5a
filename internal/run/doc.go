// Package run turns an input into a simulation and a simulation into a results folder. It is
// the one place that assembles a run.
//
// A run goes through stages, all decided by the state alone and never by the clock, so that an
// interrupted run continues to the same bits:
//
//	pilot      coarse and cheap: finds the density, from which the numerics are chosen
//	settling   final numerics: the density is projected ahead until it stands, then the
//	           discharge is left to itself
//	averaging  until the asked-for errors are reached
//
// Only a budget of processor time depends on the machine; it is checked between periods.
package run
