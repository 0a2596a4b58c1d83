package crystal

import "strings"

// symbols lists the chemical elements by atomic number, from 1.
var symbols = strings.Fields(`
H He
Li Be B C N O F Ne
Na Mg Al Si P S Cl Ar
K Ca Sc Ti V Cr Mn Fe Co Ni Cu Zn Ga Ge As Se Br Kr
Rb Sr Y Zr Nb Mo Tc Ru Rh Pd Ag Cd In Sn Sb Te I Xe
Cs Ba La Ce Pr Nd Pm Sm Eu Gd Tb Dy Ho Er Tm Yb Lu Hf Ta W Re Os Ir Pt Au Hg Tl Pb Bi Po At Rn
Fr Ra Ac Th Pa U Np Pu Am Cm Bk Cf Es Fm Md No Lr Rf Db Sg Bh Hs Mt Ds Rg Cn Nh Fl Mc Lv Ts Og`)

var numbers = func() map[string]int {
	m := make(map[string]int, len(symbols))
	for i, s := range symbols {
		m[s] = i + 1
	}
	return m
}()

// ValidElement reports whether symbol is that of a chemical element, in its
// usual spelling ("Si", not "SI").
func ValidElement(symbol string) bool {
	_, ok := numbers[symbol]
	return ok
}

// AtomicNumber returns the atomic number of an element.
func AtomicNumber(symbol string) (int, bool) {
	z, ok := numbers[symbol]
	return z, ok
}

// group returns the group (1 to 18) of the element with atomic number z and its
// place down the group; the f elements count to group 3.
func group(z int) (group, row int) {
	noble := [...]int{0, 2, 10, 18, 36, 54, 86, 118}
	for row = 1; z > noble[row]; row++ {
	}
	n, left := z-noble[row-1], noble[row]-z // place from the start and to the end of the period
	switch {
	case z == 1:
		return 1, row
	case n <= 2 && z != 2:
		return n, row
	case left <= 15:
		return 18 - left, row
	default: // La to Lu and Ac to Lr, less the last, which stands above
		return 3, row
	}
}

// formulaRank orders elements as in a formula, the most electropositive first:
// the reverse of the element sequence of IUPAC (2005), table VI, which goes down
// group 17, then 16, then H, then groups 15 to 1, then 18.
func formulaRank(symbol string) int {
	z, ok := numbers[symbol]
	if !ok {
		return 0
	}
	g, row := group(z)
	switch {
	case z == 1:
		return 1550 // between the groups 15 and 16
	case g == 18:
		return -row
	}
	return 100*g - row
}
