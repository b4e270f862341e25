// Turns: rotation vectors, axis and angle, modified Rodrigues parameters.
// `turn ?A to ?B` is the active map ?A to ?B; its transpose is the passive one.
#include "probe/catalogue.h"
#include "probe/catalogue_numbers.h"

namespace dextral::probe {

namespace {

using In = const double* const*;
using Out = double* const*;

Quantity sense(bool is_active) { return is_active ? active("A", "B") : passive("A", "B"); }
std::string word(bool is_active) { return is_active ? "active" : "passive"; }

struct FormOf {
  Form form;
  const char* id;
  const char* words;
};
constexpr FormOf kForms[] = {{Form::rotation_vector, "rotation-vector", "rotation vector"},
                             {Form::mrp, "mrp", "modified Rodrigues parameters"}};

Quat quaternion_of_form(Form form, const Vec& v) { return form == Form::mrp ? mrp_quaternion(v) : quaternion(v); }

Meaning converted(const FormOf& f, const Bound& b, const std::string& target, const Quantity& result,
                  const std::string& tail) {
  std::string id = b.backward ? target + "-to-" + f.id : std::string(f.id) + "-to-" + target;
  Meaning m = meaning(id, b.out[0].text + " = " + tail + " of the " + f.words + " " + b.in[0].text);
  term(m, b.in[0], turn("A", "B", f.form));
  term(m, b.out[0], result);
  return m;
}

void add_forms(Catalogue& c) {
  for (const FormOf& f : kForms)
    for (bool is_active : {true, false}) {
      c.add({.id = "turn-to-matrix",
             .in = {3},
             .out = {9},
             .eval =
                 [f, is_active](In i, Out o) {
                   Mat m = rotation(quaternion_of_form(f.form, vec(i[0])));
                   return put(is_active ? m : transpose(m), o[0]), true;
                 },
             .say =
                 [f, is_active](const Bound& b) {
                   Meaning m = converted(f, b, "matrix", sense(is_active), word(is_active) + " matrix");
                   m.equivalents.push_back(word(!is_active) + " ?B to ?A");
                   return m;
                 },
             .backward = true});
      for (bool last : {false, true})
        c.add({.id = "turn-to-quaternion",
               .in = {3},
               .out = {4},
               .eval =
                   [f, is_active, last](In i, Out o) {
                     Quat q = quaternion_of_form(f.form, vec(i[0]));
                     return put(is_active ? q : conjugate(q), last, o[0]), true;
                   },
               .say =
                   [f, is_active, last](const Bound& b) {
                     return converted(f, b, "quaternion", quaternion_of(sense(is_active), last),
                                      word(is_active) + " quaternion (qvq*, scalar " + (last ? "last)" : "first)"));
                   },
               .sameness = Sameness::up_to_sign,
               .backward = true});
    }
}

void add_small(Catalogue& c) {
  for (bool is_active : {true, false})
    c.add(
        {.id = "small-angle-matrix",
         .in = {3},
         .out = {9},
         .eval = [is_active](
                     In i, Out o) { return put(identity() + (is_active ? 1.0 : -1.0) * skew(vec(i[0])), o[0]), true; },
         .say =
             [is_active](const Bound& b) {
               Meaning m = meaning("small-angle-matrix", b.out[0].text + " = I " + (is_active ? "+" : "-") + " [" +
                                                             b.in[0].text + " x], " + word(is_active));
               Quantity q = turn("A", "B", Form::rotation_vector);
               q.small = true;
               term(m, b.in[0], q);
               term(m, b.out[0], sense(is_active));
               return m;
             }});
}

void add_axis_angle(Catalogue& c) {
  auto scaled = [](In i, bool is_active, bool degrees) {
    return ((is_active ? 1 : -1) * i[1][0] * (degrees ? kPi / 180 : 1)) * unit(vec(i[0]));
  };
  for (bool is_active : {true, false})
    for (bool degrees : {false, true})
      for (int target = 0; target < 3; ++target)
        c.add({.id = "axis-angle",
               .in = {3, 1},
               .out = {target ? 4 : 9},
               .eval =
                   [=](In i, Out o) {
                     Vec v = scaled(i, is_active, degrees);
                     if (target)
                       put(quaternion(v), target == 2, o[0]);
                     else
                       put(rotation(v), o[0]);
                     return true;
                   },
               .say =
                   [=](const Bound& b) {
                     std::string kind = target ? "quaternion" : "matrix";
                     Meaning m = meaning(b.backward ? kind + "-to-axis-angle" : "axis-angle-to-" + kind,
                                         b.out[0].text + " = " + word(is_active) + " " + kind + " of the turn about " +
                                             b.in[0].text + " by " + b.in[1].text + (degrees ? ", deg" : "") +
                                             (target == 0   ? ""
                                              : target == 1 ? ", qvq*, scalar first"
                                                            : ", qvq*, scalar last"));
                     term(m, b.in[1], {.kind = Kind::unit, .unit = degrees ? Unit::deg : Unit::rad});
                     term(m, b.out[0], target ? quaternion_of(sense(is_active), target == 2) : sense(is_active));
                     return m;
                   },
               .sameness = target ? Sameness::up_to_sign : Sameness::plain,
               .backward = true});
}

}  // namespace

void add_turns(Catalogue& c) {
  add_forms(c);
  add_small(c);
  add_axis_angle(c);
}

}  // namespace dextral::probe
