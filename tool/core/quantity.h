// What a variable holds, as a phrase says it.
//
// A Quantity is the value of one phrase: its kind, its frames and points, and
// its qualifiers. Every 3x3 matrix, pose, quaternion or rotation object is a
// two-point quantity M[rows, columns]: it takes components in `columns` and
// gives components in `rows`. Passive "A to B" is M[B, A]; active "A to B" is
// its transpose M[A, B]; active in F is M[F, F].
#pragma once

#include <compare>
#include <memory>
#include <optional>
#include <tuple>
#include <string>
#include <vector>

#include "core/frame.h"

namespace dextral {

enum class Kind {
  vector,          // in F
  position,        // from P to Q in F
  passive,         // passive A to B
  active,          // active A to B, or active in F (first == second)
  turn,            // turn A to B
  angles,          // angles SEQUENCE A to B
  angle_rates,     // angle rates SEQUENCE A to B
  rate,            // rate of B against A in F
  velocity,        // velocity of P against A in F
  acceleration,    // acceleration of P against A in F
  specific_force,  // specific force in F
  torque,          // torque about P in F
  along,           // along AXIS
  heading,         // angle from AXIS toward AXIS
  geodetic,        // geodetic latitude | longitude | height
  tensor,          // tensor in F [about P]
  covariance,      // covariance of PHRASE
  linear,          // linear A to B
  skew,            // skew in F
  chosen,          // in frame named by FIELD
  none,            // none
  unit,            // a unit alone
};

enum class Unit { unsaid, deg, rad };
enum class Turning { unsaid, moving, fixed };
enum class ScalarPlace { unsaid, first, last };
enum class Product { unsaid, hamilton, shuster };
enum class QuaternionMap { unsaid, qvq_star, q_star_vq };
enum class Layout { unsaid, row_major, column_major };
enum class Form { unsaid, rotation_vector, mrp, quaternion };

struct Quantity {
  Kind kind = Kind::none;
  Frame in;             // components in this frame
  Frame first, second;  // A and B of "A to B"; of rates: `first` against, `second` of
  std::string from_point, to_point;  // positions; `to_point` also of velocity P, torque about P, tensor about P
  std::string sequence;              // "321"
  std::string word;                  // axis of `along`, first axis of `heading`, geodetic item, FIELD of `chosen`
  std::string second_word;           // second axis of `heading`
  std::vector<std::string> stored;   // order in memory: roll pitch yaw
  Unit unit = Unit::unsaid;
  Turning turning = Turning::unsaid;
  ScalarPlace scalar = ScalarPlace::unsaid;
  Product product = Product::unsaid;
  QuaternionMap maps_by = QuaternionMap::unsaid;
  Layout layout = Layout::unsaid;
  Form form = Form::unsaid;
  std::optional<Hand> hand;
  Frame seen_from;
  bool row_vectors = false;
  bool small = false;
  bool increment = false;
  std::shared_ptr<const Quantity> of;  // covariance of PHRASE
};

bool operator==(const Quantity&, const Quantity&);

// The frames that unification sees. Empty names where the kind has none:
// an Euler triple or a turn has no frame that its components are in.
struct Frames {
  Frame rows, columns;
};
Frames frames(const Quantity&);

// `accept RULE because REASON`.
struct Acceptance {
  std::string rule;
  std::string reason;
  bool operator==(const Acceptance&) const = default;
};

}  // namespace dextral
