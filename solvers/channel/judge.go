package channel

// judge says whether all wanted modes are there, or where to look for the next.
func (fd *finder[T]) judge(round int) (shift float64, done bool, err error) {
	if !fd.counted {
		return fd.lossy(round)
	}
	if len(fd.found) == fd.total {
		return 0, true, nil
	}
	m := min(fd.want, len(fd.found))
	bad, err := fd.gap(m)
	if err != nil {
		return 0, false, err
	}
	if bad < 0 {
		if m == fd.want {
			return 0, true, nil
		}
		low := fd.low
		if m == 0 && round > 0 {
			shift, err := fd.enclose(low, fd.high)
			return shift, false, err
		}
		if m == 0 {
			return fd.high, false, nil
		}
		top := fd.value(m - 1)
		if round > 0 {
			shift, err := fd.enclose(low, fd.below(m-1))
			return shift, false, err
		}
		return top - min(1e-3*top, 0.1*(top-low)), false, nil
	}
	return fd.below(bad), false, nil
}

// enclose halves the stretch from low to high, above which no mode is missing, until it is narrow about the highest missing
// one, and gives its lower end.
func (fd *finder[T]) enclose(low, high float64) (float64, error) {
	const halvings = 16
	for range halvings {
		if high-low < 1e-3*(high-fd.low) || high-low < 1e-9*high {
			break
		}
		pr, err := fd.factor(fromReal[T]((low + high) / 2))
		if err != nil {
			return 0, err
		}
		if pr.above > fd.foundAbove(pr.at) {
			low = pr.at
		} else {
			high = pr.at
		}
	}
	return low, nil
}

// lossy judges without a proof: as many modes as the real parts have down to the lowest wanted one are taken for all. Where fewer
// were found, the search goes on from there a few times.
func (fd *finder[T]) lossy(round int) (shift float64, done bool, err error) {
	enough := fd.want > 0 && len(fd.found) >= fd.want
	if round >= 4 || fd.reals == nil && (enough || round >= 2) {
		return 0, true, nil
	}
	if !enough || fd.reals == nil {
		return fd.high, round >= 2 && fd.total >= 0 && len(fd.found) >= fd.total, nil
	}
	at := fd.below(fd.want - 1)
	n, err := fd.reals(at)
	if err != nil || fd.foundAbove(at) >= n {
		return 0, err == nil, err
	}
	if round%2 == 0 {
		return at, false, nil
	}
	return fd.high, false, nil
}

// value is the Re N of found mode i.
func (fd *finder[T]) value(i int) float64 { return realPart(fd.found[i].n) }

// below gives an N just below found mode i and above the next that is not its twin.
func (fd *finder[T]) below(i int) float64 {
	v := fd.value(i)
	for j := i + 1; j < len(fd.found) && v-fd.value(j) < 1e-7*v; j++ {
		v = fd.value(j)
	}
	next := fd.low
	for j := i + 1; j < len(fd.found); j++ {
		if w := fd.value(j); w < v {
			next = max(next, w)
			break
		}
	}
	return v - min(1e-4*v, (v-next)/2)
}

// gap finds the first of the m highest modes below which more modes are counted than found; -1: none.
func (fd *finder[T]) gap(m int) (int, error) {
	if m == 0 {
		return -1, nil
	}
	missing, err := fd.missingBelow(m - 1)
	if err != nil || !missing {
		return -1, err
	}
	lo, hi := 0, m-1
	for lo < hi {
		mid := (lo + hi) / 2
		missing, err := fd.missingBelow(mid)
		if err != nil {
			return 0, err
		}
		if missing {
			hi = mid
		} else {
			lo = mid + 1
		}
	}
	return lo, nil
}

// missingBelow compares the count with the modes found down to mode i and its twins.
func (fd *finder[T]) missingBelow(i int) (bool, error) {
	at := fd.below(i)
	for _, pr := range fd.proven {
		if pr.at > fd.value(i) {
			continue
		}
		if missing := pr.above > fd.foundAbove(pr.at); !missing || pr.at >= at {
			return missing, nil // none above a lower place: none here
		}
	}
	pr, err := fd.factor(fromReal[T](at))
	return pr.above > fd.foundAbove(pr.at), err
}

func (fd *finder[T]) foundAbove(at float64) (n int) {
	for i := range fd.found {
		if fd.value(i) > at {
			n++
		}
	}
	return n
}
