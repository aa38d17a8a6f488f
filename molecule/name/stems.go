package name

// Numerical terms of the 2013 recommendations (P-14.2), from memory.

var smallStems = [...]string{"", "meth", "eth", "prop", "but", "pent", "hex", "hept", "oct", "non", "dec", "undec", "dodec"}

var unitTerms = [...]string{"", "hen", "do", "tri", "tetra", "penta", "hexa", "hepta", "octa", "nona"}

var tenTerms = [...]string{"", "dec", "cos", "triacont", "tetracont", "pentacont", "hexacont", "heptacont", "octacont", "nonacont"}

// maxStem is the longest chain that has a name here.
const maxStem = 99

// stem is the stem of the alkane with n carbons, without its ending: "hex", "icos".
func stem(n int) string {
	switch {
	case n < 1 || n > maxStem:
		return ""
	case n < len(smallStems):
		return smallStems[n]
	case n == 20:
		return "icos"
	case n == 21:
		return "henicos"
	}
	return unitTerms[n%10] + tenTerms[n/10]
}

// multiplier is the simple multiplying prefix for n: "di", "tri"; empty for 1.
func multiplier(n int) string {
	switch {
	case n == 2:
		return "di"
	case n == 3:
		return "tri"
	case n > 3 && n < 10:
		return unitTerms[n]
	case n > 3 && n <= maxStem:
		return stem(n) + "a"
	}
	return ""
}

// groupMultiplier is the multiplying prefix for compound groups: "bis", "tris", "tetrakis".
func groupMultiplier(n int) string {
	switch n {
	case 1:
		return ""
	case 2:
		return "bis"
	case 3:
		return "tris"
	}
	return multiplier(n) + "kis"
}
