package cli

import (
	"context"
	"errors"
	"fmt"
	"os"
	"regexp"
	"slices"
	"strings"
	"time"

	"github.com/spf13/cobra"

	"shelfward/molecule"
	"shelfward/molecule/smiles"
	"shelfward/planner/route"
	"shelfward/planner/search"
)

// planFlags are the wishes shared by routes, compare, sheet and run.
type planFlags struct {
	from          []string
	fromAny       []string
	via           []string
	not           []string
	count         int
	maxSteps      int
	rankBy        string
	avoid         []string
	time          time.Duration
	timeGiven     func() bool
	maxExpanded   int
	oneEnantiomer bool
	different     bool
	makeAnyway    bool
	make          string
	bench         string
	onlyShelf     bool
	maxHazard     string
	memory        string
	atScale       bool
}

func (f *planFlags) bind(cmd *cobra.Command) {
	fl := cmd.Flags()
	fl.StringArrayVar(&f.from, "from", nil, "a starting material that every route must consume (repeatable, at most four)")
	fl.StringArrayVar(&f.fromAny, "from-any", nil, "a starting material; with several of these every route must consume one of them (repeatable)")
	fl.StringArrayVar(&f.via, "via", nil, "an intermediate that every route must make on its way (repeatable)")
	fl.StringArrayVar(&f.not, "not", nil, "a step 'A.B>>C' that may not be used; '>>C' bans every step to C (repeatable)")
	fl.IntVar(&f.count, "count", 5, "routes listed")
	fl.IntVar(&f.maxSteps, "max-steps", 8, "steps along the longest run")
	fl.StringVar(&f.rankBy, "rank-by", "balanced", "balanced, steps, yield, hazard, cost or waste")
	fl.StringArrayVar(&f.avoid, "avoid", nil, "reagent, solvent, H code, element symbol or transform id to do without (repeatable)")
	fl.DurationVar(&f.time, "time", 10*time.Second, "search limit; what was found by then is returned and marked (none with --max-expanded, unless given)")
	f.timeGiven = func() bool { return fl.Changed("time") }
	fl.IntVar(&f.maxExpanded, "max-expanded", 0, "limit on molecules opened; gives the same bytes every time")
	fl.StringVar(&f.memory, "memory", "2GiB", "search limit; what was found by then is returned and marked")
	fl.BoolVar(&f.oneEnantiomer, "one-enantiomer", false, "ask for absolute configuration")
	fl.BoolVar(&f.different, "different", false, "one route for each key bond (the carbon-carbon bond made last) instead of near copies")
	fl.BoolVar(&f.makeAnyway, "make-anyway", false, "plan a target that stands on the shelf")
	fl.StringVar(&f.make, "make", "", "amount of target that prices and stock are worked out for, such as 10g")
	fl.StringVar(&f.bench, "bench", "", "bench file: what the room can do")
	fl.BoolVar(&f.onlyShelf, "only-shelf", false, "reagents and solvents too must stand on the shelf (water and air excepted)")
	fl.StringVar(&f.maxHazard, "max-hazard", "", "charge nothing graver than this H code or class (0 none to 4 gravest); what was never looked up counts as the gravest")
	fl.BoolVar(&f.atScale, "scale", false, "let cost more what practice avoids at scale: cryogenic baths, gases, exotherms, chromatography, ether")
}

// maxMaxSteps bounds --max-steps: no route on paper is longer, and the search keeps a table per step left.
const maxMaxSteps = 40

// hazardCode tells an H code among the words of --avoid.
var hazardCode = regexp.MustCompile(`^[Hh][0-9]{3}[A-Za-z]*$`)

// check refuses what means nothing whatever the target, before anything is loaded.
func (f *planFlags) check() error {
	switch {
	case f.count < 1:
		return usageError("--count %d: 1 or more was expected", f.count)
	case f.maxSteps < 1 || f.maxSteps > maxMaxSteps:
		return usageError("--max-steps %d: 1 to %d was expected", f.maxSteps, maxMaxSteps)
	case f.time <= 0:
		return usageError("--time %v: more than 0s was expected", f.time)
	case f.maxExpanded < 0:
		return usageError("--max-expanded %d: 1 or more was expected, or 0 for no limit", f.maxExpanded)
	case len(f.from) > search.MaxFrom:
		return usageError("--from: at most %d starting materials, found %d", search.MaxFrom, len(f.from))
	}
	if f.make != "" {
		if _, err := readAmount(f.make); err != nil {
			return usageError("--make: %v", err)
		}
	}
	if _, err := parseMemory(f.memory); err != nil {
		return err
	}
	_, err := route.ParseRankBy(f.rankBy)
	return failWith(exitUsage, err)
}

// limit is the time of the search. A count of molecules stands for itself: by the clock as well, a busy machine
// would answer otherwise than an idle one.
func (f *planFlags) limit() time.Duration {
	if f.maxExpanded > 0 && !f.timeGiven() {
		return 0
	}
	return f.time
}

// options turns flags and case file into planning options.
func (app *App) options(j *job, f *planFlags) (route.Options, error) {
	o := route.Options{From: j.from, Count: f.count, MaxSteps: f.maxSteps, Avoid: f.avoid, Bench: j.bench, OnlyShelf: f.onlyShelf, MaxHazard: f.maxHazard, AtScale: f.atScale, OneEnantiomer: f.oneEnantiomer,
		Different: f.different, MakeAnyway: f.makeAnyway, MakeMol: j.makeMol, Time: f.limit(), MaxExpanded: f.maxExpanded, Workers: app.workers(), Progress: app.progress()}
	for _, word := range f.avoid {
		if err := checkCode(j, "--avoid", word); err != nil {
			return o, err
		}
	}
	if err := checkCode(j, "--max-hazard", f.maxHazard); err != nil {
		return o, err
	}
	var err error
	if o.Memory, err = parseMemory(f.memory); err != nil {
		return o, err
	}
	o.Full = limitMemory(o.Memory)
	if o.RankBy, err = route.ParseRankBy(f.rankBy); err != nil {
		return o, failWith(exitUsage, err)
	}
	if len(f.from) > 0 {
		if o.From, err = j.resolveAll("--from", f.from); err != nil {
			return o, err
		}
	}
	if err = app.wants(j, f, &o); err != nil {
		return o, err
	}
	if len(o.From) > search.MaxFrom { // those of a case file; check has counted the flags
		return o, usageError("from: at most %d starting materials, found %d", search.MaxFrom, len(o.From))
	}
	if f.make != "" {
		if o.MakeMol, err = molOf(f.make, j.target); err != nil {
			return o, usageError("--make: %v", err)
		}
	}
	if f.bench != "" {
		if err := checkFile(f.bench); err != nil {
			return o, err
		}
		if o.Bench, err = route.LoadBench(f.bench); err != nil {
			return o, failWith(exitUsage, err)
		}
	}
	return o, nil
}

// checkCode refuses an H code that the GHS does not have.
func checkCode(j *job, flag, word string) error {
	if !hazardCode.MatchString(word) {
		return nil
	}
	if err := j.room.Hazards.CheckCode("H" + word[1:]); err != nil {
		return usageError("%s: %v", flag, err)
	}
	return nil
}

// wants reads what every route must hold besides its starts, and what none may.
func (app *App) wants(j *job, f *planFlags, o *route.Options) (err error) {
	o.FromAny = j.fromAny
	if len(f.fromAny) > 0 {
		if o.FromAny, err = j.resolveAll("--from-any", f.fromAny); err != nil {
			return err
		}
	}
	if o.Via, err = j.resolveAll("--via", f.via); err != nil {
		return err
	}
	for _, text := range f.not {
		b, err := readBan(text)
		if err != nil {
			return usageError("--not %s: %v", quoted(text), err)
		}
		o.Bans = append(o.Bans, b)
	}
	return nil
}

// readBan reads one step 'A.B>>C'; the left side may be empty.
func readBan(text string) (b route.Ban, err error) {
	b.Text = text
	left, right, isStep := strings.Cut(text, ">>")
	if !isStep || strings.TrimSpace(right) == "" || strings.Contains(right, ".") {
		return b, errors.New("a step 'A.B>>C' with one product was expected")
	}
	if b.Product, err = smiles.Read(strings.TrimSpace(right)); err != nil {
		return b, err
	}
	if left = strings.TrimSpace(left); left == "" {
		return b, nil
	}
	parts := strings.Split(left, ".")
	for i, part := range parts {
		m, err := smiles.Read(part)
		if err != nil {
			return b, err
		}
		b.Reactants = append(b.Reactants, m)
		if i == 0 {
			continue
		}
		if salt, err := smiles.Read(parts[i-1] + "." + part); err == nil {
			b.Salts = append(b.Salts, salt)
		}
	}
	return b, nil
}

func (j *job) resolveAll(flag string, texts []string) ([]*molecule.Molecule, error) {
	var out []*molecule.Molecule
	for _, text := range texts {
		m, err := j.resolve(text)
		if err != nil {
			return nil, usageError("%s: %v", flag, err)
		}
		if m.Key() == j.target.Key() {
			return nil, usageError("%s: %s is the target itself", flag, text)
		}
		out = append(out, m)
	}
	return out, nil
}

// progress reports on standard error once a second, unless --quiet.
func (app *App) progress() func(search.Progress) {
	if app.Quiet {
		return nil
	}
	began, last := time.Now(), time.Now()
	return func(p search.Progress) {
		if now := time.Now(); now.Sub(began) > time.Second && now.Sub(last) > time.Second {
			last = now
			fmt.Fprintf(app.ErrOut, "searching: %d molecules opened, %d routes so far, %.0f s\n", p.Expanded, p.Routes, now.Sub(began).Seconds())
		}
	}
}

// plan screens the target and searches.
func (app *App) plan(ctx context.Context, j *job, o route.Options) (*route.Plan, error) {
	if err := app.screen(j); err != nil {
		return nil, err
	}
	p, err := app.search(ctx, j, o)
	return p, app.printDeclined(err)
}

// search plans a target that has been screened; that its starts or all its routes are restricted is a
// *declinedError.
func (app *App) search(ctx context.Context, j *job, o route.Options) (*route.Plan, error) {
	for _, m := range append(slices.Clone(o.From), o.FromAny...) { // a start counts as in stock, but not as standing on the shelf
		if v := j.room.Restricted.Intermediate(m); v.Declined() && !j.room.Shelf.Has(m) {
			return nil, &declinedError{v}
		}
	}
	p, err := route.Make(ctx, j.room.World(), j.target, o)
	if err == nil {
		err = j.room.Shelf.Err()
	}
	if err != nil {
		return nil, failWith(exitUsage, err)
	}
	return p, app.declineLeftOut(ctx, j, p, o)
}

type routesOptions struct {
	app   *App
	flags planFlags
	out   string
	graph string

	routeGraph string
	targets    string
	explain    []string
}

func newRoutesCommand(app *App) *cobra.Command {
	o := &routesOptions{app: app}
	cmd := &cobra.Command{
		Use: "routes TARGET", Short: "ranked routes to a target from the shelf or from given starting materials",
		Args: func(c *cobra.Command, args []string) error {
			if o.targets != "" && len(args) > 0 {
				return usageError("--targets %s names the targets; found %s as well", o.targets, quoted(args[0]))
			}
			if o.targets != "" {
				return nil
			}
			return exactly(1)(c, args)
		},
		Long: "TARGET is SMILES, a name, synonym or CAS number on the shelf, or a case file (.yaml). With --from every route\n" +
			"consumes every item given.\n\n" +
			"With --targets FILE (SMILES one a line with a title, or an SD file) every target of a list is planned, several at a\n" +
			"time, each within --time, --max-expanded and its part of the cores. One JSON line a target, in the order of the list,\n" +
			"goes to standard output or to --out FILE; in FILE they are safe as soon as written: after an interrupt, a crash or\n" +
			"a power cut the same command goes on with the first target that has no line. At the end stand the solved share,\n" +
			"the throughput, and the single purchases that would open most of the targets without a route.\n" + exitHelp,
		Example: "  shelfward routes 'CCCC(C)C(=O)CC'\n  shelfward routes --targets targets.smi --out answers.jsonl --time 2s\n  shelfward routes testdata/demo/lure-4.yaml --avoid H360\n  shelfward routes cyclohexanone --make-anyway --count 3",
		RunE: func(c *cobra.Command, args []string) error {
			if err := o.flags.check(); err != nil {
				return err
			}
			if o.targets != "" {
				return o.runList(c.Context())
			}
			return o.run(c.Context(), args[0])
		},
	}
	o.flags.bind(cmd)
	cmd.Flags().StringVar(&o.targets, "targets", "", "plan every target of a file of SMILES or an SD file")
	cmd.Flags().StringVar(&o.out, "out", "", "save the plan as a JSON file for compare and sheet; with --targets the file of answers")
	cmd.Flags().StringArrayVar(&o.explain, "explain", nil, "say of this molecule whether it lies on the way, at what cost, and why it was not chosen (repeatable)")
	cmd.Flags().StringVar(&o.graph, "graph", "", "write the explored network of molecules and steps as a DOT file")
	cmd.Flags().StringVar(&o.routeGraph, "route-graph", "", "write the first route's network as a DOT file")
	return cmd
}

func (o *routesOptions) run(ctx context.Context, text string) error {
	j, err := o.app.openFor(ctx, text, func(doubts []string) any { return emptyPlan(doubts) })
	if err != nil {
		return err
	}
	p := j.plan
	if p != nil && len(o.explain) > 0 {
		return usageError("--explain asks about a search; give the target instead of a plan file")
	}
	if p == nil {
		if p, err = o.search(ctx, j); err != nil {
			return err
		}
	}
	if err := o.save(p); err != nil {
		return err
	}
	if o.app.JSON {
		if err := printJSON(o.app.Out, p); err != nil {
			return err
		}
	} else {
		o.app.header(j)
		if err := p.WriteText(o.app.Out); err != nil {
			return err
		}
		fmt.Fprintln(o.app.Out, "\n"+j.room.Hazards.ShortCaution())
	}
	return nothingFound(p)
}

// search plans, and looks into the molecules of --explain.
func (o *routesOptions) search(ctx context.Context, j *job) (*route.Plan, error) {
	opt, err := o.app.options(j, &o.flags)
	if err != nil {
		return nil, err
	}
	var ask []*molecule.Molecule
	for _, text := range o.explain {
		m, err := j.resolve(text)
		if err != nil {
			return nil, usageError("--explain: %v", err)
		}
		if v := j.room.Restricted.Intermediate(m); v.Declined() && len(j.room.Shelf.Find(m)) == 0 {
			return nil, o.app.declined(v)
		}
		ask = append(ask, m)
	}
	var each time.Duration
	opt.Time, each = route.ExplainTime(opt.Time, len(ask))
	p, err := o.app.plan(ctx, j, opt)
	if err != nil {
		return nil, err
	}
	opt.Time = each
	for _, m := range ask {
		if err := p.Explain(ctx, j.room.World(), m, opt); err != nil {
			return nil, failWith(exitUsage, err)
		}
	}
	return p, nil
}

// header prints what was read, and that the shelf is invented where it is.
func (app *App) header(j *job) {
	for _, line := range app.headerLines(j) {
		fmt.Fprintln(app.Out, line)
	}
}

func (app *App) headerLines(j *job) []string {
	lines := []string{j.echo()}
	if j.room.Invented {
		lines = append(lines, "shelf: the built-in example; its amounts, places and prices are INVENTED")
	}
	return lines
}

// emptyPlan is the object of a search that had no target to begin with.
func emptyPlan(doubts []string) *route.Plan {
	return &route.Plan{From: []string{}, FromAny: []string{}, Via: []string{}, Kept: route.Kept{Avoided: []string{}, LeftOut: []route.LeftOut{}}, Routes: []route.Route{}, WouldOpen: []route.Opening{}, Explained: []route.Explained{}, Doubts: doubts}
}

// nothingFound turns a plan without routes into status 3; the reason has been printed.
func nothingFound(p *route.Plan) error {
	if len(p.Routes) == 0 {
		return failWith(exitNothing, errSilent)
	}
	return nil
}

func (o *routesOptions) save(p *route.Plan) error {
	if o.out != "" {
		if err := p.Save(o.out); err != nil {
			return usageError("--out %s: cannot write: %v", o.out, plainReason(err))
		}
	}
	if o.graph != "" {
		if err := writeWhole(o.graph, func(f *os.File) error { return p.NetworkDOT(f) }); err != nil {
			return usageError("--graph: %v", err)
		}
	}
	if o.routeGraph == "" || len(p.Routes) == 0 {
		return nil
	}
	return writeWhole(o.routeGraph, func(f *os.File) error { return p.Routes[0].DOT(f) })
}

// writeWhole writes a file beside its place and renames it, so that a failure leaves no half file.
func writeWhole(path string, write func(*os.File) error) error {
	tmp, err := os.CreateTemp(dirOf(path), ".shelfward-*")
	if err != nil {
		return usageError("%s: cannot write: %v", path, plainReason(err))
	}
	defer os.Remove(tmp.Name())
	if err := write(tmp); err != nil {
		tmp.Close()
		return err
	}
	if err := tmp.Close(); err != nil {
		return err
	}
	if err := os.Chmod(tmp.Name(), 0o644); err != nil {
		return err
	}
	return os.Rename(tmp.Name(), path)
}
