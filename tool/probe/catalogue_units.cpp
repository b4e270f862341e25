// Single numbers: units of angles, copies, sine and cosine.
#include "probe/catalogue.h"
#include "probe/catalogue_numbers.h"

namespace dextral::probe {

namespace {

using In = const double* const*;
using Out = double* const*;

void add_units_of(Catalogue& c, int n) {
  for (bool to_degrees : {false, true})
    c.add({.id = "angle-unit",
           .in = {n},
           .out = {n},
           .eval =
               [=](In i, Out o) {
                 for (int k = 0; k < n; ++k) o[0][k] = i[0][k] * (to_degrees ? 180 / kPi : kPi / 180);
                 return true;
               },
           .say =
               [=](const Bound& b) {
                 Meaning m = meaning(
                     to_degrees ? "radians-to-degrees" : "degrees-to-radians",
                     b.out[0].text + " = " + b.in[0].text + (to_degrees ? " from rad to deg" : " from deg to rad"));
                 term(m, b.in[0], {.kind = Kind::unit, .unit = to_degrees ? Unit::rad : Unit::deg});
                 term(m, b.out[0], {.kind = Kind::unit, .unit = to_degrees ? Unit::deg : Unit::rad});
                 return m;
               }});
}

void add_function(Catalogue& c, std::string id, double (*f)(double)) {
  c.add({.id = id,
         .in = {1},
         .out = {1},
         .eval = [f](In i, Out o) { return o[0][0] = f(i[0][0]), true; },
         .say = [id](const Bound& b) { return meaning(id, b.out[0].text + " = " + id + " of " + b.in[0].text); }});
}

}  // namespace

void add_units(Catalogue& c) {
  add_units_of(c, 1);
  add_units_of(c, 3);
  add_function(c, "copy", [](double x) { return x; });
  add_function(c, "negative", [](double x) { return -x; });
  add_function(c, "sine", [](double x) { return std::sin(x); });
  add_function(c, "cosine", [](double x) { return std::cos(x); });
}

}  // namespace dextral::probe
