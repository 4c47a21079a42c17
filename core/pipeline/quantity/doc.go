// Package quantity turns text with units into SI values and back.
//
// A quantity is a number and a unit: "2 mm", "-40 deg", "1.2e-3 kg/m3",
// "(N*m)^2/Hz". A space between number and unit may be left out. A unit is a
// product of symbols: "*" or "·" multiplies, "/" divides (left to right, so
// "N/mm/mm" is N/mm²), a whole number behind a symbol or a parenthesis is its
// power ("m3", "m^3", "m³", "s-1"). Metric prefixes go with metric symbols
// (mm, kN, MPa, mrad), binary ones with bytes (MiB).
//
// A dimension is the vector of powers of the base units metre, kilogram,
// second, radian, kelvin, byte. The angle counts as a base unit of its own,
// so that a moment (N*m) is not a rotational stiffness (N*m/rad) and a
// frequency (Hz = 1/s, cycles) is not a rotational speed (rpm, kept in rad/s).
// Dimensions have names ("length", "rotational speed"); several names may
// stand for one vector ("speed" and "velocity"), and a vector without a name
// is named by its SI unit ("kg*m/rad"). Everywhere a name is asked for, a unit
// is taken as well and stands for its dimension.
//
// All errors are *fault.Error of kind Input with a remedy.
package quantity
