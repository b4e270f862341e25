// Maps of the Earth: ecef to the local axes at a latitude and a longitude.
// ned = R2(-(90 deg + latitude)) R3(longitude), enu = R1(90 deg - latitude)
// R3(90 deg + longitude). Constant maps: signed permutations as matrices.
#include "probe/catalogue.h"
#include "probe/catalogue_numbers.h"

namespace dextral::probe {

namespace {

using In = const double* const*;
using Out = double* const*;

Mat local(bool enu, double latitude, double longitude) {
  return enu ? product(elementary(0, kPi / 2 - latitude), elementary(2, kPi / 2 + longitude))
             : product(elementary(1, -(kPi / 2 + latitude)), elementary(2, longitude));
}

void add_local(Catalogue& c, bool enu, bool back, bool degrees) {
  c.add({.id = "ecef-to-local",
         .in = {1, 1},
         .out = {9},
         .eval =
             [=](In i, Out o) {
               double k = degrees ? kPi / 180 : 1;
               Mat m = local(enu, i[0][0] * k, i[1][0] * k);
               return put(back ? transpose(m) : m, o[0]), true;
             },
         .say =
             [=](const Bound& b) {
               std::string name = enu ? "enu" : "ned";
               Meaning m = meaning(back ? name + "-to-ecef" : "ecef-to-" + name,
                                   b.out[0].text + " = " + (back ? name + " to ecef" : "ecef to " + name) +
                                       " at geodetic latitude " + b.in[0].text + ", longitude " + b.in[1].text +
                                       (degrees ? ", deg" : ", rad"));
               Unit unit = degrees ? Unit::deg : Unit::rad;
               term(m, b.in[0], {.kind = Kind::geodetic, .word = "latitude", .unit = unit});
               term(m, b.in[1], {.kind = Kind::geodetic, .word = "longitude", .unit = unit});
               Frame ecef{.name = "ecef"}, there{.name = name};
               term(m, b.out[0], {.kind = Kind::passive, .first = back ? there : ecef, .second = back ? ecef : there});
               m.equivalents.push_back(back ? "active ecef to " + name : "active " + name + " to ecef");
               return m;
             }});
}

void add_constants(Catalogue& c) {
  static constexpr int kOrders[6][3] = {{0, 1, 2}, {1, 2, 0}, {2, 0, 1}, {0, 2, 1}, {2, 1, 0}, {1, 0, 2}};
  for (int p = 0; p < 6; ++p)
    for (int signs = (p == 0 ? 1 : 0); signs < 8; ++signs)
      c.add({.id = "constant-map",
             .in = {},
             .out = {9},
             .eval =
                 [p, signs](In, Out o) {
                   for (int k = 0; k < 9; ++k) o[0][k] = 0;
                   for (int k = 0; k < 3; ++k) o[0][3 * k + kOrders[p][k]] = (signs >> k) & 1 ? -1 : 1;
                   return true;
                 },
             .say =
                 [p, signs](const Bound& b) {
                   std::string rows;
                   bool odd = p >= 3;
                   for (int k = 0; k < 3; ++k) {
                     bool negative = (signs >> k) & 1;
                     odd ^= negative;
                     rows += (k ? ", " : "") + std::string(negative ? "-" : "") + std::string(1, "xyz"[kOrders[p][k]]);
                   }
                   return meaning("constant-map", b.out[0].text + " takes (x, y, z) to (" + rows + "), determinant " +
                                                      (odd ? "-1, changes hand" : "+1"));
                 }});
}

}  // namespace

void add_maps(Catalogue& c) {
  for (bool enu : {false, true})
    for (bool back : {false, true})
      for (bool degrees : {false, true}) add_local(c, enu, back, degrees);
  add_constants(c);
}

}  // namespace dextral::probe
