package name

import (
	"strconv"
	"strings"

	"shelfward/molecule"
)

func fusedAt(s string) (*skeleton, int) {
	if k, n := benzoAt(s); k != nil {
		return k, n
	}
	attached, n := attachedAt(s)
	if attached == nil || n >= len(s) || s[n] != '[' {
		return nil, 0
	}
	c := strings.IndexByte(s[n:], ']')
	if c < 0 {
		return nil, 0
	}
	place := s[n+1 : n+c]
	n += c + 1
	base, k := componentAt(s[n:])
	if base == nil {
		return nil, 0
	}
	pair := fuse(attached, base, place)
	if pair == nil {
		return nil, 0
	}
	return pair, n + k
}

func componentAt(s string) (*skeleton, int) {
	if strings.HasPrefix(s, "[") {
		c := strings.IndexByte(s, ']')
		if c < 0 {
			return nil, 0
		}
		k, n := widmanAt(s[1:c] + "-" + s[c+1:])
		if k == nil || !k.mancude {
			return nil, 0
		}
		return k, n + 1
	}
	if s == "" {
		return nil, 0
	}
	for _, r := range loaded().ringWords[s[0]] {
		if strings.HasPrefix(s, r.word) && len(r.skeleton.bonds) == len(r.skeleton.elements) && r.skeleton.mancude {
			return r.skeleton, len(r.word)
		}
	}
	if k, n := widmanAt(s); k != nil && k.mancude {
		return k, n
	}
	return nil, 0
}

func attachedAt(s string) (*skeleton, int) {
	for full, short := range fusionPrefixes {
		if strings.HasPrefix(s, short+"[") {
			k, n := componentAt(full)
			if n != len(full) {
				return nil, 0
			}
			return k, len(short)
		}
	}
	if tail, ok := strings.CutPrefix(s, "cyclo"); ok {
		for _, f := range stemsAt(tail) {
			if strings.HasPrefix(tail[f.length:], "a[") {
				return cycleSkeleton(f.size), len("cyclo") + f.length + 1
			}
		}
		return nil, 0
	}
	if strings.HasPrefix(s, "[") && strings.IndexByte(s, ']') < 0 {
		return nil, 0
	}
	// The prefix ends in o before a bracket; the component's name has no final e there.
	from := 0
	if s[0] == '[' {
		from = strings.IndexByte(s, ']') + 1
	}
	i := strings.IndexByte(s[from:], '[')
	if i < 2 || s[from+i-1] != 'o' {
		return nil, 0
	}
	word := s[:from+i-1]
	k, n := componentAt(word)
	if k == nil || n != len(word) {
		return nil, 0
	}
	return k, len(word) + 1
}

func fuse(attached, base *skeleton, place string) *skeleton {
	x, y := 1, 2
	if i := strings.IndexByte(place, '-'); i >= 0 {
		parts := strings.Split(place[:i], ",")
		if len(parts) != 2 {
			return nil
		}
		var err1, err2 error
		x, err1 = strconv.Atoi(parts[0])
		y, err2 = strconv.Atoi(parts[1])
		if err1 != nil || err2 != nil {
			return nil
		}
		place = place[i+1:]
	}
	n, m := len(base.elements), len(attached.elements)
	if len(place) != 1 || place[0] < 'a' || int(place[0]-'a') >= n || x < 1 || y < 1 || x > m || y > m {
		return nil
	}
	step := 1
	if y == x-1 || x == 1 && y == m && m > 2 {
		step = -1
	} else if y != x+1 && !(x == m && y == 1) {
		return nil
	}
	p := int(place[0] - 'a')
	var elements []molecule.Element
	element := func(a int32) molecule.Element { return elements[a] }
	r := &ringPair{element: element}
	ring := func(list []molecule.Element, from, step, count int) []int32 {
		var path []int32
		for i := range count {
			path = append(path, int32(len(elements)))
			elements = append(elements, list[((from+i*step)%len(list)+len(list))%len(list)])
		}
		return path
	}
	heads := ring(base.elements, p, 1, 2)
	r.first, r.last = heads[0], heads[1]
	r.a = reversed(ring(base.elements, p+2, 1, n-2))
	if attached.elements[x-1] != elements[0] || attached.elements[y-1] != elements[1] {
		return nil
	}
	r.b = reversed(ring(attached.elements, y-1+step, step, m-2))
	return r.skeleton(elements)
}

func (r *ringPair) skeleton(elements []molecule.Element) *skeleton {
	orders, locants := r.numberings()
	s := &skeleton{locants: locants, mancude: true}
	first, last := 0, 0
	for i, a := range orders[0] {
		s.elements = append(s.elements, elements[a])
		if i > 0 {
			s.bonds = append(s.bonds, [2]int{i - 1, i})
		}
		if a == r.first {
			first = i
		}
		if a == r.last {
			last = i
		}
	}
	s.bonds = append(s.bonds, [2]int{len(orders[0]) - 1, 0}, [2]int{min(first, last), max(first, last)})
	return s
}

func benzoAt(s string) (*skeleton, int) {
	i := 0
	for i < len(s) && (s[i] >= '0' && s[i] <= '9' || s[i] == ',') {
		i++
	}
	if i == 0 || !strings.HasPrefix(s[i:], "-benz") {
		return nil, 0
	}
	at := strings.Split(s[:i], ",")
	body := i + len("-benz")
	for _, skip := range []string{"o", ""} {
		if !strings.HasPrefix(s[body:], skip) {
			continue
		}
		size, elements, n := heteroBody(s[body+len(skip):], len(at))
		if n == 0 || size < 5 {
			continue
		}
		r := &ringPair{first: int32(size + 3), last: int32(size - 2)}
		all := make([]molecule.Element, size+4)
		for k := range all {
			all[k] = 6
		}
		for k, l := range at {
			x, err := strconv.Atoi(l)
			if err != nil || x < 1 || x > size-2 || all[x-1] != 6 {
				return nil, 0
			}
			all[x-1] = elements[k]
		}
		for k := range size - 2 {
			r.a = append(r.a, int32(k))
		}
		for k := size + 2; k > size-2; k-- {
			r.b = append(r.b, int32(k))
		}
		r.element = func(a int32) molecule.Element { return all[a] }
		return r.skeleton(all), body + len(skip) + n
	}
	return nil, 0
}

func heteroBody(s string, count int) (size int, elements []molecule.Element, n int) {
	if s == "" {
		return 0, nil, 0
	}
	for _, r := range loaded().ringWords[s[0]] {
		if !strings.HasPrefix(s, r.word) || len(r.skeleton.bonds) != len(r.skeleton.elements) {
			continue
		}
		for _, e := range heteroOrder {
			for _, x := range r.skeleton.elements {
				if x == e {
					elements = append(elements, e)
				}
			}
		}
		if len(elements) == count && r.skeleton.mancude {
			return len(r.skeleton.elements), elements, len(r.word)
		}
		return 0, nil, 0
	}
	// Locants at will: only the kinds of atoms and the size are wanted.
	var locants []string
	for i := range count {
		locants = append(locants, strconv.Itoa(i+1))
	}
	prefix := strings.Join(locants, ",") + "-"
	k, n := widmanAt(prefix + s)
	if k == nil || !k.mancude {
		return 0, nil, 0
	}
	return len(k.elements), k.elements[:count], n - len(prefix)
}
