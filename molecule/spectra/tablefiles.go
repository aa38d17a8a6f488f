package spectra

import "shelfward/rules"

// sourced are the keys that every row of a table carries: the short name of its source, listed at
// the head of the file, and how we know the value ("memory", or where it was read).
type sourced struct {
	rules.Place
	Source string `yaml:"source" need:"source: pretsch"`
	Known  string `yaml:"known" need:"known: 'memory'"`
	Note   string `yaml:"note"`
}

type baseRow struct {
	sourced `yaml:",inline"`
	Value   float64 `yaml:"value"`
}

type alkaneFile struct {
	Sources    map[string]string `yaml:"sources"`
	Base       baseRow           `yaml:"base"`
	Increments []struct {
		sourced `yaml:",inline"`
		Group   rules.Text `yaml:"group" need:"group: Cl"`
		Alpha   float64    `yaml:"alpha"`
		Beta    float64    `yaml:"beta"`
		Gamma   float64    `yaml:"gamma"`
		Delta   float64    `yaml:"delta"`
	} `yaml:"increments"`
	Branching struct {
		sourced `yaml:",inline"`
		Rows    [][]float64 `yaml:"rows"`
	} `yaml:"branching"`
	Corrections []struct {
		sourced `yaml:",inline"`
		Where   rules.Text `yaml:"where" need:"where: two O on one carbon"`
		Value   float64    `yaml:"value"`
	} `yaml:"corrections"`
}

type alkeneFile struct {
	Sources map[string]string `yaml:"sources"`
	Base    baseRow           `yaml:"base"`
	Chain   []struct {
		sourced `yaml:",inline"`
		At      string  `yaml:"place"`
		Near    float64 `yaml:"near"`
		Far     float64 `yaml:"far"`
	} `yaml:"chain"`
	Steric []struct {
		sourced `yaml:",inline"`
		At      string  `yaml:"place"`
		Value   float64 `yaml:"value"`
	} `yaml:"steric"`
	Groups []struct {
		sourced `yaml:",inline"`
		Group   rules.Text `yaml:"group" need:"group: Cl"`
		Near    float64    `yaml:"near"`
		Far     float64    `yaml:"far"`
	} `yaml:"groups"`
}

// columnsFile is a base and one row of named columns per group.
type columnsFile struct {
	Sources   map[string]string `yaml:"sources"`
	Base      baseRow           `yaml:"base"`
	Methyl    float64           `yaml:"methyl"`
	Methylene float64           `yaml:"methylene"`
	Methine   float64           `yaml:"methine"`
	Groups    []columnsRow      `yaml:"groups"`
	Rings     []struct {
		sourced `yaml:",inline"`
		Ring    string    `yaml:"ring"`
		Proton  []float64 `yaml:"proton"`
	} `yaml:"rings"`
}

type columnsRow struct {
	sourced `yaml:",inline"`
	Group   rules.Text `yaml:"group" need:"group: Cl"`
	Ipso    float64    `yaml:"ipso"`
	Ortho   float64    `yaml:"ortho"`
	Meta    float64    `yaml:"meta"`
	Para    float64    `yaml:"para"`
	Gem     float64    `yaml:"gem"`
	Cis     float64    `yaml:"cis"`
	Trans   float64    `yaml:"trans"`
	Alpha   float64    `yaml:"alpha"`
	Beta    float64    `yaml:"beta"`
	Gamma   float64    `yaml:"gamma"`
	Value   float64    `yaml:"value"`
}

type ringFile struct {
	Sources map[string]string `yaml:"sources"`
	Rings   []struct {
		sourced `yaml:",inline"`
		Ring    rules.Text `yaml:"ring" need:"ring: O C C C C"`
		Carbon  []float64  `yaml:"carbon"`
		Proton  []float64  `yaml:"proton"`
	} `yaml:"rings"`
	OpenChain struct {
		sourced `yaml:",inline"`
		Size3   float64 `yaml:"size3"`
		Size4   float64 `yaml:"size4"`
		Size5   float64 `yaml:"size5"`
		Size6   float64 `yaml:"size6"`
		Larger  float64 `yaml:"larger"`
	} `yaml:"open_chain"`
	OnRing struct {
		sourced `yaml:",inline"`
		Alpha   float64 `yaml:"alpha"`
		Gem     float64 `yaml:"gem"`
		Beta    float64 `yaml:"beta"`
		Gamma   float64 `yaml:"gamma"`
	} `yaml:"on_ring"`
}

type systemsFile struct {
	Sources map[string]string `yaml:"sources"`
	Systems []struct {
		sourced   `yaml:",inline"`
		Name      string     `yaml:"name" need:"name: pyridine"`
		Structure rules.Text `yaml:"structure" need:"structure: 'n1ccccc1'"`
		Carbon    []float64  `yaml:"carbon"`
		Proton    []float64  `yaml:"proton"`
	} `yaml:"systems"`
	Nitrogen columnsOnly `yaml:"nitrogen"`
}

type columnsOnly struct {
	sourced `yaml:",inline"`
	Ortho   float64 `yaml:"ortho"`
	Meta    float64 `yaml:"meta"`
	Para    float64 `yaml:"para"`
}

type carbonylFile struct {
	Sources map[string]string `yaml:"sources"`
	Classes []struct {
		sourced `yaml:",inline"`
		Class   rules.Text `yaml:"class" need:"class: saturated ketone"`
		Carbon  []float64  `yaml:"carbon"`
		Band    []float64  `yaml:"band"`
		Alpha   float64    `yaml:"alpha_carbon"`
		Hetero  float64    `yaml:"alpha_hetero"`
	} `yaml:"classes"`
	RingBand struct {
		sourced `yaml:",inline"`
		Size4   float64 `yaml:"size4"`
		Size5   float64 `yaml:"size5"`
		Size6   float64 `yaml:"size6"`
		Lactam5 float64 `yaml:"lactam5"`
	} `yaml:"ring_band"`
	Chelate map[string]struct {
		sourced  `yaml:",inline"`
		Carbonyl float64 `yaml:"carbonyl"`
		Donor    float64 `yaml:"donor_ipso"`
		Acyl     float64 `yaml:"acyl_ipso"`
		Band     float64 `yaml:"band"`
	} `yaml:"chelate"`
}
