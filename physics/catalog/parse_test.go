package catalog

import (
	"bytes"
	"errors"
	"io/fs"
	"math"
	"strings"
	"testing"
	"unicode/utf8"

	"bandwright/assets"
)

// own is a correct set of a user, sp3 in zincblende.
const own = `bandset = 1
id = "mine/GaAs"
prototype = "zincblende"
elements = ["As", "Ga"]
a = 5.6533

[obtained]
all = "own"

[fit]
window = [-12.5, 2.0]

[measured]
gap_0K = 1.519

[valence]
As = 5
Ga = 3

[onsite.As]
s = -8.3431
p = 1.0414

[onsite.Ga]
s = -2.6569
p = 3.6686

[spin_orbit.As]
delta = 0.421

[distance_law]
default = 2
sp_sigma = 2.5

[bond.shell1.As-Ga]
ss_sigma = -1.6128
sp_sigma = 1.9399
ps_sigma = 2.5045
pp_sigma = 3.0276
pp_pi = -0.7808
`

func TestOwnSet(t *testing.T) {
	for name, text := range map[string]string{
		"as written":     own,
		"line ends CRLF": strings.ReplaceAll(own, "\n", "\r\n"),
		"byte order":     "\ufeff" + own,
	} {
		s, err := ParseFile("own.toml", []byte(text))
		if err != nil {
			t.Fatalf("%s: %v", name, err)
		}
		if s.Title != s.ID || s.Obtained["all"] != "own" || s.BasisName() != "sp3" || len(s.Bonds) != 5 || !s.Fit.HasWindow {
			t.Errorf("%s: %+v", name, s)
		}
		// Bond length √3 a/4 of the tetrahedral structure.
		if len(s.Lengths) != 1 || math.Abs(s.Lengths[0]-math.Sqrt(3)/4*5.6533) > 1e-12 {
			t.Errorf("%s: bond lengths %v", name, s.Lengths)
		}
		for _, p := range s.Bonds {
			want := 2.0
			if p.Channel() == "spσ" {
				want = 2.5
			}
			if p.Eta != want {
				t.Errorf("%s: %s follows d^−%g, want %g", name, p.Channel(), p.Eta, want)
			}
		}
		if x := integral(t, s, 1, "As", "Ga", p0, s0, Sigma); x != 2.5045 {
			t.Errorf("%s: p of As with s of Ga is %g, want 2.5045", name, x)
		}
	}
}

// Every kind of fault is told with its line and column, where the marked text
// stands, and with a remedy.
func TestFaults(t *testing.T) {
	for _, test := range []struct {
		name     string
		old, new string // replaced once in own; "" appends
		at       string // what the place points at; "" the start of the file
		problem  string
		remedy   string
	}{
		{"empty", own, "", "", "bandset is missing", "bandset = 1"},
		{"later version", "bandset = 1", "bandset = 2", "2\nid", "out of range", "from 1 to 1"},
		{"no id", `id = "mine/GaAs"`, "", "", "id is missing", "give the set a name"},
		{"empty id", `"mine/GaAs"`, `""`, `""`, "id is empty", "give the set a name"},
		{"syntax", "a = 5.6533", "a = 5.65.33", "5.65.33", "Invalid float", "as TOML"},
		{"open quote", `"zincblende"`, `"zincblende`, "\nelements", "", "as TOML"},
		{"key twice", "a = 5.6533", "a = 5.6533\na = 5.650", "a = 5.650", "already been defined", "each key once"},
		{"table twice", "", "[valence]\nAs = 5\n", "[valence]", "already", "each key once"},
		{"zero byte", "5.6533", "5.6\x00533", "\x00", "zero byte", "TOML text"},
		{"unknown key", "a = 5.6533", "a = 5.6533\ncolour = \"red\"", `"red"`, "unknown key colour", "remove it"},
		{"unknown key in a table", "gap_0K = 1.519", "gap_OK = 1.519", "1.519", "unknown key measured.gap_OK", "spelling"},
		{"unknown table", "", "[colours]\ns = 1\n", "[colours]", "unknown key colours", "remove it"},
		{"wrong type", "a = 5.6533", `a = "5.6533"`, `"5.6533"`, "a is a text, not a number", "write a number"},
		{"text wanted", `id = "mine/GaAs"`, "id = 7", "7\nprototype", "id is a number, not a text", "in quotes"},
		{"list wanted", `["As", "Ga"]`, `"As"`, `"As"`, "elements is a text", "a list of texts"},
		{"mixed list", `["As", "Ga"]`, `["As", 3]`, `["As", 3]`, "item 2 of elements is a number", "in quotes"},
		{"table wanted", "[valence]\nAs = 5\nGa = 3", "valence = 44", "44", "unknown key measured.valence", "remove it"},
		{"number for a table", "As = 5\nGa = 3\n\n[onsite.As]\ns = -8.3431\np = 1.0414", "As = 5\nGa = 3\n\n[onsite]\nAs = 3", "3\n\n[onsite.Ga]", "onsite.As is a number, not a table", "write a table"},
		{"date", "s = -8.3431", "s = 1983-01-01", "1983", "a date or time, not a number", "write a number"},
		{"NaN", "s = -8.3431", "s = nan", "nan", "onsite.As.s = NaN is not finite", "finite number"},
		{"infinity", "pp_pi = -0.7808", "pp_pi = -inf", "-inf", "pp_pi = -Inf is not finite", "finite number"},
		{"too large", "pp_pi = -0.7808", "pp_pi = 1e400", "1e400", "", ""},
		{"NaN in a list", "[-12.5, 2.0]", "[-12.5, nan]", "[-12.5", "item 2 of fit.window is not a finite number", "finite numbers"},
		{"no lattice constant", "a = 5.6533\n", "", "", "a is missing", "a = 5.431"},
		{"zero lattice constant", "5.6533", "0.0", `"zincblende"`, "lattice constant", "correct prototype, elements or a"},
		{"unknown prototype", "zincblende", "zinkblende", `"zinkblende"`, "zinkblende", "correct prototype"},
		{"unknown element", `"Ga"]`, `"Gx"]`, `"zincblende"`, "Gx", "correct prototype, elements or a"},
		{"no lengths", `prototype = "zincblende"`, "", "", "lengths at which the bond parameters hold are not given", "lengths = [2.352]"},
		{"zero length", "a = 5.6533", "a = 5.6533\nlengths = [0.0]", "[0.0]", "0 Å is not greater", "positive lengths"},
		{"negative length", "a = 5.6533", "a = 5.6533\nlengths = [-2.4]", "[-2.4]", "-2.4 Å", "positive lengths"},
		{"lengths out of order", "a = 5.6533", "a = 5.6533\nshells = 2\nlengths = [2.4, 2.4]", "[2.4", "lengths[1] = 2.4 Å", "outward"},
		{"lengths too few", "a = 5.6533", "a = 5.6533\nlengths = []", "[]", "lengths has 0 items for 1 shells", "one bond length"},
		{"shells out of range", "a = 5.6533", "a = 5.6533\nshells = 13", "13", "out of range", "from 1 to 12"},
		{"shells no whole number", "a = 5.6533", "a = 5.6533\nshells = 1.25", "1.25", "not a whole number", "whole number"},
		{"bonds of a shell missing", "a = 5.6533", "a = 5.6533\nshells = 2", "2\n\n[obt", "parameters of shell 2 are missing", "[bond.shell2.As-Ga]"},
		{"bond of the crystal missing", "As-Ga]\nss_sigma = -1.6128\nsp_sigma = 1.9399\nps_sigma = 2.5045", "As-As]\nss_sigma = -1\nsp_sigma = 1", "[bond.shell1.As-As]", "bond As–Ga in shell 1 are missing", "[bond.shell1.As-Ga]"},
		{"obtained in other words", `all = "own"`, `all = "guessed"`, `"guessed"`, "does not say how", "begin with seen"},
		{"window upside down", "[-12.5, 2.0]", "[2.0, -12.5]", "[2.0", "not a range", "lower first"},
		{"no electrons", "Ga = 3\n", "", "[valence]", "valence electrons of Ga is missing", "[valence]"},
		{"too many electrons", "Ga = 3", "Ga = 33", "33", "33 valence electrons of Ga are out of range", "of the atom"},
		{"electrons without orbitals", "Ga = 3", "Ga = 3\nIn = 3", "3\n\n[onsite", "In has valence electrons but no orbitals", "[onsite.In]"},
		{"no chemical element", "[onsite.Ga]", "[onsite.Gx]", "[onsite.Gx]", `"Gx" in onsite is no chemical element`, "such as Si"},
		{"orbital unknown", "p = 1.0414", "f = 1.0414", "1.0414", "orbital shell", `"s*"`},
		{"no orbitals", "[onsite.Ga]\ns = -2.6569\np = 3.6686", "[onsite.Ga]", "[onsite.Ga]", "Ga has no orbitals", "s = -4.2"},
		{"splitting twice", "delta = 0.421", "delta = 0.421\nlambda = 0.14", "[spin_orbit.As]", "given once", "delta/3"},
		{"splitting without p", "[spin_orbit.As]", "[spin_orbit.In]", "[spin_orbit.In]", "a p shell that the set does not have", "give In a p orbital"},
		{"exponent of nothing", "sp_sigma = 2.5", "sq_sigma = 2.5", "2.5\n", "sq_sigma is no bond parameter", "use default"},
		{"exponent out of range", "default = 2", "default = 200", "200", "out of range", "usually 2"},
		{"shell beyond", "[bond.shell1.As-Ga]", "[bond.shell2.As-Ga]\nss_sigma = 1\n[bond.shell1.As-Ga]", "[bond.shell2.As-Ga]", "unknown key bond.shell2", "shell1"},
		{"order of the letters", "As-Ga]", "As-As]", "2.5045", "ps_sigma stands for a bond of two As atoms in the wrong order", "s, s*, p, d"},
		{"parameter misspelt", "pp_pi", "pp_pu", "-0.7808", `"pp_pu" is no bond parameter`, "ss_sigma"},
		{"parameter impossible", "pp_pi = -0.7808", "pp_pi = -0.7808\nsp_pi = 1", "1\n", `"sp_pi" is no bond parameter`, "ss_sigma"},
		{"parameter missing", "pp_pi = -0.7808", "", "[bond.shell1.As-Ga]", "pp_pi is missing in bond.shell1.As-Ga", "0 if it is meant to vanish"},
		{"parameter without orbital", "pp_pi = -0.7808", "pp_pi = -0.7808\nsd_sigma = 1", "1\n", "needs d of Ga", "[onsite.Ga]"},
		{"parameter twice, as a sum", "ss_sigma = -1.6128", "ss_sigma = -1.6128\nV_ss = -6.4512", "-1.6128", "given already", "keep one"},
		{"sum misspelt", "ss_sigma = -1.6128", "V_sz = -6.4512", "-6.4512", `"V_sz" is no bond parameter`, "ss_sigma"},
		{"half a pair of sums", "pp_sigma = 3.0276\npp_pi = -0.7808", "V_xx = 1.95", "1.95", "V_xx stands without V_xy", "add V_xy"},
		{"the other half", "pp_sigma = 3.0276\npp_pi = -0.7808", "V_xy = 1.95", "1.95", "V_xy stands without V_xx", "add V_xx"},
		{"pair of strangers", "As-Ga]", "As-In]", "[bond.shell1.As-In]", `"As-In" names no pair`, "As-Ga"},
		{"pair both ways", "", "[bond.shell1.Ga-As]\nss_sigma = 1\n", "[bond.shell1.Ga-As]", "given twice", "keep one"},
	} {
		text := own
		if test.old == "" {
			text += test.new
		} else {
			text = strings.Replace(own, test.old, test.new, 1)
			if text == own {
				t.Fatalf("%s: %q is not in the set", test.name, test.old)
			}
		}
		_, err := ParseFile("own.toml", []byte(text))
		var fe *FileError
		if !errors.As(err, &fe) {
			t.Errorf("%s: error is %v, want a *FileError", test.name, err)
			continue
		}
		line, column := 1, 1
		if test.at != "" {
			i := strings.LastIndex(text, test.at)
			if i < 0 {
				t.Fatalf("%s: %q is not in the set", test.name, test.at)
			}
			line += strings.Count(text[:i], "\n")
			column = 1 + utf8.RuneCountInString(text[strings.LastIndexByte(text[:i], '\n')+1:i])
		}
		if fe.File != "own.toml" || fe.Line != line || fe.Column != column {
			t.Errorf("%s: told at %d:%d, stands at %d:%d: %v", test.name, fe.Line, fe.Column, line, column, err)
		}
		if !strings.Contains(fe.Problem, test.problem) || !strings.Contains(fe.Remedy, test.remedy) || fe.Remedy == "" {
			t.Errorf("%s: %q; %q, want %q; %q", test.name, fe.Problem, fe.Remedy, test.problem, test.remedy)
		}
		if want := "own.toml:"; !strings.HasPrefix(err.Error(), want) || !strings.Contains(err.Error(), "; "+fe.Remedy) {
			t.Errorf("%s: message %q", test.name, err)
		}
	}
}

func shippedFiles(t testing.TB) map[string][]byte {
	t.Helper()
	files := make(map[string][]byte)
	err := fs.WalkDir(assets.Sets, "sets", func(name string, d fs.DirEntry, err error) error {
		if err != nil || d.IsDir() || !strings.HasSuffix(name, ".toml") {
			return err
		}
		files[name], err = assets.Sets.ReadFile(name)
		return err
	})
	if err != nil {
		t.Fatal(err)
	}
	return files
}

// Every shipped set is read, says where it comes from and what it cannot do,
// and has a file named after its id.
func TestShipped(t *testing.T) {
	files := shippedFiles(t)
	if len(files) != len(Shipped()) {
		t.Errorf("%d files, %d sets", len(files), len(Shipped()))
	}
	ids := make(map[string]bool)
	for _, s := range Shipped() {
		if ids[s.ID] {
			t.Errorf("%s twice", s.ID)
		}
		ids[s.ID] = true
		if _, ok := files["sets/"+s.ID+".toml"]; !ok {
			t.Errorf("%s does not stand in sets/%s.toml", s.ID, s.ID)
		}
		if s.Source.Authors == "" || s.Fit.To == "" || s.Obtained["all"] == "" || len(s.Limits) < 3 {
			t.Errorf("%s: source %q, fitted to %q, obtained %v, %d limits", s.ID, s.Source, s.Fit.To, s.Obtained, len(s.Limits))
		}
		c, err := s.Crystal()
		if err != nil {
			t.Errorf("%s: %v", s.ID, err)
			continue
		}
		electrons := 0.0
		for _, site := range c.Sites {
			electrons += s.Valence[site.Element]
		}
		// Octet of tetrahedral crystals; valence of the metals (common practice).
		want := map[string]float64{"Al": 3, "Pb": 4}[s.Elements[0]]
		if len(c.Sites) == 2 {
			want = 8
		}
		if electrons != want {
			t.Errorf("%s: %g electrons in the cell, want %g", s.ID, electrons, want)
		}
	}
}

func TestLookup(t *testing.T) {
	for _, test := range []struct{ id, want string }{
		{"vogl1983/si", "did you mean vogl1983/Si"},
		{"vogl1984/Sn", "did you mean vogl1983/Sn"},
		{"nonsense", "use one of boykin2004/Si"},
		{"", "use one of"},
	} {
		if s, err := Lookup(test.id); s != nil || err == nil || !strings.Contains(err.Error(), test.want) {
			t.Errorf("Lookup(%q) = %v, %v; want %q", test.id, s, err, test.want)
		}
	}
}

// FuzzParse: whatever is read, the answer is a usable set or a message with a
// place inside the file and a remedy.
func FuzzParse(f *testing.F) {
	for _, data := range shippedFiles(f) {
		f.Add(data)
	}
	f.Add([]byte(own))
	f.Add([]byte("bandset = 1\nid = \"x\"\n[[bond]]\nx = 1\n"))
	f.Add([]byte("bandset = 1\nid = \"x\"\nbond.shell1.\"Si-Si\" = {V_ss = 1}\nonsite = {Si = {s = 1}}\nvalence = {Si = 4}\nlengths = [2]"))
	f.Add([]byte("bandset = 1\r\nid = \"\"\"\nx\"\"\"\n[onsite.\"\"]\n"))
	f.Fuzz(func(t *testing.T, data []byte) {
		if len(data) > 1<<16 {
			return
		}
		s, err := ParseFile("fuzz.toml", data)
		if err != nil {
			var fe *FileError
			if s != nil || !errors.As(err, &fe) {
				t.Fatalf("%v, %v", s, err)
			}
			if fe.Problem == "" || fe.Remedy == "" || strings.Contains(err.Error(), "%!") {
				t.Fatalf("message %q", err)
			}
			lines := bytes.Split(data, []byte("\n"))
			if fe.Line < 1 || fe.Line > len(lines) || fe.Column < 1 || fe.Column > len(lines[fe.Line-1])+2 {
				t.Fatalf("place %d:%d is not in the file: %v", fe.Line, fe.Column, err)
			}
			return
		}
		if s.ID == "" || len(s.OnSite) == 0 || s.BasisName() == "" || len(s.Lengths) != s.Shells {
			t.Fatalf("unusable set %+v", s)
		}
		for _, p := range s.Bonds {
			if math.IsNaN(p.Value) || math.IsInf(p.Value, 0) || p.Channel() == "" || !s.HasPair(p.Shell, p.First, p.Second) {
				t.Fatalf("parameter %+v", p)
			}
		}
		for element := range s.OnSite {
			for l, e := range s.OnSite[element] {
				if math.IsNaN(e) || math.IsInf(e, 0) {
					t.Fatalf("%s %s = %g", element, l, e)
				}
			}
		}
		_, _ = s.Crystal()
		_ = s.Source.String()
	})
}
