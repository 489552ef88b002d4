package expr

// Definition is a name that an expression defines.
type Definition struct {
	Name string
	Expr *Expr
}

// Order sorts definitions so that each follows those it names, and keeps
// their order otherwise. circle holds those that refer to themselves, straight or
// through others, and those that need one that does.
func Order(list []Definition) (sorted, circle []Definition) {
	waiting := make(map[string]bool)
	for _, d := range list {
		waiting[d.Name] = true
	}
	for len(list) > 0 {
		var next []Definition
		for _, d := range list {
			if d.Expr.namesAny(waiting) {
				next = append(next, d)
				continue
			}
			sorted = append(sorted, d)
			delete(waiting, d.Name)
		}
		if len(next) == len(list) {
			return sorted, next
		}
		list = next
	}
	return sorted, nil
}

func (e *Expr) namesAny(of map[string]bool) bool {
	for _, name := range e.names {
		if of[name] {
			return true
		}
	}
	return false
}
