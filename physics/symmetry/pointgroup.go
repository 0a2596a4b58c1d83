package symmetry

// PointGroup returns the name of the point group after Hermann and Mauguin and
// after Schoenflies, e.g. "m-3m", "Oh". Both are empty if the operations are not
// a crystallographic point group, which Find excludes.
func (g *Group) PointGroup() (hermannMauguin, schoenflies string) {
	// How many operations of each type, in the order -6 -4 -3 -2 -1 1 2 3 4 6.
	var n [10]int
	for _, o := range g.Ops {
		if t := operationType(o.R); t >= 0 {
			n[t]++
		}
	}
	for _, p := range pointGroups {
		if p.count == n {
			return p.hm, p.schoenflies
		}
	}
	return "", ""
}

// operationType returns the place of an operation in the order -6 -4 -3 -2 -1 1 2
// 3 4 6, from its trace and determinant (International Tables, vol. A,
// section 11.2), or -1.
func operationType(r [3][3]int) int {
	trace := r[0][0] + r[1][1] + r[2][2]
	det := determinant(r)
	order := map[int]int{-1: 2, 0: 3, 1: 4, 2: 6, 3: 1}[det*trace]
	for i, t := range [...]int{-6, -4, -3, -2, -1, 1, 2, 3, 4, 6} {
		if order != 0 && t == det*order {
			return i
		}
	}
	return -1
}

// pointGroups lists the 32 crystallographic point groups by the numbers of
// their operations; a mirror counts as -2 (International Tables, vol. A, chapter 10).
var pointGroups = []struct {
	hm, schoenflies string
	count           [10]int
}{
	{"1", "C1", [10]int{0, 0, 0, 0, 0, 1, 0, 0, 0, 0}},
	{"-1", "Ci", [10]int{0, 0, 0, 0, 1, 1, 0, 0, 0, 0}},
	{"2", "C2", [10]int{0, 0, 0, 0, 0, 1, 1, 0, 0, 0}},
	{"m", "Cs", [10]int{0, 0, 0, 1, 0, 1, 0, 0, 0, 0}},
	{"2/m", "C2h", [10]int{0, 0, 0, 1, 1, 1, 1, 0, 0, 0}},
	{"222", "D2", [10]int{0, 0, 0, 0, 0, 1, 3, 0, 0, 0}},
	{"mm2", "C2v", [10]int{0, 0, 0, 2, 0, 1, 1, 0, 0, 0}},
	{"mmm", "D2h", [10]int{0, 0, 0, 3, 1, 1, 3, 0, 0, 0}},
	{"4", "C4", [10]int{0, 0, 0, 0, 0, 1, 1, 0, 2, 0}},
	{"-4", "S4", [10]int{0, 2, 0, 0, 0, 1, 1, 0, 0, 0}},
	{"4/m", "C4h", [10]int{0, 2, 0, 1, 1, 1, 1, 0, 2, 0}},
	{"422", "D4", [10]int{0, 0, 0, 0, 0, 1, 5, 0, 2, 0}},
	{"4mm", "C4v", [10]int{0, 0, 0, 4, 0, 1, 1, 0, 2, 0}},
	{"-42m", "D2d", [10]int{0, 2, 0, 2, 0, 1, 3, 0, 0, 0}},
	{"4/mmm", "D4h", [10]int{0, 2, 0, 5, 1, 1, 5, 0, 2, 0}},
	{"3", "C3", [10]int{0, 0, 0, 0, 0, 1, 0, 2, 0, 0}},
	{"-3", "C3i", [10]int{0, 0, 2, 0, 1, 1, 0, 2, 0, 0}},
	{"32", "D3", [10]int{0, 0, 0, 0, 0, 1, 3, 2, 0, 0}},
	{"3m", "C3v", [10]int{0, 0, 0, 3, 0, 1, 0, 2, 0, 0}},
	{"-3m", "D3d", [10]int{0, 0, 2, 3, 1, 1, 3, 2, 0, 0}},
	{"6", "C6", [10]int{0, 0, 0, 0, 0, 1, 1, 2, 0, 2}},
	{"-6", "C3h", [10]int{2, 0, 0, 1, 0, 1, 0, 2, 0, 0}},
	{"6/m", "C6h", [10]int{2, 0, 2, 1, 1, 1, 1, 2, 0, 2}},
	{"622", "D6", [10]int{0, 0, 0, 0, 0, 1, 7, 2, 0, 2}},
	{"6mm", "C6v", [10]int{0, 0, 0, 6, 0, 1, 1, 2, 0, 2}},
	{"-62m", "D3h", [10]int{2, 0, 0, 4, 0, 1, 3, 2, 0, 0}},
	{"6/mmm", "D6h", [10]int{2, 0, 2, 7, 1, 1, 7, 2, 0, 2}},
	{"23", "T", [10]int{0, 0, 0, 0, 0, 1, 3, 8, 0, 0}},
	{"m-3", "Th", [10]int{0, 0, 8, 3, 1, 1, 3, 8, 0, 0}},
	{"432", "O", [10]int{0, 0, 0, 0, 0, 1, 9, 8, 6, 0}},
	{"-43m", "Td", [10]int{0, 6, 0, 6, 0, 1, 3, 8, 0, 0}},
	{"m-3m", "Oh", [10]int{0, 6, 8, 9, 1, 1, 9, 8, 6, 0}},
}
