package solver

import (
	"math"
	"sort"
	"unsafe"
)

// timetable is a schedule made ready for the event loop, which asks for it in rising order of time, and for
// totals at any time. The zero value is the rate 0.
type timetable struct {
	schedule Schedule
	before   float64   // the rate before the first piece
	totals   []float64 // integral of the rate from 0 to the later of 0 and each piece's start
	begun    int       // pieces that had begun when the loop last asked
}

// newTimetable keeps a copy of the schedule. What begins within slack after 0 begins at 0, and a piece that lasts
// no longer than slack is left out: nothing could be told from each other in so short a time.
func newTimetable(s Schedule, before, slack float64) timetable {
	t := timetable{before: before, schedule: make(Schedule, 0, len(s))}
	for i, p := range s {
		if i+1 < len(s) && s[i+1].Start-p.Start <= slack {
			continue
		}
		if p.Start > 0 && p.Start <= slack {
			p.Start = 0
		}
		t.schedule = append(t.schedule, p)
	}
	t.totals = make([]float64, len(t.schedule))
	for i := 1; i < len(t.schedule); i++ {
		t.totals[i] = t.totals[i-1] + t.schedule.during(i-1, t.schedule[i].Start)
	}
	return t
}

// bytes is the size of what it holds.
func (t *timetable) bytes() int {
	return cap(t.schedule)*int(unsafe.Sizeof(SchedulePiece{})) + cap(t.totals)*int(unsafe.Sizeof(float64(0)))
}

// law returns the rate from time now on. Times must not fall from call to call.
func (t *timetable) law(now float64) law {
	for t.begun < len(t.schedule) && t.schedule[t.begun].Start <= now {
		t.begun++
	}
	if t.begun == 0 {
		return law{value: t.before}
	}
	p := &t.schedule[t.begun-1]
	return law{value: p.rate(now), slope: p.Slope}
}

// next returns the first time after that of the last law at which another piece begins, +Inf for none.
func (t *timetable) next() float64 {
	if t.begun < len(t.schedule) {
		return t.schedule[t.begun].Start
	}
	return math.Inf(1)
}

// total is the integral of a finite rate from 0 to a time, with rate 0 before the first piece.
func (t *timetable) total(at float64) float64 {
	i := sort.Search(len(t.schedule), func(i int) bool { return t.schedule[i].Start > at }) - 1
	if i < 0 {
		return 0
	}
	return t.totals[i] + t.schedule.during(i, at)
}

// moment is the integral of total from 0 to a time.
func (t *timetable) moment(at float64) float64 {
	sum := 0.0
	for i := range t.schedule {
		from, to := t.schedule.span(i, at)
		if to <= from {
			continue
		}
		// A piece adds rate(u) du at u, which is then counted for the remaining at-u.
		h, r := to-from, t.schedule[i].rate(from)
		sum += (at-to)*h*(r+0.5*t.schedule[i].Slope*h) + h*h*(0.5*r+t.schedule[i].Slope*h/6)
	}
	return sum
}
