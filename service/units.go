package service

// The contract speaks the trade's units and the solver SI; this file is the only place where one becomes the
// other. Places and lengths (m) and times (s) are the same in both.
const (
	secondsPerHour = 3600.0
	metresPerKm    = 1000.0
)

// flowToSI turns veh/h into veh/s.
func flowToSI(vehPerH float64) float64 { return vehPerH / secondsPerHour }

// flowFromSI turns veh/s into veh/h.
func flowFromSI(vehPerS float64) float64 { return vehPerS * secondsPerHour }

// densityToSI turns veh/km into veh/m.
func densityToSI(vehPerKm float64) float64 { return vehPerKm / metresPerKm }

// densityFromSI turns veh/m into veh/km.
func densityFromSI(vehPerM float64) float64 { return vehPerM * metresPerKm }

// speedToSI turns km/h into m/s.
func speedToSI(kmPerH float64) float64 { return kmPerH * metresPerKm / secondsPerHour }

// speedFromSI turns m/s into km/h.
func speedFromSI(mPerS float64) float64 { return mPerS * secondsPerHour / metresPerKm }

// vehicleHours turns vehicle-seconds into vehicle-hours.
func vehicleHours(vehS float64) float64 { return vehS / secondsPerHour }

// vehicleKm turns vehicle-metres into vehicle-kilometres.
func vehicleKm(vehM float64) float64 { return vehM / metresPerKm }

// spreadFromSI turns m²/veh into km²/veh.
func spreadFromSI(m2PerVeh float64) float64 { return m2PerVeh / (metresPerKm * metresPerKm) }

// spreadRateFromSI turns m²/(veh s) into km²/(veh h).
func spreadRateFromSI(m2PerVehS float64) float64 {
	return m2PerVehS * secondsPerHour / (metresPerKm * metresPerKm)
}
