package run

import (
	"ionfall/internal/config"
	"ionfall/mcc"
)

// sharing is how the electrons of an ionization share the excess energy.
func (p *Plan) sharing() mcc.Sharing {
	switch p.sharingName() {
	case config.UniformSharing:
		return mcc.UniformSharing
	case config.OpalSharing:
		return mcc.OpalSharing
	}
	return mcc.EqualSharing
}

// scattering is the angular distribution of elastic collisions of electrons.
func (p *Plan) scattering() mcc.Scattering {
	if p.scatteringName() == config.ForwardScattering {
		return mcc.ScreenedCoulomb
	}
	return mcc.IsotropicScattering
}

func (p *Plan) sharingName() string {
	if p.Case.Gas.IonizationSharing == "" {
		return config.EqualSharing
	}
	return p.Case.Gas.IonizationSharing
}

func (p *Plan) scatteringName() string {
	if p.Case.Gas.ElectronScattering == "" {
		return config.IsotropicScattering
	}
	return p.Case.Gas.ElectronScattering
}
