package crosssections

import "fmt"

// Kind is what happens in a collision.
type Kind int

// The kinds of collision.
const (
	// Elastic scattering, momentum-transfer cross section: scatter isotropically.
	Elastic Kind = iota
	// Effective is elastic momentum transfer plus all inelastic processes; a gas that is
	// loaded never holds it, see ElasticFromEffective.
	Effective
	// Excitation of the target, at the cost of the threshold energy.
	Excitation
	// Ionization of the target; the products hold one electron more.
	Ionization
	// Attachment of the electron to the target or to a fragment of it.
	Attachment
	// Isotropic elastic scattering of an ion in the centre-of-mass frame.
	Isotropic
	// Backscatter is scattering of an ion by 180 degrees in the centre-of-mass frame, which
	// for an ion in its parent gas is symmetric charge exchange.
	Backscatter
	// Reaction of an ion with the target to other products.
	Reaction
	// Rotation, Vibration and Dissociation are excitations that say more about the target.
	Rotation
	Vibration
	Dissociation
)

var kindNames = [...]string{
	Elastic: "elastic", Effective: "effective", Excitation: "excitation",
	Ionization: "ionization", Attachment: "attachment", Isotropic: "isotropic",
	Backscatter: "backscatter", Reaction: "reaction",
	Rotation: "rotation", Vibration: "vibration", Dissociation: "dissociation",
}

// String is the name of the kind in gas.yaml.
func (k Kind) String() string {
	if k < 0 || int(k) >= len(kindNames) {
		return fmt.Sprintf("Kind(%d)", int(k))
	}
	return kindNames[k]
}

// OfElectron tells whether the projectile of the kind is an electron.
func (k Kind) OfElectron() bool { return k >= Elastic && k <= Attachment || k >= Rotation }

// Excites tells whether the projectile goes on with the threshold energy less.
func (k Kind) Excites() bool { return k == Excitation || k >= Rotation }

// NeedsThreshold tells whether the kind always costs energy.
func (k Kind) NeedsThreshold() bool { return k.Excites() || k == Ionization }

// needsProducts tells whether the kind means nothing without its products.
func (k Kind) needsProducts() bool {
	return k == Ionization || k == Attachment || k == Reaction
}

// mayHaveThreshold tells whether a threshold makes sense for the kind.
func (k Kind) mayHaveThreshold() bool {
	return k.NeedsThreshold() || k == Attachment
}

// parseKind is the kind with the name.
func parseKind(name string) (Kind, bool) {
	for k, n := range kindNames {
		if n == name {
			return Kind(k), true
		}
	}
	return 0, false
}

// Frame is the meaning of the energy of a table.
type Frame int

// The two meanings of the energy of a table.
const (
	// Lab: energy of the projectile with the target at rest.
	Lab Frame = iota
	// CenterOfMass: energy of the relative motion, mu g^2/2.
	CenterOfMass
)

// String is the name of the frame in a table's header.
func (f Frame) String() string {
	switch f {
	case Lab:
		return "lab"
	case CenterOfMass:
		return "center_of_mass"
	default:
		return fmt.Sprintf("Frame(%d)", int(f))
	}
}

// parseFrame is the frame with the name.
func parseFrame(name string) (Frame, bool) {
	for _, f := range []Frame{Lab, CenterOfMass} {
		if f.String() == name {
			return f, true
		}
	}
	return 0, false
}
